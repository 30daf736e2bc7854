#!/usr/bin/env bash
# Unpacks the next Debian release's Neovim 0.10, Helix and tree-sitter into a folder, with
# all libraries that they need, and prints the folder. Nothing of the running
# system is touched. Usage: next.sh
set -euo pipefail
. "$(dirname "$0")/common.sh"

RELEASE=trixie
PACKAGES=(neovim hx tree-sitter-cli)
ROOT="$CACHE/$RELEASE"

if [ "$(cat "$ROOT/complete" 2>/dev/null)" = "${PACKAGES[*]}" ]; then
  printf '%s\n' "$ROOT"
  exit
fi
command -v dpkg-deb >/dev/null || cannot "this is not a Debian system (no dpkg-deb)"

# The mirror is the one that the machine uses already.
mirror=$(sed -nE 's/^URIs:[[:space:]]*([^[:space:]]+debian\/?)[[:space:]]*$/\1/p; s/^deb[[:space:]]+(\[[^]]*\][[:space:]]+)?([^[:space:]]+debian\/?)[[:space:]].*/\2/p' \
  $(ls /etc/apt/sources.list /etc/apt/sources.list.d/* 2>/dev/null) | head -n 1)
[ -n "$mirror" ] || cannot "no Debian mirror in the machine's apt sources"

part="$ROOT.part"
rm -rf "$part"
mkdir -p "$part"/apt/{state/lists/partial,cache/archives/partial} "$part/root"
: >"$part/apt/status"
printf 'deb [signed-by=/usr/share/keyrings/debian-archive-keyring.gpg] %s %s main\n' "$mirror" "$RELEASE" >"$part/apt/sources.list"

# An empty status file makes apt fetch every library down to the C library.
apt=(apt-get -y
  -o Dir::Etc::sourcelist="$part/apt/sources.list" -o Dir::Etc::sourceparts=-
  -o Dir::State="$part/apt/state" -o Dir::State::status="$part/apt/status"
  -o Dir::Cache="$part/apt/cache" -o Debug::NoLocking=true
  -o APT::Sandbox::User=root -o APT::Architecture="$(dpkg --print-architecture)"
  -o Acquire::Languages=none)
quietly "${apt[@]}" update || cannot "package lists of Debian $RELEASE"
quietly "${apt[@]}" install --download-only --no-install-recommends "${PACKAGES[@]}" || cannot "packages of Debian $RELEASE: ${PACKAGES[*]}"
for package in "$part"/apt/cache/archives/*.deb; do
  dpkg-deb -x "$package" "$part/root"
done
rm -rf "$ROOT" "$part/apt"
mv "$part" "$ROOT"
printf '%s\n' "${PACKAGES[*]}" >"$ROOT/complete"
printf '%s\n' "$ROOT"
