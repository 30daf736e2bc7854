# An editor in a terminal that tmux keeps: keys are sent as a user types them,
# and the screen is looked at. Sourced, behind common.sh and assert.sh.

terminal=(tmux -L "portlight-$$" -f /dev/null -u)
trap '"${terminal[@]}" kill-server 2>/dev/null || true' EXIT

open_terminal() { "${terminal[@]}" new-session -d -x 140 -y 50 "$*"; }
screen() { "${terminal[@]}" capture-pane -p; }
shows() { screen | grep -qF -- "$1"; }
hides() { ! shows "$1"; }
saved() { grep -qF -- "$2" "$1"; } # FILE TEXT

# keys sends keys by tmux's names; typed sends a text a character at a time.
keys() {
  local key
  for key in "$@"; do
    "${terminal[@]}" send-keys "$key"
    sleep 0.2
  done
}
typed() {
  local i
  for ((i = 0; i < ${#1}; i++)); do
    "${terminal[@]}" send-keys -l -- "${1:i:1}"
    sleep 0.05
  done
}
command() {
  typed ":$1"
  sleep 0.2
  keys Enter
}

assert() { # WHAT COMMAND…
  local what=$1
  shift
  if wait_for "$@"; then pass "$what"; else fail "$what" "$(screen)"; fi
}
