# Bad mid-time tables and wrong words of drift, midtime, refit, history, undo, target adopt: exit code, a line that says where and what, and
# nothing changed.
. tests/support/check.sh

db=$scratch/a.db
"$WANE" site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --db "$db" >/dev/null 2>&1
# invented; the last one has no errors, the one before it errors that reach half a period
"$WANE" target add 'Tern 14 b' --radec 212.4,38.1 t0_jd=2459750.5 t0_err_d=0.0002 period_d=3.412877 period_err_d=3.1e-7 time_scale=BJD_TDB --db "$db"
"$WANE" target add 'Tern 40 b' --radec 235.6,28.3 t0_jd=2447000.5 t0_err_d=0.02 period_d=2.10442 period_err_d=9e-5 time_scale=BJD_TDB --db "$db"
"$WANE" target add 'Tern 7 b' --radec 190.2,12.9 t0_jd=2459000.5 period_d=4.771 time_scale=BJD_TDB --db "$db"
"$WANE" target add 'Tern 8 b' --radec 190.2,13.9 --db "$db"
"$WANE" midtime add 'Tern 14 b' 2459753.9129 0.0003 --scale BJD_TDB --db "$db" >/dev/null 2>&1
sum=$(cksum <"$db")
list=$("$WANE" midtime list 'Tern 14 b' --format csv --db "$db")
check "one mid-time is stored" test "$(echo "$list" | wc -l)" = 2

# refuse CODE TEXT ARGUMENTS...
refuse() {
	code=$1 text=$2
	shift 2
	"$WANE" "$@" --db "$db" >"$scratch/out" 2>"$scratch/err" </dev/null
	got=$?
	check "exit $code (got $got): $*" test "$got" = "$code"
	check "\"$text\" said of: $*: $(head -n 1 "$scratch/err")" grep -qF -- "$text" "$scratch/err"
	check "every line begins with wane: $*" sh -c '! grep -vq "^wane: [^ ]" "$1"' - "$scratch/err"
	check "the store is as it was: $*" test "$(cksum <"$db")" = "$sum"
}
# table TEXT COUNTS ROWS [ARGUMENTS]: a table that is refused as a whole
table() {
	text=$1 counts=$2 rows=$3
	shift 3
	printf '%b' "$rows" >"$scratch/m.csv"
	refuse 1 "wane: $scratch/m.csv:$text" midtime import 'Tern 14 b' "$scratch/m.csv" "$@"
	check "counts: $rows" test "$(cat "$scratch/out")" = "$counts"
}

# --- tables: each fault its own sentence, with line and column
good='2459757.3257,0.0003'
table '3:21: time_scale: not a time scale (got "BJD_TBD"' '2 read, 0 new, 0 same, 1 refused' \
	"mid_jd,err_d,time_scale\n$good,BJD_TDB\n2459760.7386,0.0003,BJD_TBD\n"
table '2:21: epoch: neither a whole epoch nor E + 0.5 (got "0.25"' '1 read, 0 new, 0 same, 1 refused' \
	"mid_jd,err_d,epoch\n$good,0.25\n"
table '2:21: epoch: a half epoch is an occultation' '1 read, 0 new, 0 same, 1 refused' \
	"mid_jd,err_d,epoch,kind\n$good,2.5,transit\n"
table '2:8: err_d: the error is a date and the mid-time is none' '1 read, 0 new, 0 same, 1 refused' \
	'mid_jd,err_d\n0.0003,2459757.3257\n'
table '2:14: err_d: an error of zero' '1 read, 0 new, 0 same, 1 refused' 'mid_jd,err_d\n2459757.3257,0\n'
table '2:14: err_d: ' '1 read, 0 new, 0 same, 1 refused' 'mid_jd,err_d\n2459757.3257,-0.001\n'
table '2:1: mid_jd: not a date of 1950 to 2100 (got "2430000.5"' '1 read, 0 new, 0 same, 1 refused' \
	'mid_jd,err_d\n2430000.5,0.0003\n'
table '2:1: mid_jd: not a date of 1950 to 2100: less an offset?' '1 read, 0 new, 0 same, 1 refused' \
	'mid_jd,err_d\n59757.3257,0.0003\n'
table '2:1: mid_jd: ' '1 read, 0 new, 0 same, 1 refused' 'mid_jd,err_d\nsoon,0.0003\n'
# half a period from a transit: an occultation, or nothing
table '2:1: epoch: it lies between two mid-times and fits neither; it may be epoch 2 (period ' \
	'2 read, 0 new, 0 same, 1 refused' "mid_jd,err_d\n2459759.0322,0.0003\n$good\n" --scale BJD_TDB
table '2:1: epoch: no count is safe' '1 read, 0 new, 0 same, 1 refused' \
	'mid_jd,err_d\n2459757.3257,1.5\n' --scale BJD_TDB
table '1:1: mid_jd: the table has no such column' '' 'err_d,epoch\n0.001,3\n'
printf 'mid_jd,err_d\n%s\n' "$good" >"$scratch/m.csv"
refuse 1 'target: no such target is stored (got "Tern 99 b"' midtime import 'Tern 99 b' "$scratch/m.csv"
refuse 2 '--scale: not a time scale (got "BJD_TBD"' midtime import 'Tern 14 b' "$scratch/m.csv" --scale BJD_TBD
refuse 1 'none.csv: No such file' midtime import 'Tern 14 b' none.csv
refuse 1 'no count is safe, 3 sigma of prediction and time' midtime add 'Tern 40 b' 2461000.5 0.001 --scale BJD_TDB
refuse 1 'the ephemeris has no errors, so no count is safe' midtime add 'Tern 7 b' 2459010.04 0.001 --scale BJD_TDB
refuse 1 'the target has no ephemeris to count by' midtime add 'Tern 8 b' 2459010.04 0.001 --scale BJD_TDB

# --- one time of the command line
refuse 1 'MID: ' midtime add 'Tern 14 b' 2430000.5 0.001 --scale BJD_TDB
refuse 1 'ERR: an error of zero' midtime add 'Tern 14 b' 2459757.3257 0
refuse 1 'ERR: ' midtime add 'Tern 14 b' 0.0003 2459757.3257
refuse 1 '--epoch: ' midtime add 'Tern 14 b' 2459757.3257 0.001 --epoch 2.25
refuse 2 '--scale: ' midtime add 'Tern 14 b' 2459757.3257 0.001 --scale nonsense
refuse 2 '--kind: one mid-time is a transit or an occultation' midtime add 'Tern 14 b' 2459757.3257 0.001 --kind both
refuse 2 'MID: ' midtime add 'Tern 14 b' 2026-02-30T01:00 0.001 --scale UTC
refuse 2 'midtime: an argument is missing (expected wane midtime add TARGET MID ERR)' midtime add 'Tern 14 b' 2459757.3257
refuse 2 'midtime: no such verb (got "ad"' midtime ad 'Tern 14 b'
refuse 2 'midtime: no such verb (got ""' midtime
refuse 1 'EPOCH: no mid-time of epoch 5 is stored' midtime exclude 'Tern 14 b' 5
refuse 1 'EPOCH: no occultation of epoch 1 is stored' midtime remove 'Tern 14 b' 1.5
refuse 2 'EPOCH: not an epoch (got "one"' midtime include 'Tern 14 b' one
refuse 2 '--radec: a stored target is needed here' midtime list 'Tern 14 b' --radec 1,1
refuse 2 '--target: the target is named as an argument' refit 'Tern 14 b' --target 'Tern 7 b'
refuse 2 '--pad: unknown option of midtime' midtime list 'Tern 14 b' --pad 2

# --- refit
refuse 1 'refit: ' refit 'Tern 14 b'
refuse 1 'refit: ' refit 'Tern 14 b' --adopt linear
refuse 1 'target: no such target is stored' refit 'Tern 99 b'
refuse 2 'TARGET: is missing' refit
refuse 2 '--adopt: no such model (got "cubic", expected linear, quadratic)' refit 'Tern 14 b' --adopt cubic
refuse 2 '--adopt: prior needs --prior' refit 'Tern 14 b' --adopt prior
refuse 2 '--formal: belongs to --adopt' refit 'Tern 14 b' --formal
refuse 2 '--jitter: ' refit 'Tern 14 b' --jitter soft
refuse 2 '--jitter: out of range (got "-1"' refit 'Tern 14 b' --jitter -1
refuse 2 '--ref-epoch: ' refit 'Tern 14 b' --ref-epoch 1.5

# --- drift
refuse 2 '--at: ' drift --at later
refuse 2 '--limit: out of range' drift --limit -1
refuse 2 '--precision: out of range' drift --precision 0
refuse 2 '--sort: no such column (got "sigma_nwo_min", did you mean sigma_now_min' drift --sort sigma_nwo_min
refuse 2 '--against: one TARGET has to be named' drift --against 1
refuse 2 '--against: expected the number of a version' drift 'Tern 14 b' --against first
refuse 1 '--against: no version 7' drift 'Tern 14 b' --against 7
refuse 1 'target: no such target is stored (got "Tern 99 b"' drift 'Tern 99 b'

# --- history, undo, versions
refuse 1 'undo: there is no change 99' undo --change 99
refuse 2 '--change: ' undo --change 0
refuse 2 'undo: an argument too many' undo 3
refuse 1 'target: no such target is stored' history 'Tern 99 b'
refuse 1 'VERSION: no such version of it is stored (got "9", expected 1)' target adopt 'Tern 14 b' 9
refuse 2 'VERSION: not the number of a version (got "x"' target adopt 'Tern 14 b' x
refuse 2 'target: expected wane target adopt NAME VERSION' target adopt 'Tern 14 b'
check "the list is as it was" test "$("$WANE" midtime list 'Tern 14 b' --format csv --db "$db")" = "$list"

# --- undo is refused where something was changed again since
"$WANE" target set 'Tern 14 b' mag=11 --db "$db"
first=$("$WANE" history --format csv --db "$db" | sed -n 2p | cut -d, -f1)
"$WANE" target set 'Tern 14 b' mag=12 --db "$db"
sum=$(cksum <"$db")
refuse 1 'undo: ' undo --change "$first"

# --- nothing makes a store
new=$scratch/new.db
"$WANE" undo --db "$new" >/dev/null 2>&1
check "undo of nothing: exit 1" test $? = 1
"$WANE" midtime add 'Tern 14 b' 2459757.3257 0.001 --db "$new" >/dev/null 2>&1
check "a time of no target: exit 1" test $? = 1
check "no store was made" test ! -e "$new"

# --- the setting
printf '[run]\nrefresh_precision_min = 0\n' >"$scratch/s.ini"
refuse 1 "$scratch/s.ini:2:25: refresh_precision_min: out of range (got \"0\", expected 0.001 to 1000 min)" drift --settings "$scratch/s.ini"
finish
