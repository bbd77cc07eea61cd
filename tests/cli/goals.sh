# Goals, stars of a field, stored settings, the sky of a site and its usual telescope: stored, shown, used, refused, undone.
. tests/support/check.sh

db=$scratch/a.db
hill='Tern Hill'
now=2026-04-22T18:00:00Z
quiet() { "$WANE" "$@" --db "$db" --now "$now" 2>"$scratch/err"; }
keys() { grep -o '"[A-Za-z0-9_]*":' | tr -d '":' | tr '\n' ' '; }
said() { grep -qF -- "$1" "$scratch/err"; }
# refuse CODE TEXT ARGUMENT...
refuse() {
	code=$1 text=$2
	shift 2
	quiet "$@" >"$scratch/out"
	got=$?
	check "exit $code: $*" test "$got" = "$code"
	check "says $text" said "$text"
	check "prints nothing" test ! -s "$scratch/out"
}
# worth TARGET: its cell in the night's table
worth() {
	awk -F, -v name="$1" 'NR == 1 { for (i = 1; i <= NF; i++) { if ($i == "worth") w = i; if ($i == "flags") f = i; if ($i == "target") t = i } } $t == name { print $w }' "$scratch/n.csv" | head -n 1
}

# --- nothing stored
quiet goal list --format json >"$scratch/out"
check "goal list of nothing: exit 0" test $? = 0
check "goal list of nothing: an empty list" test "$(cat "$scratch/out")" = '[]'
quiet setting list --format csv >"$scratch/out"
check "settings of nothing: built in" test "$(sed -n 2p "$scratch/out")" = 'need_min,2,2,0,min'
check "reading makes no store" test ! -e "$db"

# --- a site's sky and usual telescope
quiet site add "$hill" --place 38.62,-109.36,2100 --zone America/Denver --sky V=21.6 --extinction V=0.14 --extinction Rc=0.1 >"$scratch/out"
check "site add: exit 0" test $? = 0
check "site add: shows its sky" grep -q ', dark sky V 21.6, extinction V 0.14, extinction R 0.1$' "$scratch/out"
quiet import config-example/demo-targets.csv >/dev/null
quiet telescope add Big aperture_m=0.5 band=R field_arcmin=20 >/dev/null
quiet telescope add Small aperture_m=0.25 band=V field_arcmin=50 >/dev/null
quiet night 2026-04-22 --format json >"$scratch/out"
check "of two telescopes none is chosen" sh -c '! grep -q "\"telescope\": \"" "$1"' - "$scratch/out"
quiet site set "$hill" --telescope small >"$scratch/out"
check "site set --telescope: shown" grep -q ', usual telescope Small$' "$scratch/out"
quiet night 2026-04-22 --format json >"$scratch/out"
check "the usual one is chosen" grep -q '"telescope": "Small"' "$scratch/out"
quiet night 2026-04-22 --telescope Big --format json >"$scratch/out"
check "--telescope wins" grep -q '"telescope": "Big"' "$scratch/out"
quiet site set "$hill" --telescope Big --sky V= --sky R=20.9 >"$scratch/out"
check "another one, another band" grep -q ', dark sky R 20.9, extinction V 0.14, extinction R 0.1, usual telescope Big$' "$scratch/out"
quiet site show "$hill" --format json >"$scratch/out"
check "site show: keys" test "$(keys <"$scratch/out")" = 'name latitude_deg longitude_east_deg height_m zone mask half sky R extinction V R telescope '
check "site show: values" grep -q '"sky": {"R": 20.9}, "extinction": {"V": 0.14, "R": 0.1}, "telescope": "Big"}' "$scratch/out"
refuse 1 '--telescope: no such telescope at the site (got "Bigger"' site set "$hill" --telescope Bigger
refuse 2 '--sky: no such band here (got "r=21", expected U, B, V, R or I)' site set "$hill" --sky r=21
refuse 2 '--sky: no band (got "21", expected BAND=MAG)' site set "$hill" --sky 21
refuse 2 '--sky: out of range (got "V=4", expected 10 to 24)' site set "$hill" --sky V=4
refuse 2 '--extinction: out of range (got "g=-1"' site set "$hill" --extinction g=-1
refuse 2 '--telescope: the usual telescope of a site' site show "$hill" --telescope Big

# --- settings
quiet setting set need_min 5.0 --format json >"$scratch/out"
check "setting set: exit 0" test $? = 0
check "setting set: shown" grep -q '{"key": "need_min", "value": 5, "built_in": 2, "stored": true, "unit": "min"}' "$scratch/out"
quiet setting set worth_by priority >/dev/null
quiet night 2026-04-22 --format json >"$scratch/out"
check "limits end with them" test "$(sed -n '/"limits"/,/}/p' "$scratch/out" | keys | sed 's/.* mask_points/mask_points/')" = 'mask_points need_min worth_by fallback_bits '
check "limits: values" sh -c 'grep -q "\"need_min\": 5," "$1" && grep -q "\"worth_by\": \"priority\"," "$1" && grep -q "\"fallback_bits\": 1$" "$1"' - "$scratch/out"
quiet setting clear worth_by >"$scratch/out"
check "setting clear: built in again" grep -q '^worth_by  *bits (built in)$' "$scratch/out"
quiet setting clear need_min >/dev/null
refuse 2 'need_min: out of range (got "601", expected 0 to 600 min)' setting set need_min 601
refuse 2 'worth_by: unknown (got "size", expected bits, depth, priority)' setting set worth_by size
refuse 2 'after_date: ' setting set after_date tomorrow
refuse 2 'setting: no such key (got "nead_min"); did you mean need_min?' setting set nead_min 3
refuse 2 'setting: the value is missing' setting set need_min
refuse 2 'setting: an argument too many' setting clear need_min 3
refuse 2 'setting: no such verb (got "put", expected list, set, clear)' setting put need_min 3
"$WANE" setting --help >"$scratch/help"
for key in need_min worth_by fallback_bits limb_share short_share unknown_share after_date after_years systematic_floor_s moved_min; do
	check "--help has $key" grep -q "^  $key  *[A-Z]" "$scratch/help"
done

# --- goals
quiet night 2026-04-22 --format csv >"$scratch/n.csv"
check "without goals it is worth something" sh -c 'test "$1" != 0.000 && test -n "$1"' - "$(worth 'Tern 14 b')"
quiet goal set 'tern 14 b' 2 1 --band Rc --until 2026-06-30 --note '=for Ada' >"$scratch/out"
check "goal set: exit 0" test $? = 0
check "goal set: shown" test "$(cat "$scratch/out")" = 'Tern 14 b: 2 whole events, 0 got; 1 single limb, 0 got; band R; until 2026-06-30; open; =for Ada'
quiet goal set 'Tern 3 b' 1 0 >/dev/null
quiet goal list --format csv >"$scratch/out"
check "goal csv: header" test "$(head -n 1 "$scratch/out")" = 'target,band,whole,limb,got_whole,got_limb,open_whole,open_limb,until,since_utc,state,note'
check "goal csv: rows, no formula" test "$(sed -n 2p "$scratch/out")" = "Tern 14 b,R,2,1,0,0,2,1,2026-06-30,$now,open,'=for Ada"
check "goal csv: all of them" test "$(wc -l <"$scratch/out")" -eq 3
quiet goal list 'Tern 3 b' --format json >"$scratch/out"
check "goal json: keys" test "$(keys <"$scratch/out")" = 'target band whole limb got_whole got_limb open_whole open_limb until since_utc state note '
quiet undo >/dev/null
quiet goal list --format csv >"$scratch/out"
check "undo takes it back" test "$(wc -l <"$scratch/out")" -eq 2
quiet goal remove 'Tern 14 b' --band R
check "goal remove: exit 0" test $? = 0
check "goal remove: gone" test "$(quiet goal list)" = 'No goal is set: every event counts (wane goal set TARGET WHOLE LIMB).'
quiet undo >/dev/null
check "undo brings it back" test "$(quiet goal list --format csv | wc -l)" -eq 2
check "history names it" sh -c '"$1" history 2>&1 --db "$2" | grep -q "goal of Tern 14 b"' - "$WANE" "$db"
refuse 1 'target: no such target is stored (got "Tern 99 b"' goal set 'Tern 99 b' 1 0
refuse 1 'target: no such target is stored (got "Tern 99 b"' goal list 'Tern 99 b'
refuse 2 'WHOLE: not a whole number in range (got "1.5"' goal set 'Tern 14 b' 1.5 0
refuse 2 'LIMB: not a whole number in range (got "1001"' goal set 'Tern 14 b' 1 1001
refuse 2 'goal: nothing is wanted' goal set 'Tern 14 b' 0 0
refuse 2 '--band: unknown (got "red"' goal set 'Tern 14 b' 1 0 --band red
refuse 2 '--until: ' goal set 'Tern 14 b' 1 0 --until someday
refuse 2 'goal: an argument is missing (expected wane goal set TARGET WHOLE LIMB)' goal set 'Tern 14 b' 1
refuse 2 'goal: no such verb (got "add", expected list, set, remove)' goal add 'Tern 14 b' 1 0
refuse 2 '--until: not with wane goal remove' goal remove 'Tern 14 b' --until 2026-06-30
refuse 1 'goal: it has no goal for any band' goal remove 'Tern 14 b'
refuse 2 '--target: the target is named as an argument' goal list --target 'Tern 14 b'
refuse 2 '--sky: unknown option of goal' goal list --sky V=21

# --- a goal that is met: planned, marked, counted, worth nothing
quiet goal remove 'Tern 14 b' --band R
quiet goal set 'Tern 48 b' 1 0 >/dev/null
quiet night 2026-04-22 --format csv >"$scratch/n.csv"
check "an open goal keeps its worth" sh -c 'test "$1" != 0.000 && test -n "$1"' - "$(worth 'Tern 48 b')"
quiet plan 2026-04-22 --pin 'Tern 48 b' --keep >"$scratch/out"
check "planned" test $? = 0
now=2026-04-23T13:00:00Z
quiet plan 2026-04-22 --mark 'Tern 48 b=done' >/dev/null
check "marked" test $? = 0
quiet goal list 'Tern 48 b' --format csv >"$scratch/out"
check "counted and met" test "$(sed -n 2p "$scratch/out")" = 'Tern 48 b,,1,0,1,0,0,0,,2026-04-22T18:00:00Z,met,'
quiet night 2026-04-29 --all --format csv >"$scratch/n.csv"
check "its next event is worth nothing" test "$(worth 'Tern 48 b')" = 0.000
check "and says why" sh -c 'grep "Tern 48 b" "$1" | grep -q goal_met' - "$scratch/n.csv"
check "nor is it planned, and that says why" sh -c '"$1" plan 2026-04-29 --db "$2" --now "$3" 2>/dev/null | grep -q "Tern 48 b.*: no goal is open for it: met, past or of another band"' - "$WANE" "$db" "$now"
check "others are not flagged" sh -c 'test "$(grep -c goal_met "$1")" = "$(grep -c "Tern 48 b.*goal_met" "$1")"' - "$scratch/n.csv"
quiet plan 2026-04-22 --mark 'Tern 48 b=planned' >/dev/null
check "the mark taken back: open" test "$(quiet goal list 'Tern 48 b' --format csv | sed -n 2p | cut -d, -f11)" = open
quiet plan 2026-04-22 --mark 'Tern 48 b=partly' >/dev/null
check "partly is a limb: open still" test "$(quiet goal list 'Tern 48 b' --format csv | sed -n 2p)" = 'Tern 48 b,,1,0,0,1,1,0,,2026-04-22T18:00:00Z,open,'
quiet goal set 'Tern 48 b' 0 1 >/dev/null
check "as a goal of limbs it is met" test "$(quiet goal list 'Tern 48 b' --format csv | sed -n 2p | cut -d, -f11)" = met
# in another band than the telescope's it does not count
quiet goal remove 'Tern 48 b'
now=2026-04-22T18:00:00Z
quiet goal set 'Tern 48 b' 0 1 --band V >/dev/null
check "not in another band" test "$(quiet goal list 'Tern 48 b' --format csv | sed -n 2p | cut -d, -f6)" = 0
quiet goal set 'Tern 45 b' 1 0 --until 2026-04-21 >"$scratch/out"
check "past its last night: expired" grep -q '; until 2026-04-21; expired$' "$scratch/out"
quiet goal set 'Tern 45 b' 1 0 --until 2026-04-22 >"$scratch/out"
check "on its last night: open" grep -q '; until 2026-04-22; open$' "$scratch/out"

# --- stars of a field
t='Tern 14 b' # at 213.11154, +31.12001
quiet star list "$t" --format json >"$scratch/out"
check "no stars: keys" test "$(keys <"$scratch/out")" = 'target stars aperture_arcsec neighbours neighbour_light comparison_stars assumed field telescope field_arcmin needs_arcmin fits ra_deg dec_deg '
quiet star add "$t" comparison 213.11154,31.22001 11.2 --band V --name '=A' >"$scratch/out"
check "star add: exit 0" test $? = 0
check "star add: shown" grep -q '^  1: comparison =A at 213.11154, +31.22001, 6.00 arcmin away, V 11.2$' "$scratch/out"
check "6 arcmin north: it fits, half way" grep -q '^With the target they fit the field of Big: 6.00 of 20.00 arcmin, pointed at 213.11154, +31.17001.$' "$scratch/out"
quiet star add "$t" guide 213.11154,30.80001 9 >"$scratch/out"
check "25.2 arcmin from end to end: it does not" grep -q '^With the target they do not fit the field of Big: they need 25.20 arcmin, 5.20 more than its 20.00.$' "$scratch/out"
quiet star list "$t" --telescope Small >"$scratch/out"
check "another telescope's field" grep -q '^With the target they fit the field of Small: 25.20 of 50.00 arcmin' "$scratch/out"
quiet star list "$t" --format csv >"$scratch/out"
check "star csv: header" test "$(head -n 1 "$scratch/out")" = 'target,number,role,name,ra_deg,dec_deg,sep_arcsec,mag,band,note'
check "star csv: row, no formula" test "$(sed -n 2p "$scratch/out")" = "Tern 14 b,1,comparison,'=A,213.11154,31.22001,,11.2,V,"
check "csv: the field is said beside it" said 'star: With the target they do not fit the field of Big'
quiet star add "$t" neighbour 2 13.74 --band V --note 'close by' >"$scratch/out"
check "a neighbour 2.5 mag fainter: a tenth, assumed in R" grep -q '^Neighbours in the aperture of 3.8 arcsec: 1, with 0.100 of the target.s light (assumed' "$scratch/out"
quiet night 2026-04-22 --format csv >"$scratch/n.csv"
check "its event is diluted" sh -c 'grep "^Tern Hill,Big,2026-04-22,Tern 14 b," "$1" | grep -q neighbour_diluted' - "$scratch/n.csv"
quiet star remove "$t" 3
check "star remove: exit 0" test $? = 0
check "star remove: gone" test "$(quiet star list "$t" --format csv | wc -l)" -eq 3
quiet undo >/dev/null
check "undo brings it back" test "$(quiet star list "$t" --format csv | wc -l)" -eq 4
refuse 1 'star: the target has 1 of role guide already (expected at most 1)' star add "$t" guide 213.2,31 9
refuse 1 'star: that comparison is there already' star add "$t" comparison 213.11154,31.22001 11.3 --band V
refuse 1 'target: no such target is stored' star add 'Tern 99 b' guide 213.2,31 9
refuse 1 'star: the target has no such star (got "99"' star remove "$t" 99
refuse 1 'star: the target has no such star (got "1"' star remove 'Tern 3 b' 1
refuse 2 'NUMBER: not a whole number in range (got "one"' star remove "$t" one
refuse 2 'ROLE: unknown (got "check", expected comparison, guide or neighbour)' star add "$t" check 213.2,31 9
refuse 2 'RA,DEC: no position (got "5"' star add "$t" comparison 5 9
refuse 2 'ARCSEC: out of range (got "601", expected 0 to 600)' star add "$t" neighbour 601 9
refuse 2 'MAG: out of range (got "41", expected -5 to 40)' star add "$t" neighbour 5 41
refuse 2 '--band: unknown (got "red"' star add "$t" neighbour 5 14 --band red
refuse 2 'star: an argument is missing (expected wane star list TARGET)' star list
refuse 2 'star: no such verb (got "set", expected list, add, remove)' star set "$t"
refuse 2 '--name: not with wane star list' star list "$t" --name A
refuse 2 '--name: a control, invisible or invalid character at byte 2 (got "A\x1b[31m"' star add "$t" comparison '213.1,31.1' 11 --name "$(printf 'A\033[31m')"
refuse 2 '--note: a control, invisible or invalid character' goal set "$t" 1 0 --note "$(printf 'A\302\23331m')"

# --- with the site go its keys, and they come back with it
quiet site remove "$hill"
quiet site add "$hill" --place 38.62,-109.36,2100 >"$scratch/out"
check "a site of the same name has none of them" sh -c '! grep -q "sky\|extinction\|usual" "$1"' - "$scratch/out"
quiet undo >/dev/null
quiet undo >/dev/null
quiet site show "$hill" >"$scratch/out"
check "undone: as before" grep -q ', dark sky R 20.9, extinction V 0.14, extinction R 0.1, usual telescope Big$' "$scratch/out"
# --- the demo has two telescopes, and one of them is the usual one
"$WANE" demo --format csv >"$scratch/n.csv" 2>/dev/null
check "demo: East dome" test "$(cut -d, -f2 "$scratch/n.csv" | sort -u | tr '\n' ,)" = 'East dome,telescope,'
check "demo: one goal is past, its event worth nothing" sh -c 'grep "Tern 45 b" "$1" | grep -q "goal_met" && test "$2" = 0.000' - "$scratch/n.csv" "$(worth 'Tern 45 b')"
check "demo: one neighbour" test "$(grep -c neighbour_diluted "$scratch/n.csv")" = 1
"$WANE" demo --telescope roll-off --format csv >"$scratch/n.csv" 2>/dev/null
check "demo: Roll-off" test "$(cut -d, -f2 "$scratch/n.csv" | sort -u | tr '\n' ,)" = 'Roll-off,telescope,'

check "the store is sound" sh -c "\"\$1\" check --db \"\$2\" >/dev/null" - "$WANE" "$db"
finish
