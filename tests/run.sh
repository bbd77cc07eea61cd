#!/bin/sh
# Runs the tests in stages, cheap ones first, and stops after a stage in which something failed. `run.sh` is `make check`;
# `run.sh asan|soak|golden` one part of it. A test is a cmocka program or a script that ends with `N passed, N failed`.
# The last line is `N passed, N failed` over all of them, the line above it what was skipped and why.
set -u
top=$(cd "$(dirname "$0")/.." && pwd) || exit 1
cd "$top" || exit 1
limit_s=${LIMIT_S:-240} # no test may hang the run
jobs=2

# --- one test: `run.sh --one RESULT PROGRAM`. RESULT gets `passed failed skipped`, RESULT.why the reasons, RESULT.log what it said.
if [ "${1:-}" = --one ]; then
	result=$2 program=$3
	home=$(mktemp -d) || exit 1
	trap 'rm -rf "$home"' EXIT
	export HOME="$home" XDG_DATA_HOME="$home/data" XDG_CONFIG_HOME="$home/config" XDG_STATE_HOME="$home/state"
	start=$(date +%s)
	case $program in
	*.sh) timeout "$limit_s" sh "$program" >"$result.log" 2>&1 </dev/null ;;
	*) timeout "$limit_s" "$program" >"$result.log" 2>&1 </dev/null ;;
	esac
	status=$?
	awk -v status="$status" '
		/^\[  PASSED  \] [0-9]+ test/ { passed = $4; seen = 1 }
		/^\[  FAILED  \] [0-9]+ test/ { failed = $4; seen = 1 }
		/^\[  SKIPPED \] [0-9]+ test/ { skipped = $4 }
		/^[0-9]+ passed, [0-9]+ failed$/ { passed = $1; failed = $3; seen = 1 }
		/^SKIP: / { reasons++ }
		END {
			if ((status != 0 && failed == 0) || !seen) failed++ # it died, or never came to its end
			print passed + 0, failed + 0, (skipped > reasons ? skipped : reasons + 0)
		}' "$result.log" >"$result"
	sed -n 's/^SKIP: //p' "$result.log" >"$result.why"
	read -r passed failed skipped <"$result"
	took=$(($(date +%s) - start))
	line="$program: $passed passed"
	[ "$skipped" = 0 ] || line="$line, $skipped skipped"
	[ "$took" -lt 5 ] || line="$line (${took} s)"
	if [ "$failed" = 0 ]; then
		echo "ok   $line"
	else
		reason="exit status $status"
		[ "$status" != 124 ] || reason="stopped after $limit_s s"
		printf 'FAIL %s, %s failed (%s)\n%s\n' "$line" "$failed" "$reason" "$(tail -n 60 "$result.log")"
	fi
	exit 0
fi

results=$(mktemp -d) || exit 1
trap 'rm -rf "$results"' EXIT
trap 'exit 1' HUP INT TERM
unset NO_COLOR LINES COLUMNS ESCDELAY MAKEFLAGS MFLAGS
export LC_ALL=C.UTF-8 TZ=UTC WANE="$top/build/wane" WANE_TOP="$top"
# a locale with a decimal comma, made here: few machines have one, and numbers must not care
if [ ! -d build/locale/de_DE.UTF-8 ] && command -v localedef >/dev/null 2>&1; then
	mkdir -p build/locale && localedef -i de_DE -f UTF-8 build/locale/de_DE.UTF-8 >/dev/null 2>&1
fi
[ ! -d build/locale/de_DE.UTF-8 ] || export LOCPATH="$top/build/locale"
if [ -n "${WANE_DATA:-}" ] && [ ! -d "$WANE_DATA" ]; then
	echo "DATA: no such folder: $WANE_DATA" >&2
	exit 2
fi

total() { # passed, failed and skipped over all tests so far
	cat "$results"/*.result 2>/dev/null | awk '{ p += $1; f += $2; s += $3 } END { print p + 0, f + 0, s + 0 }'
}
finish() {
	read -r passed failed skipped <<-EOT
		$(total)
	EOT
	why=$(cat "$results"/*.why 2>/dev/null | sort | uniq -c | awk '{ n = $1; $1 = ""; printf "%s%s%s", sep, substr($0, 2), (n > 1 ? " (" n ")" : ""); sep = "; " }')
	echo "$skipped skipped: ${why:-nothing}"
	echo "$passed passed, $failed failed"
	[ "$failed" = 0 ]
	exit
}
stage() { # stage NAME PROGRAM...: those that exist, `jobs` at a time
	name=$1
	shift
	echo "-- $name"
	for program in "$@"; do
		[ -f "$program" ] && printf '%s\n' "$results/$(printf %s "$program" | tr '/' '_').result" "$program"
	done | xargs -r -n 2 -P "$jobs" sh "$top/tests/run.sh" --one
	read -r _ failed _ <<-EOT
		$(total)
	EOT
	[ "$failed" = 0 ] || {
		echo "stopped after: $name"
		finish
	}
}
build() { # build NAME ARGUMENTS OF MAKE...: counts as a failure when it fails
	name=$1
	shift
	echo "-- build: $name"
	make --no-print-directory -s -j2 "$@" || {
		echo "0 1 0" >"$results/build.result"
		echo "stopped after: build: $name"
		finish
	}
}
programs() { # programs VARIANT FOLDER...: what the Makefile makes of tests/FOLDER/*.c
	variant=$1
	shift
	for folder in "$@"; do
		for source in tests/"$folder"/*.c; do
			[ ! -f "$source" ] || echo "build/obj-$variant/${source%.c}"
		done
	done
}
cli_scripts() { # those of tests/cli that do, or do not, begin with `refusals`
	for script in tests/cli/*.sh; do
		case $1:${script##*/} in
		refusals:refusals*) echo "$script" ;;
		others:refusals*) ;;
		others:*) echo "$script" ;;
		esac
	done
}
engine_state() { # a stage of its own, for its argument
	echo "-- the engine holds no state"
	sh tests/layers.sh --objects build/obj-release >"$results/state.log"
	cat "$results/state.log"
	awk 'END { print $1, $3, 0 }' "$results/state.log" >"$results/state.result"
	grep -q ', 0 failed' "$results/state.log" || finish
}
sanitized() {
	build "clang, sanitizers" V=asan tests
	# shellcheck disable=SC2046
	export WANE="$top/build/obj-asan/wane"
	stage "clang, address and undefined-behaviour sanitizers" $(programs asan unit reference property screen faults)
}

# shellcheck disable=SC2046
case ${1:-check} in
check)
	stage "layers" tests/layers.sh
	build "gcc" all tests
	engine_state
	stage "unit, reference and property tests" $(programs release unit reference property)
	stage "contract and README" $(cli_scripts others)
	stage "screens and journeys" $(programs release screen) tests/screen/*.sh
	stage "refusals" $(cli_scripts refusals)
	stage "faults" $(programs release faults) tests/faults/*.sh
	sanitized
	;;
asan) sanitized ;;
soak)
	build "gcc" all tests
	jobs=1
	export LIMIT_S=3600
	stage "soak" tests/soak/*.sh
	;;
golden)
	build "gcc" all tests
	export WANE_GOLDEN=update
	stage "screens, rewritten" $(programs release screen) tests/screen/*.sh
	;;
*)
	echo "usage: run.sh [asan|soak|golden]" >&2
	exit 2
	;;
esac
finish
