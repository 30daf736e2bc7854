#!/usr/bin/env bash
# Installs VS Code for the browser (code-server) from npm and prints its
# entry script, to be run with the Node of node.sh. Its install scripts would
# compile native parts that are shipped ready-made, so they are left out and
# the inner package's dependencies are fetched here. Usage: code-server.sh
set -euo pipefail
here=$(cd "$(dirname "$0")" && pwd)
. "$here/common.sh"

VERSION=4.139.1
FOLDER="$CACHE/code-server-$VERSION"
if [ ! -e "$FOLDER/complete" ]; then
  PATH="$("$here/node.sh"):$PATH"
  part="$FOLDER.part"
  rm -rf "$part" "$FOLDER"
  mkdir -p "$part"
  install=(npm install --no-package-lock --no-audit --no-fund --ignore-scripts --omit=dev)
  quietly "${install[@]}" --prefix "$part" "code-server@$VERSION" || cannot "npm package code-server@$VERSION"
  inner="$part/node_modules/code-server/lib/vscode"
  (cd "$inner" && quietly "${install[@]}") || cannot "the packages inside code-server"
  mv "$part" "$FOLDER"
  : >"$FOLDER/complete"
fi
printf '%s\n' "$FOLDER/node_modules/code-server/out/node/entry.js"
