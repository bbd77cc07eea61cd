# The README's examples, as they stand there: every line of its `sh` blocks is run in one clean home, in order, and has to succeed and to say
# something or to write its file.
. tests/support/check.sh

top=$PWD
mkdir "$scratch/bin" "$scratch/work"
ln -s "$WANE" "$scratch/bin/wane"
cp -r config-example "$scratch/work"
PATH=$scratch/bin:$PATH
awk '/^```sh$/ { inside = 1; next } /^```/ { inside = 0 } inside && NF' README.md >"$scratch/examples"
cd "$scratch/work" || exit 1

example() { # one line of the README
	sh -c "$1" >"$scratch/out" 2>"$scratch/err" </dev/null || {
		cat "$scratch/err"
		return 1
	}
	written=${1##* --out }
	if [ "$written" != "$1" ]; then [ -s "${written%% *}" ]; else [ -s "$scratch/out" ] || [ -s "$scratch/err" ]; fi
}
while read -r line; do
	check "README: $line" example "$line"
done <"$scratch/examples"
check "README has at least ten examples" test "$(wc -l <"$scratch/examples")" -ge 10

# what the first steps promise
wane night 2026-04-22 --format csv >"$scratch/night.csv" 2>/dev/null
check "the demonstration's night is a good one" test "$(grep -c 'Tern Hill' "$scratch/night.csv")" -ge 12
sed 's/^#\([a-z0-9]\)/\1/' "$top/config-example/settings.ini" >settings.ini
for file in "$top/config-example/settings.ini" settings.ini; do
	wane night 2026-04-22 --format csv --settings "$file" >"$scratch/again.csv" 2>"$scratch/err"
	check "settings that repeat what is built in change nothing: ${file##*/}" test -s "$scratch/again.csv"
done
finish
