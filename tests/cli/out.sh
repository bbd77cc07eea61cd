# Results in files: whole or not at all, never over another file unasked; standard output that can't be written is a fault.
. tests/support/check.sh

run() { "$WANE" demo --format csv "$@" >"$scratch/stdout" 2>"$scratch/err" </dev/null; }
left_over() { find "$1" -name '.wane*' | grep -q .; }
mkdir "$scratch/d"
file=$scratch/d/night.csv

run --out "$file"
check "--out: exit 0" test $? = 0
check "nothing on standard output" test ! -s "$scratch/stdout"
"$WANE" demo --format csv </dev/null | cmp -s - "$file"
check "the file holds the result" test $? = 0
sum=$(cksum <"$file")
"$WANE" demo --format json --out "$file" 2>"$scratch/err" </dev/null
check "an existing file: exit 1" test $? = 1
check "the message names --force" grep -q -- '--force' "$scratch/err"
check "the existing file is as it was" test "$(cksum <"$file")" = "$sum"
chmod 640 "$file"
"$WANE" demo --format json --out "$file" --force 2>"$scratch/err" </dev/null
check "--force: exit 0" test $? = 0
check "--force replaces" test "$(cksum <"$file")" != "$sum"
check "a replaced file keeps its mode" test "$(stat -c %a "$file")" = 640
ln -s night.csv "$scratch/d/link.csv"
run --out "$scratch/d/link.csv" --force
check "a link is written through" test -L "$scratch/d/link.csv"
check "to the file behind it" test "$(cksum <"$file")" = "$sum"
run --out "$scratch/none/a.csv"
check "no such folder: exit 1" test $? = 1
run --out "$scratch/d"
check "a folder: exit 1" test $? = 1
mkfifo "$scratch/d/pipe"
run --out "$scratch/d/pipe" --force
check "a pipe is refused, not waited for" test $? = 1
check "nothing is left behind" sh -c '! find "$1" -name ".wane*" | grep -q .' - "$scratch/d"

# a file-size limit cuts the writing short
sum=$(cksum <"$file")
(
	ulimit -f 1
	run --out "$file" --force
)
check "a write error: exit 1" test $? = 1
check "the old file is whole" test "$(cksum <"$file")" = "$sum"
check "no half file is left" sh -c '! find "$1" -name ".wane*" | grep -q .' - "$scratch/d"

# left-overs of a process that was killed an hour ago are swept, those of others are not
dead=$scratch/d/.wane-out.4194305.0
: >"$dead"
touch -d '2 hours ago' "$dead"
: >"$scratch/d/.wane-out.$$.7"
touch -d '2 hours ago' "$scratch/d/.wane-out.$$.7"
run --out "$scratch/d/new.csv"
check "a stale file of a dead process is swept" test ! -e "$dead"
check "that of a living one is not" test -e "$scratch/d/.wane-out.$$.7"

# killed at any moment: the old file or the new one, never a piece of either
"$WANE" demo --format json </dev/null >"$scratch/json"
"$WANE" demo --format csv </dev/null >"$scratch/csv"
torn=0
for i in 1 2 3 4 5 6 7 8 9 10 11 12 13 14 15 16 17 18 19 20; do
	cp "$scratch/csv" "$scratch/d/kill.txt"
	"$WANE" demo --format json --out "$scratch/d/kill.txt" --force </dev/null 2>/dev/null &
	pid=$!
	sleep 0.0$(printf %02d "$i")
	kill -9 $pid 2>/dev/null
	wait $pid 2>/dev/null
	cmp -s "$scratch/d/kill.txt" "$scratch/csv" || cmp -s "$scratch/d/kill.txt" "$scratch/json" || torn=$((torn + 1))
done
check "20 kills: no torn file" test $torn = 0

"$WANE" demo </dev/null >/dev/full 2>"$scratch/err"
check "a full standard output: exit 1" test $? = 1
check "and one line about it" test "$(grep -c '^wane: standard output: ' "$scratch/err")" = 1
for command in '--version' 'night --help' 'season 2026-04-22 2026-04-23 --place 38.62,-109.36,2100 --format csv' 'target list --format json' \
	'site list' 'check' 'sky --place 38.62,-109.36,2100'; do
	# shellcheck disable=SC2086
	"$WANE" $command >/dev/full 2>"$scratch/err" </dev/null
	check "a full standard output: $command: exit 1" test $? = 1
	check "a full standard output: $command: one line about it" test "$(grep -c 'standard output' "$scratch/err")" = 1
done
"$WANE" --help >/dev/full 2>"$scratch/err"
check "--help on a full standard output: exit 1" test $? = 1
for command in demo 'season 2026-04-22 2026-04-23 --place 38.62,-109.36,2100' --version; do
	# shellcheck disable=SC2086
	"$WANE" $command </dev/null >&- 2>"$scratch/err"
	check "a closed standard output, a result due: $command: exit 1" test $? = 1
	check "and one line about it: $command" test "$(grep -c '^wane: standard output: ' "$scratch/err")" = 1
done
"$WANE" demo --out "$scratch/closed.txt" </dev/null >&- 2>"$scratch/err"
check "a closed standard output with --out: exit 0" test $? = 0
check "the result is in the file" test -s "$scratch/closed.txt"

# --- the files that are in use are never replaced
db=$scratch/w.db
"$WANE" site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --db "$db" >/dev/null 2>&1
printf '[limits]\npad = 3\n' >"$scratch/s.ini"
ln -s w.db "$scratch/w.link"
ln "$db" "$scratch/w.hard"
mkdir -p "$XDG_CONFIG_HOME/wane"
printf '[limits]\npad = 3\n' >"$XDG_CONFIG_HOME/wane/settings.ini"
sum=$(cat "$db" "$scratch/s.ini" "$XDG_CONFIG_HOME/wane/settings.ini" | cksum)
# in_use WHAT FILE ARGUMENTS...
in_use() {
	file=$1 target=$2
	shift 2
	"$WANE" "$@" --out "$target" --force >"$scratch/stdout" 2>"$scratch/err" </dev/null
	check "--out on $file: exit 1: $*" test $? = 1
	check "--out on $file: $(cat "$scratch/err")" grep -q "^wane: --out: .* is $file: a result never replaces it" "$scratch/err"
	check "--out on $file: all is as it was" test "$(cat "$db" "$scratch/s.ini" "$XDG_CONFIG_HOME/wane/settings.ini" | cksum)" = "$sum"
}
for path in "$db" "$scratch/d/../w.db" "$scratch/w.link" "$scratch/w.hard"; do
	in_use 'the database' "$path" night 2026-04-22 --db "$db"
	in_use 'the database' "$path" target list --db "$scratch/w.link"
done
in_use 'the journal of the database' "$db-journal" site list --db "$db"
in_use 'the journal of the database' "$db-journal" check --db "$scratch/w.link"
in_use 'the settings file' "$scratch/s.ini" season 2026-04-22 2026-04-22 --db "$db" --settings "$scratch/s.ini"
in_use 'the settings file' "$XDG_CONFIG_HOME/wane/settings.ini" demo
in_use 'the settings file' "$XDG_CONFIG_HOME/wane/settings.ini" clock 2461114.5 --from JD_TT --to JD_TDB
finish
