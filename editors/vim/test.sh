#!/usr/bin/env bash
# Runs the real Vim with ALE on a demo file. Needs vim, ALE (Debian: vim-ale) and wellposed on the PATH.
set -euo pipefail
here=$(cd "$(dirname "$0")" && pwd)
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
cp "$here/../demo.bayes" "$work/demo.bayes"
status=0
MODEL="$work/demo.bayes" RESULT="$work/result" timeout 90 vim -Nu NONE -i NONE -es \
	--cmd "set runtimepath^=$here,${ALE:-/usr/share/vim-ale}" --cmd 'runtime plugin/ale.vim' -S "$here/test.vim" </dev/null || status=$?
cat "$work/result"
exit $status
