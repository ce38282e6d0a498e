#!/usr/bin/env bash
# Runs the real Emacs on a demo file. Needs emacs (28 with eglot, or 29 and later) and wellposed on the PATH.
set -euo pipefail
here=$(cd "$(dirname "$0")" && pwd)
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
cp "$here/../demo.bayes" "$work/demo.bayes"
MODEL="$work/demo.bayes" WELLPOSED_EL="$here" timeout 90 emacs -Q --batch -l "$here/test.el"
