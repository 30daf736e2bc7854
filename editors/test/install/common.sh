# Shared by the install scripts: where downloads are kept, and plain messages.
# Sourced, not run.

CACHE="${CACHE_HOME:-${XDG_CACHE_HOME:-$HOME/.cache}}/portlight-editors"
mkdir -p "$CACHE"

# cannot says why an editor cannot be had and ends the script with status 3,
# which editors/test/run reports as one failed assertion.
cannot() {
  printf 'cannot install: %s\n' "$*" >&2
  exit 3
}

# quietly runs a command and shows what it wrote only if it fails.
quietly() {
  local log status=0
  log=$(mktemp)
  "$@" >"$log" 2>&1 </dev/null || status=$?
  if [ "$status" != 0 ]; then
    printf '%s ended with status %s:\n' "$*" "$status" >&2
    tail -n 30 "$log" >&2
  fi
  rm -f "$log"
  return "$status"
}

# debian installs packages of this Debian release that are not there yet.
debian() {
  local missing=() package
  for package in "$@"; do
    dpkg-query -W -f '${Status}' "$package" 2>/dev/null | grep -q 'install ok installed' || missing+=("$package")
  done
  [ "${#missing[@]}" = 0 ] && return
  [ "$(id -u)" = 0 ] || cannot "the Debian packages ${missing[*]} are missing, and installing them needs root"
  export DEBIAN_FRONTEND=noninteractive
  local options=(-y -o DPkg::Lock::Timeout=600 --no-install-recommends)
  quietly apt-get install "${options[@]}" "${missing[@]}" && return
  # A machine that is new has no package lists, or old ones.
  quietly apt-get update -o DPkg::Lock::Timeout=600 || cannot "the Debian package lists cannot be fetched"
  quietly apt-get install "${options[@]}" "${missing[@]}" || cannot "Debian packages: ${missing[*]}"
}
