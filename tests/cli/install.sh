# make install and make uninstall: what is put where, that it runs from there, and that nothing is left.
. tests/support/check.sh

dest=$scratch/dest
make -s install DESTDIR="$dest" PREFIX=/usr >"$scratch/log" 2>&1
check "make install: exit 0: $(tail -n 3 "$scratch/log")" test $? = 0
check "the program runs from there" sh -c '"$1" --version | grep -q "^wane "' - "$dest/usr/bin/wane"
for file in README.md LICENSE config-example/settings.ini config-example/demo-targets.csv; do
	check "$file is installed" cmp -s "$file" "$dest/usr/share/doc/wane/$file"
done
make -s uninstall DESTDIR="$dest" PREFIX=/usr >"$scratch/log" 2>&1
check "make uninstall: exit 0" test $? = 0
check "nothing is left" test -z "$(find "$dest" -type f)"
finish
