#!/usr/bin/env bash
# Installs npm packages into a folder of the cache and prints the folder.
# Usage: npm.sh FOLDER PACKAGE…
set -euo pipefail
here=$(cd "$(dirname "$0")" && pwd)
. "$here/common.sh"

folder="$CACHE/$1"
shift
if [ "$(cat "$folder/complete" 2>/dev/null)" != "$*" ]; then
  node=$("$here/node.sh")
  part="$folder.part"
  rm -rf "$part" "$folder"
  mkdir -p "$part"
  PATH="$node:$PATH" quietly npm install --prefix "$part" --no-package-lock --no-audit --no-fund --ignore-scripts "$@" || cannot "npm packages $*"
  printf '%s\n' "$*" >"$part/complete"
  mv "$part" "$folder"
fi
printf '%s\n' "$folder"
