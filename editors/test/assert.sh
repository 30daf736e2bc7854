# Assertions for the tests that are shell scripts. Sourced, not run.

# pass and fail write one assertion each to the output of the run.
pass() { printf 'ok %s: %s\n' "$NAME" "$*" >>"$OUTPUT"; }
fail() { # WHAT SEEN
  printf 'FAILED %s: %s; seen:\n%s\n' "$NAME" "$1" "$(sed 's/^/    /' <<<"${2-}")" >>"$OUTPUT"
  failures=$((${failures:-0} + 1))
}

# wait_for tries a command until it succeeds, for up to 20 seconds.
wait_for() {
  local tries
  for ((tries = 0; tries < 100; tries++)); do
    "$@" && return
    sleep 0.2
  done
  return 1
}
