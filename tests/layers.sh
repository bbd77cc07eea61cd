#!/bin/sh
# House rules that grep can see: arrows run tui -> db -> ephem, each outside library has one home, the engine has no I/O, no clock, no state.
# Then the rules themselves are tried: one breach of each is planted in a copy and must be found. `layers.sh --objects DIR` looks at compiled
# objects too: nothing in the engine may be writable after loading.
set -u
libc='assert|ctype|dirent|errno|fcntl|float|inttypes|langinfo|limits|locale|math|poll|pwd|signal|stdarg|stdbool|stddef|stdint|stdio|stdlib|string|strings|time|unistd|wchar|wctype|pthread|termios|sys/[a-z]+'

# find_in WHAT FILES... -- PATTERN: every match is one breach, `WHAT: file:line:text`
find_in() {
	what=$1
	shift
	files=
	while [ "$1" != -- ]; do
		[ -f "$1" ] && files="$files $1"
		shift
	done
	# shellcheck disable=SC2086
	[ -z "$files" ] || grep -nHE -e "$2" $files | sed "s|^|$what: |"
}
existing() { for f in "$@"; do [ ! -f "$f" ] || echo "$f"; done; }
except() { # except NAME FILES...: the files without one
	name=$1
	shift
	for f in "$@"; do [ "$f" = "$name" ] || printf '%s ' "$f"; done
}

# shellcheck disable=SC2046
breaches() {
	ephem="ephem/*.[ch]" db="db/*.[ch]" tui="tui/*.[ch] tui/*/*.[ch]"
	find_in "the engine includes only itself and libc" $(except ephem/series_nova.c $ephem) -- '^ *# *include +(<|"[^e]|"e[^p])' |
		grep -vE "<($libc)\.h>"
	find_in "only series_nova.c includes libnova" $(except ephem/series_nova.c $ephem) $db $tui -- '<libnova'
	find_in "db includes db, ephem, libc and SQLite" $db -- '^ *# *include' | grep -vE "include +(\"(db|ephem)/|<($libc|sqlite3)\.h>)"
	find_in "tui includes tui, db, ephem and libc" $(except tui/parts/term.c $tui) -- '^ *# *include' |
		grep -vE "include +(\"(tui|db|ephem)/|<($libc)\.h>)"
	find_in "SQLite stays in db" $ephem $tui -- 'sqlite3_|sqlite3\.h'
	find_in "SQL stays in db" $ephem $tui -- '"(SELECT|INSERT INTO|UPDATE|DELETE FROM|CREATE TABLE|PRAGMA) '
	find_in "only term.c knows curses" $ephem $db $(except tui/parts/term.c $tui) -- '<n?curses|\b(initscr|newterm|wgetch|getch|mvaddstr|refresh)\('
	find_in "the engine has no input or output" $ephem -- '\b(fopen|freopen|fdopen|open|read|write|fread|fwrite|fgets|getline|printf|vprintf|fprintf|puts|fputs|putchar|perror|system|popen|remove|rename|unlink)\('
	find_in "the engine has no clock" $ephem -- '\b(time|clock|clock_gettime|gettimeofday|localtime(_r)?|gmtime(_r)?|mktime|strftime|tzset)\('
	find_in "the engine has no environment" $ephem -- '\b(getenv|setenv|putenv|setlocale|localeconv|getpwuid)\('
	find_in "the environment is read in env.c" $db $(except tui/env.c $tui) -- '\b(getenv|secure_getenv|getpwuid)\('
	find_in "the clock is read in env.c" $db $(except tui/env.c $tui) -- '\b(time|clock_gettime|gettimeofday|localtime(_r)?|gmtime(_r)?|mktime)\((NULL|&|CLOCK_REALTIME)'
	find_in "no zone but the site's" $ephem $db $tui -- '\b(setenv|putenv|tzset)\('
	# shellcheck disable=SC2086
	drawing=$(grep -lE '"tui/parts/grid\.h"' tui/parts/*.[ch] 2>/dev/null)
	find_in "pages draw into the grid" tui/pages/*.c $drawing -- '\b(printf|vprintf|fprintf|vfprintf|puts|fputs|putchar|fwrite|perror)\('
	find_in "pages read no files and no store rows" tui/pages/*.c -- '\b(fopen|fread|file_read|targets_load|sites_load|store_open)\('
	find_in "unbounded or error-blind calls" $ephem $db $tui -- '\b(strcpy|strcat|sprintf|vsprintf|gets|atoi|atol|atof|strtok|alloca)\('
	find_in "doubles are compared as doubles" tests/*/*.c -- 'assert_float_(not_)?equal'
	find_in "unfinished marks" $ephem $db $tui tests/*/*.c README.md -- '\b(TO''DO|FIX''ME|X''XX|HA''CK|not impl''emented|place''holder)\b'
	# shellcheck disable=SC2086
	existing $ephem $db $tui tests/*/*.[ch] | xargs awk '
		FNR == 1 && !/SPDX-License-Identifier: MIT/ { print "the first line names the licence: " FILENAME }
		FNR == 1 { included = 0 }
		FNR == 501 && FILENAME !~ /^tests/ { print "a file is read in one sitting: " FILENAME }
		/^#include/ && !included++ && FILENAME ~ /^(ephem|db|tui).*\.c$/ {
			own = FILENAME
			sub(/c$/, "h", own)
			if ((getline line <own) >= 0 && $0 != "#include \"" own "\"") print "a file includes its own header first: " FILENAME
			close(own)
		}'
	for f in *; do
		case $f in tui | ephem | db | tests | config-example | build | Makefile | README.md | LICENSE) ;;
		*) echo "top level holds nothing else: $f" ;;
		esac
	done
}

# Sections that can be written to must be empty in the engine. A table of const pointers lies in .data.rel.ro, which is closed after loading.
writable() {
	for o in "$1"/ephem/*.o; do
		size -A "$o" | awk -v o="$o" '($1 ~ /^\.(data|bss)(\.|$)/) && $1 !~ /^\.data\.rel\.ro/ && $2 > 0 { print "the engine has no state: " o " " $1 " " $2 " bytes" }'
	done
}

passed=0
failed=0
result() { # result NAME TEXT: no text is good
	if [ -z "$2" ]; then
		passed=$((passed + 1))
	else
		failed=$((failed + 1))
		printf 'FAILED: %s\n%s\n' "$1" "$2"
	fi
}

if [ "${1:-}" = --objects ]; then
	result "writable data in the engine" "$(writable "$2")"
	echo "$passed passed, $failed failed"
	[ "$failed" = 0 ]
	exit
fi

result "house rules" "$(breaches)"

copy=$(mktemp -d) || exit 1
trap 'rm -rf "$copy"' EXIT
# plant FILE TEXT RULE: the rule must find the text at the end of the file (of a new one: after its licence line)
plant() {
	rm -rf "$copy/tree" && mkdir -p "$copy/tree"
	cp -r ephem db tui tests Makefile README.md LICENSE "$copy/tree" 2>/dev/null
	mkdir -p "$copy/tree/${1%/*}"
	[ -f "$copy/tree/$1" ] || echo "${licence:-/* SPDX-License-Identifier: MIT */}" >"$copy/tree/$1"
	printf '%s\n' "$2" >>"$copy/tree/$1"
	if (cd "$copy/tree" && breaches) | grep -F "$3" | grep -qF "${4:-$1}"; then
		passed=$((passed + 1))
	else
		failed=$((failed + 1))
		echo "FAILED: planted in $1 and not found: $2"
	fi
}
plant ephem/planted.c '#include "db/store.h"' "the engine includes only itself"
plant ephem/planted.c '#include <curses.h>' "the engine includes only itself"
plant ephem/planted.h '#include "tui/zone.h"' "the engine includes only itself"
plant ephem/planted.c '#include <libnova/libnova.h>' "only series_nova.c includes libnova"
plant db/planted.c '#include "tui/zone.h"' "db includes"
plant db/planted.c '#include <ncurses.h>' "only term.c knows curses"
plant tui/pages/planted.c '#include <sqlite3.h>' "tui includes"
plant tui/pages/planted.c 'int f(void) { return sqlite3_step(0); }' "SQLite stays in db"
plant tui/commands/planted.c 'static const char *s = "SELECT name FROM target";' "SQL stays in db"
plant tui/pages/planted.c '#include <curses.h>' "only term.c knows curses"
plant tui/pages/planted.c 'void f(void) { printf("x"); }' "pages draw into the grid"
plant tui/pages/planted.c 'void f(void) { fopen("x", "r"); }' "pages read no files"
plant ephem/planted.c 'void f(void) { fopen("x", "r"); }' "no input or output"
plant ephem/planted.c 'void f(void) { printf("x"); }' "no input or output"
plant ephem/planted.c 'long f(void) { return time(0); }' "the engine has no clock"
plant ephem/planted.c 'char *f(void) { return getenv("X"); }' "the engine has no environment"
plant tui/pages/planted.c 'char *f(void) { return getenv("X"); }' "the environment is read in env.c"
plant tui/pages/planted.c 'long f(void) { return time(NULL); }' "the clock is read in env.c"
plant tui/zone.c 'void f(void) { setenv("TZ", "UTC", 1); }' "no zone but the site"
plant db/planted.c 'void f(char *a) { strcpy(a, "x"); }' "unbounded"
plant tests/unit/planted.c 'void f(void) { assert_float_''equal(1, 1, 1); }' "doubles are compared"
plant ephem/planted.c "/* TO""DO */" "unfinished marks"
plant db/text_clean.c "$(seq 500 | sed 's|.*|/* & */|')" "read in one sitting"
plant ephem/units.c '#include "ephem/err.h"' "includes its own header first"
licence='/* no licence */' plant ephem/planted.h 'int planted(void);' "names the licence"
plant scripts/planted.sh 'x' "top level holds nothing else" scripts

state=$(mktemp -d "$copy/XXXXXX") && mkdir "$state/ephem"
printf 'int planted = 1;\nstatic int hidden;\nint *f(void);\nint *f(void) { return &hidden; }\n' | gcc -x c -c - -o "$state/ephem/planted.o"
if [ "$(writable "$state" | wc -l)" = 2 ]; then
	passed=$((passed + 1))
else
	failed=$((failed + 1))
	echo "FAILED: planted state in an object and not found"
fi
echo "$passed passed, $failed failed"
[ "$failed" = 0 ]
