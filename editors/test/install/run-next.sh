#!/usr/bin/env bash
# Runs a program of the unpacked release, with that release's own libraries.
# Usage: run-next.sh nvim|hx|tree-sitter ARGUMENT…
set -euo pipefail
here=$(cd "$(dirname "$0")" && pwd)
root=$("$here/next.sh")/root
program=$1
shift
case "$program" in
nvim)
  export VIMRUNTIME="$root/usr/share/nvim/runtime"
  set -- --cmd "set runtimepath^=$root/usr/lib/nvim" "$@" # its parsers, which hovers need
  ;;
hx) export HELIX_RUNTIME="$root/usr/lib/hx/runtime" ;;
tree-sitter) ;;
*)
  echo "run-next.sh: $program is not one of nvim, hx, tree-sitter" >&2
  exit 2
  ;;
esac
loader=$(ls "$root"/usr/lib/*/ld-linux-*.so.* | head -n 1)
exec "$loader" --library-path "$(dirname "$loader")" "$root/usr/bin/$program" "$@"
