# What is wrong on the command line, in the settings file and in tables: exit code, a line that says where and what, and nothing changed.
. tests/support/check.sh

db=$scratch/a.db
"$WANE" site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --db "$db" >/dev/null 2>&1
"$WANE" site add 'Tern South' --place -30.1,-70.8,2200 --zone America/Santiago --db "$db" >/dev/null 2>&1
"$WANE" import config-example/demo-targets.csv --db "$db" >/dev/null 2>&1
sum=$(cksum <"$db")

# refuse CODE TEXT ARGUMENTS...: exit code, text in a line of standard error, empty standard output, the store as it was
refuse() {
	code=$1 text=$2
	shift 2
	"$WANE" "$@" --db "$db" >"$scratch/out" 2>"$scratch/err" </dev/null
	got=$?
	check "exit $code (got $got): $*" test "$got" = "$code"
	check "\"$text\" said of: $*: $(head -n 1 "$scratch/err")" grep -qF -- "$text" "$scratch/err"
	check "every line begins with wane: $*" sh -c '! grep -vq "^wane: [^:]*: " "$1"' - "$scratch/err"
	check "no result: $*" test ! -s "$scratch/out"
	check "the store is as it was: $*" test "$(cksum <"$db")" = "$sum"
}

# --- the command line
refuse 2 'subcommand: unknown (got "nihgt", did you mean night' nihgt
refuse 2 '--sun-limti: unknown option; did you mean --sun-limit?' night --sun-limti -12
refuse 2 '--frobnicate: unknown option' night --frobnicate
refuse 2 '--bogus: unknown option (see wane --help)' night --bogus
refuse 2 '--pda: unknown option; did you mean --pad?' night --pda 2
refuse 2 '--from: unknown option of night' night --from JD_UTC
refuse 2 '--pad: unknown option of import' import x.csv --pad 2
refuse 2 'an argument too many (got "2026-04-23"' night 2026-04-22 2026-04-23 --site 'Tern Hill'
refuse 2 'TO is missing' season 2026-04-22
refuse 2 'FROM is missing' season
refuse 2 'TO: is before FROM' season 2026-04-22 2026-04-21 --site 'Tern Hill'
refuse 2 'DATE: 2026-02-30 does not exist' night 2026-02-30
refuse 2 'DATE: 2100-02-29 does not exist' night 2100-02-29
refuse 2 'DATE: out of range' night 1800-01-01
refuse 2 'DATE: out of range' night 2101-01-01
refuse 2 'DATE: ' night 9999-01-01
refuse 2 'DATE: not a date (got "26-3-1"' night 26-3-1
refuse 2 'DATE: not a date (got "03/04/2026"' night 03/04/2026
refuse 2 'FROM: month 13 of 2026-13-01' season 2026-13-01 2026-04-22
refuse 2 '--at: ' sky --at tomorrow --site 'Tern Hill'
refuse 2 '--now: ' night --now later --site 'Tern Hill'
refuse 2 '--format: no such format here (got "xml", expected text, csv, json)' night --format xml
refuse 2 '--format: no such format here (got "csv"' sky --format csv
refuse 2 '--sun-limit: out of range (got "1", expected -30 to 0)' night --sun-limit 1
refuse 2 '--alt-limit: out of range' night --alt-limit 90.5
refuse 2 '--moon-limit: out of range' night --moon-limit -1
refuse 2 '--airmass-limit: out of range' night --airmass-limit 0.5
refuse 2 '--baseline: out of range' night --baseline 721
refuse 2 '--pad: out of range' night --pad 11
refuse 2 '--error-scale: out of range' night --error-scale 0.05
refuse 2 '--ut1-utc: out of range' night --ut1-utc 1
refuse 2 '--min-chance: out of range' night --min-chance 1.5
refuse 2 '--kind: no such kind (got "eclipse"' night --kind eclipse
refuse 2 '--pad: ' night --pad 1,5
refuse 2 '--pad: ' night --pad 0x1p1
refuse 2 '--pad: ' night --pad inf
refuse 2 '--place: latitude: out of range' night --place 91,0,0
refuse 2 '--place: longitude: out of range' night --place 0,400,0
refuse 2 '--place: height: out of range' night --place 0,0,9500
refuse 2 '--place: longitude: a sign and a letter' night --place 38,-109.4W,0
refuse 2 '--place: not a place' night --place 38.62,-109.36
refuse 2 '--radec: RA: ' sky --radec 24:00:00,10:00:00 --site 'Tern Hill'
refuse 2 '--radec: Dec: ' sky --radec 10:00:00,91:00:00 --site 'Tern Hill'
refuse 2 '--radec: not a direction' sky --radec 150 --site 'Tern Hill'
refuse 2 '--site: the value is empty' night --site ''
refuse 2 'no such site (got "Nowhere", expected one of: Tern Hill, Tern South)' night --site Nowhere
refuse 2 'night takes one site or place' night --site 'Tern Hill' --site 'Tern South'
refuse 2 '--from: a scale is missing' clock 2461114.5 --to JD_TT
refuse 2 '--to: not a time scale (got "JD_ABC"' clock 2461114.5 --from JD_UTC --to JD_ABC
refuse 2 '--from: not a whole scale (got "BJD"' clock 2461114.5 --from BJD --to JD_UTC
refuse 2 'VALUE: ' clock noon --from JD_UTC --to JD_TT
refuse 2 'VALUE: ' clock 2461114.5 --from UTC --to JD_TT
refuse 2 'VALUE: is missing' clock --from JD_UTC --to JD_TT
refuse 2 'more than one star is named' sky 'Tern 14 b' --radec 150,10 --site 'Tern Hill'
refuse 2 'no such verb (got "lst"' target lst
refuse 2 'NAME: is missing' site show
refuse 2 'field: unknown (got "perid_d", did you mean period_d)' target set 'Tern 14 b' perid_d=3
refuse 2 'field: no value (got "period_d", expected FIELD=VALUE)' target set 'Tern 14 b' period_d
refuse 2 'period_d: given twice' target set 'Tern 14 b' period_d=3 period_d=4
refuse 2 'name: given twice' target add 'Tern 950 b' --radec 1,1 name='Tern 951 b'
refuse 2 'site: nothing to set' site set 'Tern Hill'
refuse 2 '--at: a date without a time (got "2026-04-22", expected YYYY-MM-DDTHH:MM' sky --at 2026-04-22 --site 'Tern Hill'
refuse 2 '--now: a date without a time' night --now 2026-04-22 --site 'Tern Hill'
refuse 2 'an argument too many (got ")", expected wane check)' check ')'
refuse 2 '--place: is missing' site add 'Tern North'
refuse 2 'name: ' site add "$(printf 'a\033b')" --place 1,1,1

# --- what can't be met
refuse 1 'site: several are stored, choose one with --site (Tern Hill, Tern South)' night
refuse 1 'target: no such target is stored (got "Tern 999 b"' sky 'Tern 999 b' --site 'Tern Hill'
refuse 1 'target: no such target is stored (got "Tern 999 b"' night --target 'Tern 999 b' --site 'Tern Hill'
refuse 2 'telescope: none is stored at Tern Hill (got "Big"' night --telescope Big --site 'Tern Hill'
refuse 1 'direction: light time needs one' clock 2461114.5 --from JD_UTC --to BJD_TDB
refuse 1 'site: "tern-hill" exists already' site add 'tern-hill' --place 1,1,1
refuse 1 'site: no such site is stored' site remove Nowhere
refuse 1 '--zone: ' site add 'Tern North' --place 1,1,1 --zone Europe/Madird
refuse 1 '--zone: ' site add 'Tern North' --place 1,1,1 --zone ../../etc/passwd
for zone in posixrules posix/America/Denver right/America/Denver localtime tzdata.zi zone.tab; do
	refuse 1 "--zone: not a time zone's name (got \"$zone\"" site add 'Tern North' --place 1,1,1 --zone "$zone"
done
refuse 1 'time_scale: not a time scale (got "foo", expected BJD_TDB, HJD_UTC, JD_UTC and the like' target add 'Tern 950 b' --radec 1,1 time_scale=foo
refuse 1 'exists already' target add 'TERN-14 B' --radec 1,1
refuse 1 'ra_deg: missing' target add 'Tern 999 b'
refuse 1 'period_d: ' target set 'Tern 14 b' period_d=-3
refuse 1 'period_d: ' target set 'Tern 14 b' period_d=soon
refuse 1 't0_jd: ' target set 'Tern 14 b' t0_jd=59000.5
refuse 1 'dec_deg: ' target set 'Tern 14 b' dec_deg=91
refuse 1 'target: no such target is stored' target remove 'Tern 999 b'
refuse 1 'none.csv: No such file' import none.csv
refuse 1 'this is a folder' import "$scratch"
refuse 1 'terminal: standard input and output must be a terminal'

# a name with control characters is never shown raw
"$WANE" sky "$(printf 'a\033[31mb\007')" --site 'Tern Hill' --db "$db" >"$scratch/out" 2>"$scratch/err"
check "no control character reaches the terminal" sh -c '! LC_ALL=C grep -q "[[:cntrl:]]" "$1"' - "$scratch/err"
check "it is shown as what it is" grep -qF '\x1b' "$scratch/err"

# --- a site of which a byte was changed by another hand is left out, and said: it may be another place
cp "$db" "$scratch/bad.db"
LC_ALL=C sed -i 's|America/Santiago|America/Sxntiago|' "$scratch/bad.db"
"$WANE" site list --db "$scratch/bad.db" >"$scratch/out" 2>"$scratch/err"
check "a damaged site is named" grep -q "^wane: store: $scratch/bad.db: the checksum of site Tern South is wrong: left out" "$scratch/err"
check "the others are listed" test "$(cut -d: -f1 "$scratch/out")" = 'Tern Hill'

# --- the settings file: file, line, column, key
settings() {
	code=$1 text=$2
	printf '%b' "$3" >"$scratch/s.ini"
	"$WANE" night 2026-04-22 --site 'Tern Hill' --settings "$scratch/s.ini" --db "$db" >"$scratch/out" 2>"$scratch/err"
	got=$?
	check "settings: exit $code (got $got): $3" test "$got" = "$code"
	check "settings: $text: $(head -n 1 "$scratch/err")" grep -qF -- "wane: $scratch/s.ini:$text" "$scratch/err"
}
settings 1 '2:17: sun_limit_deg: out of range (got "12", expected -30 to 0)' '[limits]\nsun_limit_deg = 12\n'
settings 1 '2:1: sun_limt_deg: unknown key (got "sun_limt_deg", did you mean sun_limit_deg?)' '[limits]\nsun_limt_deg = -12\n'
settings 1 '3:1: pad: given twice (got "pad", expected each key once' '[limits]\npad = 2\npad = 3\n'
settings 1 '1:1: section: never closed' '[limits\n'
settings 1 '1:2: section: unknown section (got "limts", did you mean limits?)' '[limts]\npad = 2\n'
settings 1 '2:1: 2029-02-14: not the first of a month' '[leap_seconds]\n2029-02-14 = 38\n'
settings 1 '2:8: value: the quote is never closed' '[run]\nsite = "\n'
refuse 1 'this is a folder' night --settings "$scratch" --site 'Tern Hill'
printf '[run]\nsite = "Tern West"\n' >"$scratch/s.ini"
refuse 1 'settings: the site "Tern West" of the settings file is not stored' night --settings "$scratch/s.ini"

# --- tables: the bad row alone is refused; --strict refuses the file
head='name,ra_deg,dec_deg,t0_jd,t0_err_d,time_scale,period_d,period_err_d'
good='Tern 901 b,150,10,2461000.5,0.001,BJD_TDB,3,0.00001'
# row LINE:COLUMN: FIELD, ROW: refused with its place while the good row before it would be taken
row() {
	place=$1
	printf '%s\n%s\n%b\n' "$head" "$good" "$2" >"$scratch/t.csv"
	"$WANE" import "$scratch/t.csv" --dry-run --db "$db" >"$scratch/out" 2>"$scratch/err"
	check "row: exit 1 (got $?): $2" test $? = 1
	check "row: $place: $(head -n 1 "$scratch/err")" grep -qF -- "wane: $scratch/t.csv:$place" "$scratch/err"
	check "row: counted: $2" test "$(cat "$scratch/out")" = "2 read, 1 new, 0 changed, 0 same, 1 refused"
	"$WANE" import "$scratch/t.csv" --strict --db "$db" >"$scratch/out" 2>"$scratch/err"
	check "row: --strict: exit 1: $2" test $? = 1
	check "row: --strict changes nothing: $2" test "$(cksum <"$db")" = "$sum"
}
row '3:12: ra_deg: ' 'Tern 902 b,361,10,2461000.5,0.001,BJD_TDB,3,0.00001'
row '3:12: ra_deg: ' 'Tern 902 b,24:00:00,10,2461000.5,0.001,BJD_TDB,3,0.00001'
row '3:12: ra_deg: ' 'Tern 902 b,,10,2461000.5,0.001,BJD_TDB,3,0.00001'
row '3:16: dec_deg: ' 'Tern 902 b,150,-91,2461000.5,0.001,BJD_TDB,3,0.00001'
row '3:19: t0_jd: ' 'Tern 902 b,150,10,59000.5,0.001,BJD_TDB,3,0.00001'
row '3:19: t0_jd: ' 'Tern 902 b,150,10,nan,0.001,BJD_TDB,3,0.00001'
row '3:43: period_d: ' 'Tern 902 b,150,10,2461000.5,0.001,BJD_TDB,0,0.00001'
row '3:43: period_d: ' 'Tern 902 b,150,10,2461000.5,0.001,BJD_TDB,0x3,0.00001'
row '3:29: t0_err_d: ' 'Tern 902 b,150,10,2461000.5,-0.001,BJD_TDB,3,0.00001'
row '3:45: period_err_d: ' 'Tern 902 b,150,10,2461000.5,0.001,BJD_TDB,3,-1'
row '3:1: name: ' ',150,10,2461000.5,0.001,BJD_TDB,3,0.00001'
row '3:1: name: ' 'Tern\0033 902,150,10,2461000.5,0.001,BJD_TDB,3,0.00001'
row '3:1: name: ' 'Tern \0342\0200\0256902,150,10,2461000.5,0.001,BJD_TDB,3,0.00001'

row '3:11: row: a NUL byte' 'Tern 902 b\0000,150,10,2461000.5,0.001,BJD_TDB,3,0.00001'
row '3:5: row: a quote inside a cell' 'Tern" 902 b,150,10,2461000.5,0.001,BJD_TDB,3,0.00001'
row '3:13: row: text after the closing quote' '"Tern 902 b"x,150,10,2461000.5,0.001,BJD_TDB,3,0.00001'
row '3:12: ra_deg: ' 'Tern 902 b,1\0033[31m,10,2461000.5,0.001,BJD_TDB,3,0.00001'

# a quote that is never closed refuses the file, and the reason is said once
printf '%s\n%s\n"Tern 902 b,1\n' "$head" "$good" >"$scratch/t.csv"
"$WANE" import "$scratch/t.csv" --db "$db" >"$scratch/out" 2>"$scratch/err"
check "an unclosed quote: exit 1" test $? = 1
check "an unclosed quote: where" grep -qF "wane: $scratch/t.csv:3:1: row: the quote that opens this cell is never closed (got " "$scratch/err"
check "an unclosed quote: said once" test "$(grep -c 'never closed' "$scratch/err")" = 1
printf 'name,ra_deg,dec_deg,perid_d\nTern 902 b,1,1,3\n' >"$scratch/t.csv"
"$WANE" import "$scratch/t.csv" --dry-run --db "$db" >"$scratch/out" 2>"$scratch/err"
check "an unknown column: which may be meant" grep -qF "wane: $scratch/t.csv:1:21: column: unknown, left out (got \"perid_d\", did you mean period_d?)" "$scratch/err"
printf '%s\n' "$head" >"$scratch/t.csv"
"$WANE" import "$scratch/t.csv" --dry-run --db "$db" >"$scratch/out" 2>/dev/null
check "a header alone: exit 0" test $? = 0

# the first 20, then a count
{
	echo "$head"
	i=0
	while [ $i -lt 30 ]; do
		echo "Tern 9$i b,999,10,,,,,"
		i=$((i + 1))
	done
} >"$scratch/t.csv"
"$WANE" import "$scratch/t.csv" --db "$scratch/new.db" >"$scratch/out" 2>"$scratch/err"
check "all refused: exit 1" test $? = 1
check "twenty places" test "$(grep -c "^wane: $scratch/t.csv:" "$scratch/err")" = 20
check "then a count" grep -q '^wane: more: 10 more not shown (10 refused, 0 doubtful)' "$scratch/err"
check "nothing to store makes no store" test ! -e "$scratch/new.db"

# --- setting what is set already writes nothing
"$WANE" target set 'Tern 14 b' mag=11.5 priority=2 --db "$db" >/dev/null 2>&1
sum=$(cksum <"$db")
"$WANE" target set 'Tern 14 b' mag=11.5 --db "$db" >/dev/null 2>&1
check "target set to the same: exit 0" test $? = 0
check "target set to the same writes nothing" test "$(cksum <"$db")" = "$sum"
"$WANE" site set 'Tern Hill' --zone America/Denver --place 38.62,-109.36,2100 --db "$db" >/dev/null 2>&1
check "site set to the same: exit 0" test $? = 0
check "site set to the same writes nothing" test "$(cksum <"$db")" = "$sum"

# --- a period too short to be counted is told wherever it matters
printf '%s\n%s\nTern 903 b,150,10,2461000.5,0.001,BJD_TDB,0.0099,1e-9\nTern 904 b,150,10,2461000.5,0.001,BJD_TDB,0.01,1e-9\n' "$head" "$good" >"$scratch/t.csv"
"$WANE" import "$scratch/t.csv" --db "$db" >"$scratch/out" 2>"$scratch/err"
check "a short period: stored" test "$(cat "$scratch/out")" = "3 read, 3 new, 0 changed, 0 same, 0 refused"
check "a short period: said at import" grep -qF 'period_d: kept without effect: too short to be counted (got "0.0099", expected a period of at least 0.01 d)' "$scratch/err"
check "a short period: in target show" sh -c '"$1" target show "Tern 903 b" --db "$2" | grep -q "period_d .*0.0099 d.*too short to be counted"' - "$WANE" "$db"
check "a short period: in check" sh -c '"$1" check --db "$2" | grep -q "^doubt: Tern 903 b: period_d"' - "$WANE" "$db"
"$WANE" night 2026-04-22 --site 'Tern Hill' --db "$db" >"$scratch/out" 2>/dev/null
check "a short period: in the night" grep -q "^1 target can't be counted, the period is below 0.01 d: Tern 903 b" "$scratch/out"
"$WANE" season 2026-04-22 2026-04-22 --site 'Tern Hill' --format csv --db "$db" 2>"$scratch/err" >"$scratch/out"
check "a short period: beside a table" grep -q "^wane: targets: 1 target can't be counted" "$scratch/err"
check "the shortest that is counted has its events" sh -c 'test "$("$1" night 2026-04-22 --site "Tern Hill" --all --target "Tern 904 b" --format csv --db "$2" 2>/dev/null | wc -l)" -ge 100' - "$WANE" "$db"
finish
