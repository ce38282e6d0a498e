#!/usr/bin/env bash
# Builds the page into dist/: static files for any web server. Needs Go, Node and npm.
set -euo pipefail
cd "$(dirname "$0")"
mkdir -p dist
GOOS=js GOARCH=wasm go build -trimpath -ldflags='-s -w' -o dist/wellposed.wasm .
cp "$(go env GOROOT)/lib/wasm/wasm_exec.js" dist/
node demos.mjs
cd page
[ -d node_modules ] || npm ci --no-audit --no-fund
npm run --silent check
npm run --silent build
cp index.html page.css worker.js ../dist/
cd ../dist
gzip -9 -n -k -f wellposed.wasm app.js
wc -c wellposed.wasm wellposed.wasm.gz app.js app.js.gz
