# What the mount of the chosen telescope takes of a night: its flip, its limits, in every kind of table.
. tests/support/check.sh

db=$scratch/a.db
quiet() { "$WANE" "$@" --db "$db" 2>"$scratch/err"; }
# cell FILE TARGET COLUMN: of a table whose cells hold no commas up to there
cell() {
	awk -F, -v target="$2" -v name="$3" 'NR == 1 { for (i = 1; i <= NF; i++) { if ($i == name) at = i; if ($i == "target") key = i } }
		NR > 1 && $key == target { gsub(/"/, "", $at); print $at; exit }' "$1"
}
# seconds UTC: of a time of 2026-04-22 or -23
seconds() { echo "$1" | awk -F'[-T:Z]' '{ print (($3 * 24 + $4) * 60 + $5) * 60 + $6 }'; }
night() { quiet night 2026-04-22 --all --format csv >"$scratch/$1.csv"; }
some() { awk -F, -v name="$2" 'NR == 1 { for (i = 1; i <= NF; i++) if ($i == name) at = i } NR > 1 && $at != "" { n++ } END { print n + 0 }' "$scratch/$1.csv"; }

quiet site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver >/dev/null
quiet import config-example/demo-targets.csv >/dev/null
night bare
check "without a telescope nothing flips" test "$(some bare flip_utc)" = 0

# --- a telescope that says nothing of its mount, and mounts that do not flip
quiet telescope add Big flip_min=8 >/dev/null
for kind in '' fork altaz; do
	quiet telescope set Big mount=$kind >/dev/null
	night other
	sed 's/^Tern Hill,Big,/Tern Hill,,/' "$scratch/other.csv" >"$scratch/same.csv"
	check "mount=$kind: all as without a telescope" cmp -s "$scratch/same.csv" "$scratch/bare.csv"
done

# --- a german mount
quiet telescope set Big mount=german >/dev/null
night german
check "a german mount flips" test "$(some german flip_utc)" -gt 5
flip=$(cell "$scratch/german.csv" 'Tern 14 b' flip_utc)
check "the flip of an event over the meridian: $flip" sh -c 'echo "$1" | grep -q "^2026-04-23T0[0-9]:[0-5][0-9]:[0-5][0-9]Z$"' - "$flip"
check "no allowance: between T2 and T3" test "$(seconds "$flip")" -gt "$(seconds "$(cell "$scratch/german.csv" 'Tern 14 b' t2_utc)")" -a \
	"$(($(seconds "$flip") + 480))" -lt "$(seconds "$(cell "$scratch/german.csv" 'Tern 14 b' t3_utc)")"
check "it is what the flat part loses" test "$(cell "$scratch/german.csv" 'Tern 14 b' lost_by)" = 'flat:flip'
want=$(awk -v a="$(seconds "$(cell "$scratch/german.csv" 'Tern 14 b' t2_utc)")" -v b="$(seconds "$(cell "$scratch/german.csv" 'Tern 14 b' t3_utc)")" 'BEGIN { print 1 - 480 / (b - a) }')
check "8 min of it: $want" awk -v got="$(cell "$scratch/german.csv" 'Tern 14 b' cover_flat)" -v want="$want" 'BEGIN { d = got - want; exit !(d < 0.0003 && d > -0.0003) }'
check "and both limbs stay" test "$(cell "$scratch/german.csv" 'Tern 14 b' chance_done)" = "$(cell "$scratch/bare.csv" 'Tern 14 b' chance_done)"
at=$(quiet sky 'Tern 14 b' --at "$flip" --format json | sed -n 's/^ *"ha_deg": \([-0-9.]*\),*$/\1/p')
check "the star is on the meridian then, to a second: $at deg" awk -v h="$at" 'BEGIN { exit !(h != "" && h < 0.0042 && h > -0.0042) }'
quiet night 2026-04-22 --all --format json >"$scratch/night.json"
check "json: the same flip" grep -q "\"flip_utc\": \"$flip\"" "$scratch/night.json"
check "json: null without one" grep -q '"flip_utc": null' "$scratch/night.json"
check "json: lost_by" grep -q '"lost_by": "flat:flip"' "$scratch/night.json"
quiet season 2026-04-22 2026-04-22 --all --format csv >"$scratch/season.csv"
check "season: the same" test "$(cell "$scratch/season.csv" 'Tern 14 b' flip_utc)" = "$flip"
quiet night 2026-04-22 >"$scratch/out"
check "text: lost to the flip" grep -q '^Tern 14 b .* flat: flip' "$scratch/out"

# --- allowance: an ingress on the meridian is spared, and what needs no flip has none
check "no allowance: in the egress of Tern 74 b" test "$(cell "$scratch/german.csv" 'Tern 74 b' lost_by)" = 'flat:flip;egress:flip'
quiet telescope set Big flip_before_min=20 flip_after_min=20 >/dev/null
night twenty
check "20 min of allowance: not in the egress" test "$(cell "$scratch/twenty.csv" 'Tern 74 b' cover_egress)" = 1.0000
check "but in the flat part" test "$(cell "$scratch/twenty.csv" 'Tern 74 b' lost_by)" = 'flat:flip'
quiet telescope set Big flip_before_min=60 flip_after_min=60 >/dev/null
night sixty
check "60 min: the east side reaches the end" test -z "$(cell "$scratch/sixty.csv" 'Tern 74 b' flip_utc)"
check "and nothing is lost" test "$(cell "$scratch/sixty.csv" 'Tern 74 b' coverage)" = 1.0000

# --- limits
quiet telescope set Big mount=fork ha_west_h=1 >/dev/null
night west
check "hour angle: lost to the mount" grep -q 'egress:mount' "$scratch/west.csv"
check "a fork flips nowhere" test "$(some west flip_utc)" = 0
quiet night 2026-04-22 --all --format json >"$scratch/night.json"
check "json: the mount in lost_by" grep -q '"lost_by": "[a-z:;]*after:mount"' "$scratch/night.json"
quiet telescope set Big ha_west_h= alt_max_deg=60 >/dev/null
night high
check "highest altitude: lost to the mount" grep -q 'flat:mount' "$scratch/high.csv"
quiet telescope set Big alt_max_deg= mount=altaz zenith_deg=15 >/dev/null
night zenith
check "zenith: lost to the mount" grep -q ':mount' "$scratch/zenith.csv"
quiet telescope set Big zenith_deg= >/dev/null
night other
sed 's/^Tern Hill,Big,/Tern Hill,,/' "$scratch/other.csv" >"$scratch/same.csv"
check "limits taken away: as before" cmp -s "$scratch/same.csv" "$scratch/bare.csv"
check "a place has no mount" test "$(quiet night 2026-04-22 --place 38.62,-109.36,2100 --all --format csv | grep -c mount)" = 0

finish
