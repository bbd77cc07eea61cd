# Night sheets and plans as results: whole or not at all, in each format, told as of every other command (out.sh).
. tests/support/check.sh

db=$scratch/a.db night=2026-04-22 now=2026-04-22T20:00:00Z
"$WANE" import config-example/demo-targets.csv --db "$db" --now "$now" </dev/null >/dev/null 2>&1
"$WANE" site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --db "$db" --now "$now" >/dev/null 2>&1
"$WANE" plan "$night" --keep --db "$db" --now "$now" </dev/null >/dev/null 2>&1
check "a plan is kept" test $? = 0
mkdir "$scratch/d"
# whole FORMAT: whether standard input ends as that format does
whole() {
	case $1 in
	text) tail -n 1 | grep -q '[a-z]\.$' ;;
	csv) tail -c 1 | od -An -c | grep -q '\\n' ;;
	json) tail -n 1 | grep -qx '}' ;;
	ics) tail -n 1 | grep -q '^END:VCALENDAR' ;;
	html) tail -n 1 | grep -qx '</html>' ;;
	esac
}
run() { "$WANE" $command "$night" --db "$db" --now "$now" --format "$format" "$@" </dev/null 2>"$scratch/err"; }
one_line() { test "$(wc -l <"$scratch/err")" = 1 && grep -q "^wane: $1" "$scratch/err"; }
nothing_left() { ! find "$scratch/d" -name '.wane*' | grep -q .; }

for row in 'sheet text' 'sheet csv' 'sheet json' 'sheet ics' 'sheet html' 'plan text' 'plan json'; do
	command=${row% *} format=${row#* }
	file=$scratch/d/$command.$format
	run >"$scratch/result"
	check "$row: exit 0" test $? = 0
	check "$row: it ends as it should" whole "$format" <"$scratch/result"
	run --out "$file" >"$scratch/stdout"
	check "$row: --out: exit 0" test $? = 0
	check "$row: --out: nothing on standard output" test ! -s "$scratch/stdout"
	check "$row: --out: the same bytes" cmp -s "$scratch/result" "$file"
	check "$row: --out: readable by its owner at least" test -r "$file"

	# over another file only when told to
	echo mine >"$file"
	chmod 640 "$file"
	run --out "$file"
	check "$row: a file that exists: exit 1" test $? = 1
	check "$row: it is said what helps: $(cat "$scratch/err")" one_line '.*--force'
	check "$row: it is as it was" test "$(cat "$file")" = mine
	run --out "$file" --force
	check "$row: --force: exit 0" test $? = 0
	check "$row: --force: replaced" cmp -s "$scratch/result" "$file"
	check "$row: --force: with the mode that it had" test "$(stat -c %a "$file")" = 640
	ln -s "$command.$format" "$file.link"
	echo mine >"$file"
	run --out "$file.link"
	check "$row: a link to a file: exit 1 without --force" test $? = 1
	run --out "$file.link" --force
	check "$row: it stays a link" test -L "$file.link"
	check "$row: the file behind it is written" cmp -s "$scratch/result" "$file"

	# nowhere to write to
	run --out "$scratch/none/a" >"$scratch/stdout"
	check "$row: no such folder: exit 1" test $? = 1
	check "$row: in one line: $(cat "$scratch/err")" one_line '.*/none'
	run --out "$scratch/d"
	check "$row: a folder: exit 1" test $? = 1
	if [ "$(id -u)" = 0 ]; then shut=/sys; else shut=$scratch/shut && mkdir -p "$shut" && chmod 555 "$shut"; fi
	run --out "$shut/a.$format"
	check "$row: a folder that can't be written to: exit 1" test $? = 1
	check "$row: in one line: $(cat "$scratch/err")" one_line '.*/a\.'
	echo mine >"$file"
	(
		ulimit -f 1 # 512 or 1024 bytes
		run --out "$file" --force
	)
	check "$row: a file-size limit: exit 1" test $? = 1
	check "$row: in one line: $(cat "$scratch/err")" one_line '.*'
	check "$row: what was there is there" test "$(cat "$file")" = mine
	rm -f "$file.new"
	(
		ulimit -f 1
		run --out "$file.new"
	)
	check "$row: a file-size limit, a new file: exit 1" test $? = 1
	check "$row: none is made" test ! -e "$file.new"
	check "$row: nothing is left behind" nothing_left

	# standard output that takes nothing
	run >/dev/full
	check "$row: a full standard output: exit 1" test $? = 1
	check "$row: in one line: $(head -n 1 "$scratch/err")" one_line 'standard output: '
	run >&-
	check "$row: a closed standard output: exit 1" test $? = 1
	check "$row: in one line: $(head -n 1 "$scratch/err")" one_line 'standard output: '
	# a reader that has gone: ended by the signal as any filter is, without a word
	for try in "$command" night; do
		(
			sleep 0.1
			if [ "$try" = night ]; then
				"$WANE" night "$night" --db "$db" </dev/null 2>"$scratch/err"
			else
				run
			fi
			echo $? >"$scratch/code.$try"
		) | true
		check "$row: a closed pipe: nothing is said by $try" test ! -s "$scratch/err"
	done
	check "$row: a closed pipe: the status of every command" test "$(cat "$scratch/code.$command")" = "$(cat "$scratch/code.night")"
	check "$row: which is no success" test "$(cat "$scratch/code.$command")" != 0
	run --out "$db" --force
	check "$row: never over the database" grep -q 'is the database: a result never replaces it' "$scratch/err"
done
check "the store is sound" sh -c '"$1" check --db "$2" >/dev/null' - "$WANE" "$db"
finish
