# Forecasts from outside: columns, flags, derivation, sky, plans, with a telescope on the demo list.
. tests/support/check.sh

db=$scratch/a.db
night=2026-04-22
quiet() { "$WANE" "$@" --db "$db" 2>"$scratch/err"; }
code() { quiet "$@" >/dev/null; echo $?; }
said() { grep -qF -- "$1" "$scratch/err"; }
# cell FILE COLUMN TARGET: of the target's row; no cell of these tables that stands before holds a comma but flags' and names'
cell() {
	awk -F, -v name="$2" -v target="$3" 'NR == 1 { for (i = 1; i <= NF; i++) { if ($i == name) at = i; if ($i == "target") who = i } next }
		$who == target { print $at }' "$1"
}
near() { awk -v a="$1" -v b="$2" -v by="$3" 'BEGIN { d = a - b; exit !(a != "" && b != "" && d <= by && d >= -by) }'; }
figures='sky_mag_arcsec2 band exposure_s noise_ppt_min depth_snr timing_s gain_bits worth'

quiet import config-example/demo-targets.csv >/dev/null
quiet site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver >/dev/null
quiet night $night --format csv >"$scratch/none.csv"
for f in $figures sigma_after_min; do
	check "without a telescope $f is empty" test "$(cell "$scratch/none.csv" $f 'Tern 14 b')" = ''
done
check "--explain without a telescope: exit 1" test "$(code night $night --explain 'Tern 14 b')" = 1
check "which says what is missing" said 'aperture_m and band'

# --- a telescope without a band forecasts nothing; with it everything is there
quiet telescope add Half aperture_m=0.5 obstruction=0.3 throughput=0.35 pixel_arcsec=0.8 gain_e_adu=1 read_noise_e=8 dark_e_s=0.1 full_well_e=100000 defocus_px=8 dead_s=5 red_noise_ppt=0.5 >/dev/null
quiet night $night --format csv >"$scratch/t.csv"
check "no band, no forecast" test "$(cell "$scratch/t.csv" noise_ppt_min 'Tern 14 b')$(cell "$scratch/t.csv" band 'Tern 14 b')" = ''
quiet telescope set Half band=R >/dev/null
quiet night $night --format csv >"$scratch/t.csv"
for f in $figures sigma_after_min; do
	check "with one $f is there" test "$(cell "$scratch/t.csv" $f 'Tern 14 b')" != ''
done
check "the band" test "$(cell "$scratch/t.csv" band 'Tern 14 b')" = R
check "worth is priority 2 x gain" near "$(cell "$scratch/t.csv" worth 'Tern 14 b')" "$(cell "$scratch/t.csv" gain_bits 'Tern 14 b' | awk '{ print 2 * $1 }')" 0.0011
check "the same windows as without" test "$(cut -d, -f4,7,8 "$scratch/t.csv")" = "$(cut -d, -f4,7,8 "$scratch/none.csv")"
quiet night $night --format csv >"$scratch/again.csv"
check "the same bytes twice" cmp -s "$scratch/t.csv" "$scratch/again.csv"
quiet season $night $night --format csv >"$scratch/again.csv"
check "season says the same" cmp -s "$scratch/t.csv" "$scratch/again.csv"

# --- what is assumed is said, and no longer once it is stored
flags() { grep ',Tern 14 b,' "$1"; }
check "the dark sky is assumed" sh -c 'echo "$1" | grep -q sky_assumed' - "$(flags "$scratch/t.csv")"
check "the magnitude is one in V" sh -c 'echo "$1" | grep -q magnitude_assumed' - "$(flags "$scratch/t.csv")"
check "the optics are all given" sh -c '! echo "$1" | grep -q optics_assumed' - "$(flags "$scratch/t.csv")"
quiet site set 'Tern Hill' --sky R=19.5 >/dev/null
quiet night $night --format csv >"$scratch/bright.csv"
check "a stored sky is none" sh -c '! echo "$1" | grep -q sky_assumed' - "$(flags "$scratch/bright.csv")"
check "a brighter one is noisier" awk -v a="$(cell "$scratch/bright.csv" noise_ppt_min 'Tern 14 b')" -v b="$(cell "$scratch/t.csv" noise_ppt_min 'Tern 14 b')" 'BEGIN { exit !(a > b) }'
check "and is what the sky shows" awk -v a="$(cell "$scratch/bright.csv" sky_mag_arcsec2 'Tern 14 b')" 'BEGIN { exit !(a < 19.6 && a > 19.2) }'
check "marks of text are letters" test "$(quiet night $night | grep -c '^  [^a-zA-Z ]  [a-z_]* (')" = 0

# --- wane sky gives the same sky in the telescope's band, V without one
mid=$(cell "$scratch/bright.csv" mid_utc 'Tern 14 b')
sky() { quiet sky 'Tern 14 b' --format json "$@" | sed -n 's/^ *"sky_mag_arcsec2": \([^,]*\),*$/\1/p'; }
check "wane sky: the same" near "$(sky --at "$mid")" "$(cell "$scratch/bright.csv" sky_mag_arcsec2 'Tern 14 b')" 0.01
check "in day it is too bright to say" test "$(sky --at 2026-04-22T19:00:00Z)" = null
check "at another place it is V's" awk -v a="$(sky --at "$mid" --place 38.62,-109.36,2100)" 'BEGIN { exit !(a > 20.5 && a < 21.7) }'

# --- the derivation ends in the figures of the table
quiet night $night --explain 'tern14b' >"$scratch/x.txt"
check "--explain: exit 0" test $? = 0
check "ten steps" test "$(grep -c '^[0-9]*\. ' "$scratch/x.txt")" = 10
figure() { sed -n "s/^ *$1  *\([-0-9.]*\) .*/\1/p" "$scratch/x.txt" | head -n 1; }
check "noise" test "$(figure 'a usable minute')" = "$(cell "$scratch/bright.csv" noise_ppt_min 'Tern 14 b')"
check "gain" test "$(figure gain)" = "$(cell "$scratch/bright.csv" gain_bits 'Tern 14 b')"
check "worth" test "$(figure worth)" = "$(cell "$scratch/bright.csv" worth 'Tern 14 b')"
check "timing" near "$(figure 'as predicted')" "$(cell "$scratch/bright.csv" timing_s 'Tern 14 b')" 0.051
check "S/N" near "$(figure 'S\/N')" "$(cell "$scratch/bright.csv" depth_snr 'Tern 14 b')" 0.051
check "a row each quarter of an hour" test "$(sed -n '/^10\. /,/^$/p' "$scratch/x.txt" | grep -c '^  [0-2][0-9]:[0-5][0-9] ')" -ge 10
check "the cautions stand below" grep -q '^Cautions' "$scratch/x.txt"
check "--plain has no columns" test "$(quiet night $night --explain 'Tern 14 b' --plain | grep -c '^  gain: [0-9.]* bit\. ')" = 1
check "an unknown target: exit 1" test "$(code night $night --explain 'Tern 99 b')" = 1
check "said" said 'no such target is stored (got "Tern 99 b"'
check "one that has no event in that night: exit 1" test "$(code night 2026-04-23 --explain 'Tern 14 b')" = 1
check "as json: refused" test "$(code night $night --explain 'Tern 14 b' --format json)" = 2
check "season has no such option" test "$(code season $night $night --explain 'Tern 14 b')" = 2

# --- a plan stands on it
quiet plan $night --format json >"$scratch/p.json"
check "a plan: exit 0" test $? = 0
check "its windows carry the forecast" grep -q '^ *"gain_bits": [0-9]' "$scratch/p.json"
check "its worth is the sum of its items'" awk '/^  "worth_total"/ { gsub(/[^0-9.]/, ""); total = $0 } /^      "worth":/ { gsub(/[^0-9.]/, ""); sum += $0 }
	END { d = total - sum; exit !(total > 0 && d < 1e-4 && d > -1e-4) }' "$scratch/p.json"

# --- goals that are met are worth nothing
quiet goal set 'Tern 14 b' 1 0 --band V >/dev/null
quiet night $night --format csv >"$scratch/goal.csv"
check "a goal in another band: worth 0" test "$(cell "$scratch/goal.csv" worth 'Tern 14 b')" = 0.000
check "the gain stays" test "$(cell "$scratch/goal.csv" gain_bits 'Tern 14 b')" = "$(cell "$scratch/bright.csv" gain_bits 'Tern 14 b')"
finish
