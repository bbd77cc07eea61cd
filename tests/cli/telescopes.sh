# Telescopes of a site, allotted time and halves of the night: stored, shown, used, refused, undone.
. tests/support/check.sh

db=$scratch/a.db
hill='Tern Hill'
quiet() { "$WANE" "$@" --db "$db" 2>"$scratch/err"; }
keys() { grep -o '^ *"[a-z0-9_]*":' | tr -d ' ":' | tr '\n' ' '; }
said() { grep -qF -- "$1" "$scratch/err"; }
# column FILE NAME: the cells of a column of a table, quoted commas heeded
column() {
	awk -v name="$2" '{
		n = 0; cell = ""; quoted = 0
		for (i = 1; i <= length($0); i++) {
			c = substr($0, i, 1)
			if (c == "\"") quoted = !quoted
			else if (c == "," && !quoted) { f[++n] = cell; cell = "" }
			else cell = cell c
		}
		f[++n] = cell
		if (NR == 1) { for (i = 1; i <= n; i++) if (f[i] == name) at = i } else print f[at] }' "$1"
}
fields='slew_deg_s settle_min filter_min field_arcmin mount alt_min_deg alt_max_deg ha_east_h ha_west_h zenith_deg flip_min flip_before_min flip_after_min aperture_m obstruction throughput band pixel_arcsec gain_e_adu read_noise_e dark_e_s full_well_e defocus_px exposure_s dead_s red_noise_ppt blocks note'

# --- nothing stored
for what in telescope allot; do
	quiet $what list --format json >"$scratch/out"
	check "$what list of nothing: exit 0" test $? = 0
	check "$what list of nothing: an empty list" test "$(cat "$scratch/out")" = '[]'
done
check "reading makes no store" test ! -e "$db"

# --- a telescope
quiet site add "$hill" --place 38.62,-109.36,2100 --zone America/Denver >"$scratch/out"
quiet import config-example/demo-targets.csv >/dev/null
quiet night 2026-04-22 --format csv >"$scratch/before.csv"
check "without a telescope the column is empty" test "$(column "$scratch/before.csv" telescope | sort -u)" = ''
quiet telescope add Big slew_deg_s=2 mount=german alt_min_deg=45 'blocks=evening-6..evening-9=evening flats;22:00..+25m=engineering' note='heavy, slow' >"$scratch/out"
check "telescope add: exit 0" test $? = 0
check "telescope add: shows it" grep -q '^  slew_deg_s  *2 deg/s$' "$scratch/out"
check "telescope show: the same" test "$(quiet telescope show big)" = "$(cat "$scratch/out")"
quiet telescope list >"$scratch/out"
check "telescope list: a line" grep -q '^Big: slew_deg_s 2 deg/s, mount german, alt_min_deg 45 deg, ' "$scratch/out"
quiet telescope list --format csv >"$scratch/t.csv"
check "telescope csv: header" test "$(head -n 1 "$scratch/t.csv")" = "site,name,$(echo "$fields" | tr ' ' ',')"
check "telescope csv: cells" test "$(column "$scratch/t.csv" blocks)" = 'evening-6..evening-9=evening flats;22:00..+25m=engineering'
quiet telescope show Big --format json >"$scratch/t.json"
check "telescope json: keys" test "$(keys <"$scratch/t.json")" = "site name $fields "
check "telescope json: numbers and null" sh -c 'grep -q "\"slew_deg_s\": 2," "$1" && grep -q "\"settle_min\": null," "$1"' - "$scratch/t.json"
"$WANE" telescope --help >"$scratch/help"
for f in $fields; do
	check "--help has $f" grep -q "^  $f  *[A-Z].*" "$scratch/help"
done
check "--help has range and unit" grep -q '^  slew_deg_s .* (0.01 to 100 deg/s)$' "$scratch/help"

# --- used: the only one is chosen, its least altitude is the limit, an option wins
alt() { sed -n 's/^ *"alt_limit_deg": \([^,]*\),*$/\1/p' "$scratch/out"; }
quiet night 2026-04-22 --format json >"$scratch/out"
check "the only telescope is chosen" grep -q '"telescope": "Big"' "$scratch/out"
check "its least altitude is the limit" test "$(alt)" = 45
quiet night 2026-04-22 --alt-limit 25 --format json >"$scratch/out"
check "an option wins over it" test "$(alt)" = 25
printf '[limits]\nalt_limit_deg = 33\n' >"$scratch/settings.ini"
quiet night 2026-04-22 --settings "$scratch/settings.ini" --format json >"$scratch/out"
check "it wins over the settings" test "$(alt)" = 45
quiet night 2026-04-22 --place 38.62,-109.36,2100 --format json >"$scratch/out"
check "a place has none" sh -c '! grep -q "\"telescope\": \"" "$1"' - "$scratch/out"
check "and the built-in limit" test "$(alt)" = 30
quiet night 2026-04-22 --format csv >"$scratch/n.csv"
check "csv rows name it" test "$(column "$scratch/n.csv" telescope | sort -u)" = Big
quiet night 2026-04-22 >"$scratch/out"
check "text names it" grep -q '^Telescope: Big (no forecast: that takes aperture_m and band)$' "$scratch/out"
quiet telescope set Big aperture_m=0.5 band=R >"$scratch/out"
quiet night 2026-04-22 >"$scratch/with"
check "text: aperture and band" grep -q '^Telescope: Big, 0.5 m, band R$' "$scratch/with"
check "text: columns of the forecast" grep -q '^target .* done worth  S/N  lost to; marks$' "$scratch/with"
check "text: what they mean" grep -q '^S/N: Depth over its expected error' "$scratch/with"
quiet telescope set Big aperture_m= band= >"$scratch/out"
quiet night 2026-04-22 >"$scratch/without"
check "text: none without" sh -c '! grep -q "^target .* S/N" "$1" && ! grep -q "^S/N: " "$1"' - "$scratch/without"
heading() { grep '^target ' "$1" | wc -c; }
check "text: at most 12 columns wider" test $(($(heading "$scratch/with") - $(heading "$scratch/without"))) -le 12
quiet telescope set Big alt_min_deg= >"$scratch/out"
check "FIELD= clears" sh -c '! grep -q alt_min_deg "$1"' - "$scratch/out"
quiet night 2026-04-22 --format json >"$scratch/out"
check "then the built-in limit holds" test "$(alt)" = 30
quiet telescope add Small >/dev/null
quiet night 2026-04-22 --format json >"$scratch/out"
check "of two none is chosen" sh -c '! grep -q "\"telescope\": \"" "$1"' - "$scratch/out"
quiet season 2026-04-22 2026-04-22 --telescope small --format csv >"$scratch/s.csv"
check "--telescope chooses, in season too" test "$(column "$scratch/s.csv" telescope | sort -u)" = Small

# --- allotted: 21:00 to 01:30 MDT is 03:00 to 07:30 UTC
quiet allot add 2026-04-22 21:00..01:30 'first share' >"$scratch/out"
check "allot add: exit 0" test $? = 0
check "what was typed comes back with its dates" said 'wane: allot: Wed 22 Apr 21:00 MDT (03:00 UTC on 23 Apr) to Thu 23 Apr 01:30 MDT (07:30 UTC)'
check "allot add: shows it" grep -q '^1: night 22/23 Apr 2026, 21:00..01:30: Wed 22 Apr 21:00 MDT .*; any telescope; first share$' "$scratch/out"
quiet night 2026-04-22 --all --format csv >"$scratch/n.csv"
column "$scratch/n.csv" lost_by >"$scratch/lost"
check "windows lose time to the allotment" grep -q '\(before\|ingress\|flat\|egress\|after\):allotment' "$scratch/lost"
check "nothing is usable before it" test "$(column "$scratch/n.csv" usable_start_utc | grep . | sort | head -n 1 | cut -c1-13)" \> 2026-04-23T02
check "nor behind it" test "$(column "$scratch/n.csv" usable_end_utc | sort | tail -n 1)" = 2026-04-23T07:30:00Z
quiet season 2026-04-22 2026-04-22 --all --format csv >"$scratch/s.csv"
check "season cuts too" cmp -s "$scratch/n.csv" "$scratch/s.csv"
quiet night 2026-04-22 --all --no-allotments --format csv >"$scratch/whole.csv"
check "--no-allotments: the whole night" sh -c '! grep -q :allotment "$1"' - "$scratch/whole.csv"
check "--no-allotments: as it was before" test "$(quiet night 2026-04-22 --no-allotments --format csv)" = "$(cat "$scratch/before.csv")"
quiet night 2026-04-22 --format json >"$scratch/out"
check "json: the allotted time" grep -q '"allotted": \[\["2026-04-23T03:00:00Z", "2026-04-23T07:30:00Z"\]\]$' "$scratch/out"
check "json: it is the last key of the night" sh -c 'grep -A1 "\"allotted\"" "$1" | grep -q "^  },"' - "$scratch/out"
quiet night 2026-04-22 >"$scratch/out"
check "text: the allotted time" grep -qx 'Allotted: 21:00 MDT - 01:30 MDT' "$scratch/out"
quiet night 2026-04-22 --place 38.62,-109.36,2100 --format json >"$scratch/out"
check "a place has none" grep -q '"allotted": null' "$scratch/out"
quiet night 2026-04-23 --format json >"$scratch/out"
check "another night: null" grep -q '"allotted": null' "$scratch/out"
check "another night: said" said 'wane: allotment: no time is allotted on this night'
quiet night 2026-04-23 --no-allotments >"$scratch/out"
check "--no-allotments says nothing of it" test ! -s "$scratch/err"

# --- of one telescope
quiet allot add 2026-04-24..2026-04-26 sunset..+2h --telescope Big >"$scratch/out"
check "several nights: the first and the last come back" sh -c 'grep -q "^wane: allot: first: Fri 24 Apr 20:0" "$1" && grep -q "^wane: allot: last: Sun 26 Apr 20:0" "$1"' - "$scratch/err"
check "several nights: shown" grep -q '^2: nights 24/25 Apr 2026 to 26/27 Apr 2026 (3), sunset..+2h; telescope Big$' "$scratch/out"
quiet night 2026-04-25 --telescope Big --format json >"$scratch/out"
check "it cuts the nights of that telescope" grep -q '"allotted": \[\["2026-04-26T02:' "$scratch/out"
quiet night 2026-04-25 --telescope Small --format json >"$scratch/out"
check "not those of another" grep -q '"allotted": null' "$scratch/out"
quiet allot add 2026-04-25 02:00..03:00 >/dev/null
quiet night 2026-04-25 --telescope Big --format json >"$scratch/out"
check "two allotments: both" grep -q '"allotted": \[\["2026-04-26T02:[^]]*\], \["2026-04-26T08:00:00Z", "2026-04-26T09:00:00Z"\]\]' "$scratch/out"
quiet allot list --format csv >"$scratch/a.csv"
check "allot csv: header" test "$(head -n 1 "$scratch/a.csv")" = id,site,telescope,first_night,last_night,span,from_utc,to_utc,note
check "allot csv: a single night" grep -qx '1,Tern Hill,,2026-04-22,2026-04-22,21:00..01:30,2026-04-23T03:00:00Z,2026-04-23T07:30:00Z,first share' "$scratch/a.csv"
check "allot csv: a range" grep -qx '2,Tern Hill,Big,2026-04-24,2026-04-26,sunset..+2h,,,' "$scratch/a.csv"
check "allot list --telescope: its own and those of any" test "$(quiet allot list --telescope Small --format csv | sed 1d | cut -d, -f1 | tr '\n' ' ')" = '1 3 '
quiet allot list --format json >"$scratch/out"
check "allot json: null is any telescope" grep -q '{"id": 1, "site": "Tern Hill", "telescope": null, "first_night": "2026-04-22"' "$scratch/out"
quiet allot add 2026-04-22 21:00..01:30 >"$scratch/out"
check "the same twice: exit 1" test $? = 1

# --- clock changes: 1 November 2026 repeats the hour from 01:00, 8 March skips that from 02:00
quiet allot add 2026-10-31 01:30..04:00 >"$scratch/out"
check "in the repeated hour: exit 2" test $? = 2
check "both readings are shown" said 'as Sun 1 Nov 01:30 MDT (07:30 UTC) and as Sun 1 Nov 01:30 MST (08:30 UTC)'
quiet allot add 2026-10-31 08:30Z..04:00 >"$scratch/out"
check "with Z: exit 0" test $? = 0
check "with Z: said" said 'wane: allot: Sun 1 Nov 01:30 MST (08:30 UTC) to Sun 1 Nov 04:00 MST (11:00 UTC)'
quiet allot add 2026-03-07 02:30..04:00 >"$scratch/out"
check "in the skipped hour: exit 1" test $? = 1
check "in the skipped hour: said" said 'does not exist this night'
quiet allot add 2026-03-06..2026-03-08 02:30..04:00 >"$scratch/out"
check "one night of three: exit 0" test $? = 0
check "one night of three: said" said 'on 1 of 3 nights it allots nothing: night 7/8 Mar 2026: does not exist'
quiet night 2026-03-07 --format json >"$scratch/out"
check "that night has nothing" grep -q '"allotted": \[\]' "$scratch/out"
check "and that is said" sh -c 'grep -q "^wane: allotment: [0-9]* allots nothing: does not exist this night" "$1"' - "$scratch/err"
quiet night 2026-03-07 >"$scratch/out"
check "in words" grep -qx 'Allotted: nothing of this night' "$scratch/out"
quiet season 2026-03-06 2026-03-08 --format csv >"$scratch/out"
check "season says it of that night alone" test "$(grep -c '^wane: allotment: night 7/8 Mar 2026: ' "$scratch/err")$(grep -c allotment "$scratch/err")" = 11

# --- a Sun that does not set
quiet site add 'Tern North' --place 78,15,10 >/dev/null
quiet allot add 2026-06-21 evening-6..morning-6 --site 'Tern North' >"$scratch/out"
check "no twilight: exit 1" test $? = 1
check "no twilight: said" said 'wane: SPAN: does not happen this night'
quiet allot add 2026-03-20..2026-06-21 evening-6..morning-6 --site 'Tern North' >"$scratch/out"
check "no twilight on some nights: kept" test $? = 0
check "no twilight on some nights: said" said 'on 78 of 94 nights it allots nothing: night 5/6 Apr 2026: does not happen this night'
quiet night 2026-06-21 --site 'Tern North' --format json >"$scratch/out"
check "no twilight: nothing" grep -q '"allotted": \[\]' "$scratch/out"
check "no twilight: said again" sh -c 'grep -q "^wane: allotment: .* allots nothing: does not happen this night" "$1"' - "$scratch/err"

# --- halves
quiet site set "$hill" --half 01:10 >"$scratch/out"
check "site set --half: shown" grep -q ', nights halved at 01:10$' "$scratch/out"
check "site set --half: in the history, in words" sh -c '"$1" history --db "$2" --format csv | sed -n 2p | grep -q "halves of the nights of "' - "$WANE" "$db"
check "undone and done again" sh -c '"$1" undo --db "$2" | grep -q "halves of the nights of " && "$1" undo --db "$2" --change "$("$1" history --db "$2" --format csv | sed -n "2s/,.*//p")" >/dev/null' - "$WANE" "$db"
check "site show: json" grep -q '"mask": \[\], "half": "01:10", "sky": {}, "extinction": {}, "telescope": null}' <<-EOT
	$(quiet site show "$hill" --format json)
EOT
quiet allot add 2026-05-10 second-half --site "$hill" >"$scratch/out"
check "the second half begins there" said 'wane: allot: Mon 11 May 01:10 MDT (07:10 UTC) to Mon 11 May 06:09:'
quiet site set "$hill" --half sunset >"$scratch/out"
check "by sunset" grep -q ', nights halved by sunset$' "$scratch/out"
quiet night 2026-05-10 --site "$hill" --format json >"$scratch/sunset.json"
quiet site set "$hill" --half dark >"$scratch/out"
check "dark is the rule where none is said" sh -c '! grep -q halved "$1"' - "$scratch/out"
check "json says it" grep -q '"half": "dark", "sky": {}, "extinction": {}, "telescope": null}' <<-EOT
	$(quiet site show "$hill" --format json)
EOT
quiet night 2026-05-10 --site "$hill" --format json >"$scratch/dark.json"
half() { grep '"allotted"' "$1" | cut -d'"' -f4; }
check "the middles of dark and of Sun differ by seconds" test "$(half "$scratch/dark.json")" != "$(half "$scratch/sunset.json")"
check "both are there, in the same minute" sh -c 'test -n "$1" && test "$(echo "$1" | cut -c1-16)" = "$(echo "$2" | cut -c1-16)"' - "$(half "$scratch/dark.json")" "$(half "$scratch/sunset.json")"
quiet site add 'Tern East' --place 38.62,-108,2100 --zone America/Denver --half sunset >"$scratch/out"
check "site add --half" grep -q ', nights halved by sunset$' "$scratch/out"
check "site add --half: kept" test "$(quiet site show 'Tern East')" = "$(cat "$scratch/out")"
quiet undo >"$scratch/out"
check "undone with its site" sh -c '! "$1" site list --db "$2" | grep -q East' - "$WANE" "$db"

# --- several sites: each its own
quiet allot add 2026-04-22 whole --site 'Tern North' >/dev/null
quiet season 2026-04-22 2026-04-22 --site "$hill" --site 'Tern North' --all --format csv >"$scratch/two.csv"
check "a season of two sites cuts each by its own" test "$(grep '^Tern Hill' "$scratch/two.csv" | grep -c :allotment)" = "$(grep -c :allotment "$scratch/n.csv")"

# --- taken away, undone
count() { quiet allot list --site "$hill" --format csv | sed 1d | wc -l; }
n=$(count)
quiet allot remove 1 >"$scratch/out"
check "allot remove: exit 0" test $? = 0
check "allot remove: gone" test "$(count)" = $((n - 1))
quiet night 2026-04-22 --site "$hill" --all --format csv >"$scratch/out"
check "the night is whole again" sh -c '! grep -q :allotment "$1"' - "$scratch/out"
quiet undo >"$scratch/out"
check "undo: exit 0" test $? = 0
check "undo brings it back" test "$(count)" = "$n"
quiet night 2026-04-22 --site "$hill" --all --format csv >"$scratch/out"
check "and the cut with it" cmp -s "$scratch/out" "$scratch/n.csv"
quiet telescope set Big slew_deg_s=3 --site "$hill" >/dev/null
quiet undo >/dev/null
check "undo of telescope set" grep -q '^  slew_deg_s  *2 deg/s$' <<-EOT
	$(quiet telescope show Big --site "$hill")
EOT
quiet telescope remove Big --site "$hill" >"$scratch/out"
check "telescope remove: exit 0" test $? = 0
check "telescope remove: gone" test "$(quiet telescope list --site "$hill" --format csv | sed 1d | cut -d, -f2)" = Small
quiet allot list --site "$hill" >"$scratch/out"
check "its allotments say so" grep -q '; telescope (removed)$' "$scratch/out"
quiet undo >/dev/null
check "undo of telescope remove" test "$(quiet telescope list --site "$hill" --format csv | sed 1d | wc -l)" = 2
quiet check >"$scratch/out"
check "check: sound" grep -q '^sound: ' "$scratch/out"

# --- the demonstration has neither
"$WANE" demo --format json >"$scratch/out" 2>"$scratch/err"
check "demo: exit 0" test $? = 0
check "demo: the whole night" grep -q '"allotted": null' "$scratch/out"
check "demo: nothing to say" test ! -s "$scratch/err"
finish
