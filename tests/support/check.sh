# Sourced by test scripts: counts checks and prints the line that tests/run.sh adds up.
#   . tests/support/check.sh
#   check "what is claimed" test "$a" = "$b"
#   skip "why"
#   finish
# A script runs from the top folder; WANE is the program; HOME and the XDG folders are empty ones of its own; `scratch` is a folder of its own.
passed=0
failed=0
WANE=${WANE:-$PWD/build/wane}
scratch=${TMPDIR:-/tmp}/wane-test.$$
mkdir -m 700 "$scratch" || exit 1
trap 'rm -rf "$scratch"' EXIT
trap 'exit 1' HUP INT TERM
export HOME="$scratch" XDG_DATA_HOME="$scratch/data" XDG_CONFIG_HOME="$scratch/config" XDG_STATE_HOME="$scratch/state"
unset NO_COLOR LINES COLUMNS ESCDELAY
export LC_ALL=C.UTF-8 TZ=UTC

check() {
	what=$1
	shift
	if "$@"; then
		passed=$((passed + 1))
	else
		failed=$((failed + 1))
		echo "FAILED: $what"
	fi
}
skip() {
	echo "SKIP: $1"
}
finish() {
	echo "$passed passed, $failed failed"
	[ "$failed" = 0 ]
	exit
}
