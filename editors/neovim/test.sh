#!/usr/bin/env bash
# Runs the real Neovim on a demo file. Needs nvim and wellposed on the PATH.
set -euo pipefail
here=$(cd "$(dirname "$0")" && pwd)
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
cp "$here/../demo.bayes" "$work/demo.bayes"
MODEL="$work/demo.bayes" timeout 90 nvim --headless --clean --cmd "set runtimepath^=$here" -S "$here/test.lua"
