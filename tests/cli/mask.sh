# The horizon mask of a site: read, stored, shown, used, taken away; what a mask file can have wrong.
. tests/support/check.sh

db=$scratch/a.db
hill='Tern Hill'
quiet() { "$WANE" "$@" --db "$db" 2>"$scratch/err"; }
points() { sed -n 's/^ *"mask_points": \([^,]*\),*$/\1/p' "$1"; }
lost_by() { tail -n +2 "$1" | cut -d, -f29; }
printf 'az_deg, alt_deg\n80, 25\n10, 12\n200, 10\n330, 18\n' >"$scratch/m.csv"
echo '0, 60' >"$scratch/high.csv"

# --- stored
quiet site add "$hill" --place 38.62,-109.36,2100 --zone America/Denver --mask "$scratch/m.csv" >"$scratch/out"
check "site add --mask: exit 0" test $? = 0
check "unsorted lines are told of" grep -qF "wane: mask: the azimuths of $scratch/m.csv do not rise from line to line; sorted" "$scratch/err"
check "site list counts the points" grep -q 'zone America/Denver, horizon mask of 4 points$' "$scratch/out"
quiet site show "$hill" >"$scratch/shown"
check "site show lists them by azimuth" test "$(tail -n +3 "$scratch/shown" | tr '\n' ' ')" = "10, 12 80, 25 200, 10 330, 18 "
quiet site list >"$scratch/list"
check "site list has one line" test "$(wc -l <"$scratch/list")" = 1
check "site show: json" grep -q '"mask": \[\[10, 12\], \[80, 25\], \[200, 10\], \[330, 18\]\]' <<-EOT
	$(quiet site show "$hill" --format json)
EOT
tail -n +2 "$scratch/shown" >"$scratch/back.csv"
quiet site set "$hill" --mask "$scratch/back.csv" >"$scratch/out"
check "what is shown can be read again" cmp -s "$scratch/out" "$scratch/shown"
check "without a note: it is sorted" test ! -s "$scratch/err"
quiet site set "$hill" --zone America/Denver >"$scratch/out"
check "site set without --mask keeps it" cmp -s "$scratch/out" "$scratch/shown"
quiet check >"$scratch/out"
check "check: sound" grep -q "^sound: " "$scratch/out"

# --- used
quiet import config-example/demo-targets.csv >/dev/null
quiet night 2026-04-22 --all --format json >"$scratch/night.json"
check "limits: the points of the stored mask" test "$(points "$scratch/night.json")" = 4
check "limits: what ranks windows comes behind it" sh -c 'grep -A1 "\"mask_points\"" "$1" | grep -q "\"need_min\": 2,"' - "$scratch/night.json"
quiet night 2026-04-22 --all --mask "$scratch/high.csv" --format json >"$scratch/high.json"
check "--mask wins over the stored one" test "$(points "$scratch/high.json")" = 1
quiet night 2026-04-22 --all --mask none --format json >"$scratch/none.json"
check "--mask none takes it off" test "$(points "$scratch/none.json")" = 0
quiet night 2026-04-22 --all --place 38.62,-109.36,2100 --format json >"$scratch/place.json"
check "a place has none" test "$(points "$scratch/place.json")" = 0
quiet night 2026-04-22 --all --place 38.62,-109.36,2100 --mask "$scratch/high.csv" --format json >"$scratch/place.json"
check "a place with --mask" test "$(points "$scratch/place.json")" = 1
quiet season 2026-04-22 2026-04-22 --all --mask "$scratch/high.csv" --format csv >"$scratch/season.csv"
quiet night 2026-04-22 --all --mask "$scratch/high.csv" --format csv >"$scratch/high.csv.out"
check "season uses it too" cmp -s "$scratch/season.csv" "$scratch/high.csv.out"
quiet night 2026-04-22 --all --mask none --format csv >"$scratch/none.csv"
check "without a mask it takes nothing" sh -c '! tail -n +2 "$1" | cut -d, -f29 | grep -q mask' - "$scratch/none.csv"
lost_by "$scratch/high.csv.out" >"$scratch/lost"
check "a mask of 60 degrees takes much" test "$(grep -c ':mask' "$scratch/lost")" -ge 5
# the mask is compared with apparent, the limit with airless altitudes: 0.01 deg at 60 deg, minutes of the clock at most
quiet night 2026-04-22 --all --mask none --alt-limit 60 --format csv >"$scratch/limit.csv"
check "as an altitude limit of 60 degrees would: within a share of 0.02" awk -F, '
	NR == FNR { share[$4 $6 $7] = $21; next }
	FNR > 1 && $21 != "" { d = $21 - share[$4 $6 $7]; if (d > 0.02 || d < -0.02) bad++; n++ }
	END { exit !(n >= 10 && bad == 0) }' "$scratch/limit.csv" "$scratch/high.csv.out"
quiet night 2026-04-22 >"$scratch/text"
check "text names it among the limits" grep -q 'target above [0-9]* deg and the horizon mask' "$scratch/text"
quiet season 2026-04-22 2026-04-22 --site "$hill" --place 1,1,1 --mask "$scratch/high.csv" >"$scratch/out"
check "one mask for two sites: exit 2" test $? = 2
check "and the reason" grep -q '^wane: --mask: a horizon mask belongs to one site' "$scratch/err"
quiet season 2026-04-22 2026-04-22 --site "$hill" --place 1,1,1 --format json >"$scratch/two.json"
check "two sites: each its own, none stated" test "$(points "$scratch/two.json")" = null

# --- sky: a star at the pole stands in the north, where the mask is 18 - (18 - 12) x 30/40 = 13.5 deg high (by hand)
quiet sky --radec 0,89.99 --at 2026-04-23T04:00Z >"$scratch/sky"
check "sky: above the mask" grep -Eq '^  above the horizon mask, which is 13\.[45] deg high there$' "$scratch/sky"
quiet sky --radec 0,89.99 --at 2026-04-23T04:00Z --mask "$scratch/high.csv" >"$scratch/sky"
check "sky: behind it" grep -q '^  behind the horizon mask, which is 60.0 deg high there$' "$scratch/sky"
quiet sky --radec 0,89.99 --at 2026-04-23T04:00Z --mask none >"$scratch/sky"
check "sky: nothing without one" sh -c '! grep -q mask "$1"' - "$scratch/sky"

# --- faults: place and reason, nothing stored
sum=$(cksum <"$db")
refuse() { # refuse PLACE-AND-REASON FILE-TEXT
	printf "$2" >"$scratch/bad.csv"
	for command in 'site set' 'night 2026-04-22'; do
		set -- "$1" "$2" $command
		text=$1
		shift 2
		[ "$1" = night ] || set -- "$@" "$hill"
		quiet "$@" --mask "$scratch/bad.csv" >"$scratch/out"
		check "$1: exit 1: $text" test $? = 1
		check "$1: $text: $(cat "$scratch/err")" grep -qF -- "wane: $scratch/bad.csv:$text" "$scratch/err"
		check "$1: no result: $text" test ! -s "$scratch/out"
		set -- "$text" "$(cat "$scratch/bad.csv")"
	done
}
refuse '2:1: az_deg: out of range (got "361", expected 0 to 360 deg)' '10, 5\n361, 5\n'
refuse '1:5: alt_deg: out of range (got "95", expected -10 to 90 deg)' '10, 95\n'
refuse '3:1: row: azimuth 80 deg stands twice, at 25 and 26 deg of altitude' '80, 25\n10, 1\n80, 26\n'
refuse '1:1: row: no point of a horizon mask' '# nothing\n'
refuse '1:5: alt_deg: ' '10, high\n'
awk 'BEGIN { for (i = 0; i <= 720; i++) print i / 2.01 ", 1" }' >"$scratch/many.csv"
quiet site set "$hill" --mask "$scratch/many.csv" >"$scratch/out"
check "721 points: exit 1" test $? = 1
check "721 points: the line" grep -qF "wane: $scratch/many.csv:721:1: row: more than 720 points" "$scratch/err"
quiet night 2026-04-22 --mask "$scratch/no.csv" >"$scratch/out"
check "no such file: exit 1" test $? = 1
check "no such file: said" grep -q "^wane: $scratch/no.csv: No such file" "$scratch/err"
quiet import config-example/demo-targets.csv --mask "$scratch/m.csv" >"$scratch/out"
check "import takes no --mask" test $? = 2
check "the store is as it was" test "$(cksum <"$db")" = "$sum"

# --- taken away
quiet site set "$hill" --mask none >"$scratch/out"
check "site set --mask none" test "$(quiet site show "$hill")" = "$(quiet site list)"
check "nothing of it is left" sh -c '! grep -q mask "$1"' - "$scratch/out"
check "json: an empty list" grep -q '"mask": \[\]' <<-EOT
	$(quiet site show "$hill" --format json)
EOT
quiet site set "$hill" --mask config-example/horizon-mask.csv >"$scratch/out"
check "the example can be stored" grep -q 'horizon mask of 16 points' "$scratch/out"

# --- east and west swapped
quiet site add 'Tern East' --place 38.62,109.36,2100 --zone America/Denver >"$scratch/out"
check "a zone far off the longitude: stored all the same" test $? = 0
check "and asked about" grep -q '^wane: zone: America/Denver is .* h off the longitude 109.3600 E: are east and west swapped?$' "$scratch/err"
quiet site add 'Tern West' --place 38.62,-109.36,2100 --zone America/Denver >"$scratch/out"
check "where it fits nothing is asked" test ! -s "$scratch/err"
finish
