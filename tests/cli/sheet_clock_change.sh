# The nights in which the clocks change at a site of UTC-7 h (America/Denver): the text sheet by itself says which date, which clock, when to slew,
# start and leave, and what to do when the ingress is missed; what is typed in the hour that comes twice says which of the two it means.
. tests/support/check.sh

db=$scratch/a.db now=2026-03-01T12:00:00Z
wane() { "$WANE" "$@" --db "$db" --now "$now" </dev/null 2>"$scratch/err"; }
# invented, by hand from their UTC: mid 1 Nov 07:35, T1 07:05 = 01:05 MDT, T4 08:05 = 01:05 MST;
# mid 09:20, T1 08:50 = 01:50 MST; mid 8 Mar 09:10, T1 08:40 = 01:40 MST, T4 09:40 = 03:40 MDT
target() { # NAME RADEC T0 DURATION
	wane target add "$1" --radec "$2" t0_jd="$3" t0_err_d=0.0005 period_d=7.1 period_err_d=1e-6 time_scale=JD_UTC duration_h="$4" k=0.1 a_rs=9 inc_deg=88 >/dev/null
	check "target $1" test $? = 0
}
wane site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver >/dev/null
target 'Tern 91 b' 51.2,39.5 2461345.8159722 1
target 'Tern 92 b' 80.4,44.1 2461345.8888889 1
target 'Tern 93 b' 190.4,35.1 2461107.8819444 1

has() { # FILE TEXT: a line of the file, blanks squeezed
	check "$1: $2" sh -c 'tr -s " " <"$1" | grep -qF -- "$2"' - "$scratch/$1" "$2"
}
# clocked FILE: no time of day stands without its clock; not counted: positions, offsets, the hours of a picture's axis
clocked() {
	sed -E '/^  (local|UTC) /d; s/[0-9]{2}:[0-9]{2}:[0-9.]+ [+-][0-9]{2}:[0-9]{2}:[0-9.]+/ /g; s/UTC[+-][0-9]{2}:[0-9]{2}/ /g' "$scratch/$1" |
		grep -oE '[0-2][0-9]:[0-5][0-9](:[0-9]{2}Z)?( [A-Z]{3})?' >"$scratch/times"
	check "$1: there are times" test "$(wc -l <"$scratch/times")" -gt 20
	check "$1: every time says which clock it is of" sh -c '! grep -vE " (MDT|MST|UTC)$|Z$" "$1"' - "$scratch/times"
}
# words of a page without its pictures
page_words() { sed -e '/<style>/,/<\/style>/d' | sed -e '/<svg/,/<\/svg>/d' -e 's/<[^>]*>/ /g'; }

# --- the night that has an hour twice
night=2026-10-31
wane plan "$night" --keep >"$scratch/plan"
check "kept: exit 0" test $? = 0
wane sheet "$night" >"$scratch/autumn"
check "sheet: exit 0" test $? = 0
has autumn 'Dates: evening of Sat 31 Oct 2026, morning of Sun 1 Nov 2026'
has autumn 'MDT is UTC-6 h'
check "both offsets, the moment, and what the clocks do" sh -c 'tr -s " \n" "  " <"$1" | grep -qF "CLOCKS CHANGE this night, at Sun 1 Nov 08:00 UTC: from MDT (UTC-6 h) to MST (UTC-7 h), 02:00 MDT becomes 01:00 MST."' - "$scratch/autumn"
has autumn 'slew by Sun 1 Nov 00:30 MDT Sun 1 Nov 06:30 UTC'
has autumn 'T1 Sun 1 Nov 01:05 MDT Sun 1 Nov 07:05 UTC'
has autumn 'T4 Sun 1 Nov 01:05 MST Sun 1 Nov 08:05 UTC'
has autumn 'leave Sun 1 Nov 01:'
has autumn 'T1 Sun 1 Nov 01:50 MST Sun 1 Nov 08:50 UTC'
check "each item: slew, start, latest start, leave" test "$(grep -cE '^    (slew by|start|latest start|leave) .* M[DS]T .* UTC' "$scratch/autumn")" = 8
check "each item: what if the ingress is missed, on which clock" test "$(tr -s ' \n' '  ' <"$scratch/autumn" | grep -oE 'If the ingress is missed: the egress alone can still be caught \(chance [0-9]+ %\), on target by 0[1-3]:[0-5][0-9] M[DS]T; later than that,' | wc -l)" = 2
clocked autumn
check "72 columns" sh -c '! grep -q "^.\{73\}" "$1"' - "$scratch/autumn"
has plan 'The clocks change this night, 02:00 MDT becomes 01:00 MST: times with * are MST (UTC-7 h), the others MDT (UTC-6 h).'
check "the plan marks the later clock" grep -qE '^  1 planned  00:30  00:35  01:05  01:05\* 01:' "$scratch/plan"
wane sheet "$night" --format html >"$scratch/autumn.html"
has autumn.html 'Saturday, 31 October 2026, to Sunday, 1 November 2026'
has autumn.html 'from MDT (UTC-06:00) to MST (UTC-07:00), at 08:00 UTC: 02:00 MDT becomes 01:00 MST.'
page_words <"$scratch/autumn.html" >"$scratch/autumn.words"
clocked autumn.words
wane sheet "$night" --format csv >"$scratch/autumn.csv"
check "csv: local times with their offsets" grep -q '2026-11-01T00:35:00-06:00.*2026-11-01T01:[0-9:]*-07:00' "$scratch/autumn.csv"
wane sheet "$night" --format ics | tr -d '\r' | sed -e ':a' -e 'N' -e '$!ba' -e 's/\n //g' | sed 's/\\n/\n/g' >"$scratch/autumn.ics"
has autumn.ics 'T1 Sun 1 Nov 01:05 MDT (Sun 1 Nov 07:05 UTC)'
has autumn.ics 'T4 Sun 1 Nov 01:05 MST (Sun 1 Nov 08:05 UTC)'

# --- the night that lacks an hour
wane sheet 2026-03-07 >"$scratch/spring"
has spring 'Dates: evening of Sat 7 Mar 2026, morning of Sun 8 Mar 2026'
check "both offsets, the moment, and what the clocks do" sh -c 'tr -s " \n" "  " <"$1" | grep -qF "at Sun 8 Mar 09:00 UTC: from MST (UTC-7 h) to MDT (UTC-6 h), 02:00 MST becomes 03:00 MDT."' - "$scratch/spring"
has spring 'T1 Sun 8 Mar 01:40 MST Sun 8 Mar 08:40 UTC'
has spring 'T4 Sun 8 Mar 03:40 MDT Sun 8 Mar 09:40 UTC'
check "nothing happens in the hour that is not there" sh -c '! grep -qE "02:[0-5][0-9] M" "$1" || ! grep -E "02:[0-5][0-9] M" "$1" | grep -qv "02:00 MST"' - "$scratch/spring"
clocked spring
wane sheet 2026-03-07 --format html | page_words >"$scratch/spring.words"
clocked spring.words

# --- what is typed
typed() { # CODE ARGUMENTS
	code=$1
	shift
	wane plan 2026-10-31 "$@" >"$scratch/out"
	got=$?
	check "exit $code (got $got): $*: $(head -n 1 "$scratch/err")" test "$got" = "$code"
}
for option in --lost --poor --block; do
	case $option in --poor) more=' x2' ;; --block) more='=flats' ;; *) more= ;; esac
	typed 2 $option "01:30..02:10$more"
	check "$option: it is said that it comes twice" grep -q 'comes twice this night' "$scratch/err"
	typed 2 $option "00:30..01:10$more"
	typed 2 $option "01:30L..01:45L$more"
	typed 0 $option "07:30Z..09:10Z$more"
	check "$option: with Z it is the first" grep -q 'Sun 1 Nov 01:30 MDT (07:30 UTC) to Sun 1 Nov 02:10 MST (09:10 UTC)' "$scratch/err"
	typed 0 $option "01:30-07:00..02:10$more"
	check "$option: with an offset it is the second" grep -q 'Sun 1 Nov 01:30 MST (08:30 UTC) to Sun 1 Nov 02:10 MST (09:10 UTC)' "$scratch/err"
	typed 0 $option "01:30-06:00..01:30-07:00$more"
	check "$option: from the first to the second is an hour" grep -q 'Sun 1 Nov 01:30 MDT (07:30 UTC) to Sun 1 Nov 01:30 MST (08:30 UTC)' "$scratch/err"
	typed 0 $option "00:30..02:10$more" # neither end comes twice
	check "$option: 2 h 40 min" grep -q '00:30 MDT (06:30 UTC) to Sun 1 Nov 02:10 MST (09:10 UTC)' "$scratch/err"
done
typed 2 --from 01:30
typed 0 --from 08:30Z
wane plan 2026-03-07 --lost 02:30..03:30 >/dev/null
check "in spring: a time that there is not: exit 1: $(head -n 1 "$scratch/err")" test $? = 1
wane plan 2026-03-07 --lost 01:30..03:30 >/dev/null
check "in spring: from before to behind" grep -q 'Sun 8 Mar 01:30 MST (08:30 UTC) to Sun 8 Mar 03:30 MDT (09:30 UTC)' "$scratch/err"
finish
