#!/bin/sh
# Debian packages that wane needs: `deps.sh build|tests|all` installs what is missing of them, and does nothing when all is there.
# build: the program; tests: `make check`; all: static analysis too.
set -u
build="gcc make libc6-dev libncurses-dev libnova-dev libsqlite3-dev tzdata"
tests="libcmocka-dev liberfa-dev clang libclang-rt-dev locales casacore-data-jpl-de405 libical-dev python3-icalendar"
analysis="clang-tidy cppcheck valgrind"
case "${1:-all}" in
build) wanted=$build ;;
tests) wanted="$build $tests" ;;
all) wanted="$build $tests $analysis" ;;
*)
	echo "usage: deps.sh build|tests|all" >&2
	exit 2
	;;
esac

# Without dpkg (another system): is what the compiler needs there? Programs are found by name.
present_elsewhere() {
	printf '#include <curses.h>\n#include <libnova/libnova.h>\n#include <sqlite3.h>\nint main(void) { return 0; }\n' |
		gcc -x c -fsyntax-only - 2>/dev/null || return 1
	[ "$1" = build ] && return 0
	printf '#include <stdarg.h>\n#include <stddef.h>\n#include <stdint.h>\n#include <setjmp.h>\n#include <cmocka.h>\n#include <erfa.h>\n#include <libical/ical.h>\n' |
		gcc -x c -fsyntax-only - 2>/dev/null || return 1
	command -v clang >/dev/null
}

if command -v dpkg-query >/dev/null 2>&1; then
	missing=
	for package in $wanted; do
		[ "$(dpkg-query -W -f '${db:Status-Status}' "$package" 2>/dev/null)" = installed ] || missing="$missing $package"
	done
else
	missing=$wanted
	present_elsewhere "${1:-all}" && missing=
fi
[ -z "$missing" ] && exit 0

if ! command -v apt-get >/dev/null 2>&1; then
	echo "wane needs these Debian packages, or what they are called here: $missing" >&2
	exit 1
fi
root=
if [ "$(id -u)" != 0 ]; then
	if ! command -v sudo >/dev/null 2>&1; then
		echo "wane needs these packages; install them as root: apt-get install$missing" >&2
		exit 1
	fi
	root=sudo
fi
echo "installing:$missing" >&2
# an outdated list of packages is no reason to stop: the installation itself says whether it worked
$root apt-get update >/dev/null || echo "apt-get update failed; trying with the lists that are here" >&2
# shellcheck disable=SC2086
$root env DEBIAN_FRONTEND=noninteractive apt-get install -y --no-install-recommends $missing >&2
