# What other programs rely on: headers, keys, order, exit codes of night, season, target, site, check, demo.
. tests/support/check.sh

db=$scratch/a.db
place=38.62,-109.36,2100
hill='Tern Hill'
quiet() { "$WANE" "$@" --db "$db" 2>"$scratch/err"; }
keys() { grep -o '^ *"[a-z0-9_]*":' | tr -d ' ":' | tr '\n' ' '; } # keys of an indented JSON text, in order
window='site telescope night target branch kind epoch mid_bjd_tdb mid_utc sigma_min sigma_contact_min t1_utc t2_utc t3_utc t4_utc reserve_start_utc reserve_end_utc latest_start_utc usable_start_utc usable_end_utc coverage cover_before cover_ingress cover_flat cover_egress cover_after base_before_min base_after_min lost_by chance_ingress chance_egress chance_mid chance_done airmass_start airmass_mid airmass_end airmass_min alt_mid_deg az_mid_deg sun_alt_mid_deg moon_sep_deg moon_alt_deg moon_lit sky_mag_arcsec2 flip_utc siblings depth_ppt band exposure_s noise_ppt_min depth_snr timing_s gain_bits sigma_after_min worth flags sun_sep_deg'
header=$(echo "$window" | tr ' ' ',')

# --- an empty store is an answer
quiet season 2026-04-01 2026-04-02 --place $place --format csv >"$scratch/out"
check "season of nothing: exit 0" test $? = 0
check "season of nothing: the header alone" test "$(cat "$scratch/out")" = "$header"
check "a missing store is noted" grep -q "^wane: store: $db: no such database" "$scratch/err"
check "reading makes no store" test ! -e "$db"
quiet check >"$scratch/out"
check "check of nothing: exit 0" test $? = 0
quiet night 2026-04-22 --place $place --format json >"$scratch/out"
check "night of nothing: exit 0" test $? = 0

# --- sites and targets
quiet site add "$hill" --place 38.62N,109.36W,2100m --zone America/Denver >"$scratch/out"
check "site add: exit 0" test $? = 0
check "site add echoes letters" grep -q '38.620000 N, 109.360000 W, 2100 m' "$scratch/out"
check "site list: csv" test "$(quiet site list --format csv)" = "name,latitude_deg,longitude_east_deg,height_m,zone
Tern Hill,38.62,-109.36,2100,America/Denver"
check "import counts" test "$("$WANE" import config-example/demo-targets.csv --db "$db" --dry-run 2>/dev/null)" != ""
n=$("$WANE" import config-example/demo-targets.csv --db "$db" --dry-run 2>/dev/null | sed 's/ read.*//')
check "a trial changes nothing" test "$(quiet target list --format csv | wc -l)" = 1
check "import" test "$(quiet import config-example/demo-targets.csv)" = "$n read, $n new, 0 changed, 0 same, 0 refused"
check "import again" test "$(quiet import config-example/demo-targets.csv)" = "$n read, 0 new, 0 changed, $n same, 0 refused"
check "target list: header" test "$(quiet target list --format csv | head -n 1)" = \
	"name,ra_deg,dec_deg,pm_ra_masyr,pm_dec_masyr,t0_jd,t0_err_d,time_scale,period_d,period_err_d,duration_h,depth_ppt,k,a_rs,inc_deg,ecc,omega_deg,mag,band,teff_k,rstar_rsun,mstar_msun,source,t0_period_cov_d2,dpde_d,dpde_err_d,duration_err_h,ttv_amp_min,plx_mas,pos_epoch_yr,priority,tags,note,sun_limit_deg,sun_limit_baseline_deg,alt_limit_deg,airmass_limit,moon_limit_deg,baseline_before_min,baseline_after_min,ecosw_err,t0_dpde_cov_d2,period_dpde_cov_d2"
quiet target list --format csv >"$scratch/list.csv"
"$WANE" import "$scratch/list.csv" --db "$scratch/b.db" >/dev/null 2>&1
check "targets out and in again" test "$("$WANE" target list --format csv --db "$scratch/b.db")" = "$(cat "$scratch/list.csv")"
quiet check >"$scratch/out"
check "check: sound" grep -q "^sound: " "$scratch/out"

# --- single targets
check "target add" quiet target add "Tern 900 b" --radec 10:00:00,-00:30:00 t0_jd=2461000.5 t0_err_d=0.001 period_d=3 period_err_d=1e-6 time_scale=BJD_TDB note="a, b"
check "the sign of -0 degrees is kept" test "$(quiet target show tern-900b --format csv | tail -n 1 | cut -d, -f1-3)" = "Tern 900 b,150,-0.5"
check "target set" quiet target set TERN900B mag=11.5 priority=2
check "target set: seen" test "$(quiet target show "tern 900 b" --format json | grep -c '"mag": 11.5')" = 1
check "a known name is not added twice" sh -c '! "$1" target add "tern900b" --radec 1,1 --db "$2" 2>/dev/null' - "$WANE" "$db"
check "target remove" quiet target remove "tern 900 b"
check "a removed target is gone" sh -c '! "$1" target show "tern900b" --db "$2" 2>/dev/null' - "$WANE" "$db"
check "site set" test "$(quiet site set "$hill" --zone America/Denver)" = "$(quiet site show "$hill")"

# --- windows
quiet night 2026-04-22 --format csv >"$scratch/night.csv"
check "night csv: header" test "$(head -n 1 "$scratch/night.csv")" = "$header"
check "night csv: a good night" test "$(wc -l <"$scratch/night.csv")" -ge 12
quiet night 2026-04-22 --format json >"$scratch/night.json"
check "night json: keys of the night" test "$(sed -n '/^  "night"/,/^  }/p' "$scratch/night.json" | keys)" = \
	"night date start_utc end_utc sunset_utc civil_dusk_utc nautical_dusk_utc astronomical_dusk_utc dusk_utc dawn_utc astronomical_dawn_utc nautical_dawn_utc civil_dawn_utc sunrise_utc sun_limit_deg moonrise_utc moonset_utc moon_lit usable_h allotted "
check "night json: top keys" test "$(grep -o '^  "[a-z_]*":' "$scratch/night.json" | tr -d ' ":' | tr '\n' ' ')" = "site limits night windows running_order running_order_kept "
check "night json: site" grep -q '"site": {"name": "Tern Hill", "latitude_deg": 38.62, "longitude_east_deg": -109.36, "height_m": 2100, "zone": "America/Denver"}' "$scratch/night.json"
check "night json: it is not kept" grep -q '^  "running_order_kept": false$' "$scratch/night.json"
check "night json: the running order, a proposal" test "$(sed -n '/^  "running_order"/,$p' "$scratch/night.json" | grep -c '"order": ')" -gt 2
check "night json: keys of a window" test "$(sed -n '/^  "windows"/,$p' "$scratch/night.json" | sed -n '/^    {/,/^    }/p' | sed '/^    }/q' | keys)" = "$window usable "
check "no nan anywhere" sh -c '! grep -Eiq "\b(nan|inf)\b" "$1" "$2"' - "$scratch/night.csv" "$scratch/night.json"
quiet night --now 2026-04-23T02:40Z --format csv | cmp -s - "$scratch/night.csv"
check "tonight is the night that contains now" test $? = 0
quiet night '2461153.61 JD_UTC' --format csv | cmp -s - "$scratch/night.csv"
check "a night by a Julian date" test $? = 0
quiet season 2026-04-22 2026-04-22 --format csv | cmp -s - "$scratch/night.csv"
check "a season of one night is that night" test $? = 0
quiet season 2026-04-20 2026-04-25 --format csv >"$scratch/season.csv"
check "both nights are included" test "$(tail -n +2 "$scratch/season.csv" | cut -d, -f3 | sort -u | sed -n '1p;$p' | tr '\n' ' ')" = "2026-04-20 2026-04-25 "
tail -n +2 "$scratch/season.csv" | awk -F, '{ print $3 "," $16 "," $4 }' >"$scratch/order"
check "rows by night, reserve start, target" sh -c 'LC_ALL=C sort -c "$1"' - "$scratch/order"
quiet season 2026-04-22 2026-04-23 --site "$hill" --place -30.1,-70.8,2200 --format csv >"$scratch/two.csv"
check "a place stands in the site column" grep -q '^"-30.1,-70.8,2200",' "$scratch/two.csv"
check "two sites in one season" test "$(grep -c "^$hill," "$scratch/two.csv")" -gt 0
quiet season 2026-04-22 2026-04-23 --format json >"$scratch/season.json"
check "season json: keys of a window" test "$(sed -n '/^  "windows"/,$p' "$scratch/season.json" | sed -n '/^    {/,/^    }/p' | sed '/^    }/q' | keys)" = "$window usable "
all=$(quiet night 2026-04-22 --all --format csv | wc -l)
check "--all lists more" test "$all" -gt "$(wc -l <"$scratch/night.csv")"
check "--target lists one" test "$(quiet night 2026-04-22 --all --target 'tern 14 b' --format csv | tail -n +2 | cut -d, -f4 | sort -u)" = "Tern 14 b"
check "limits are stated" test "$(quiet night 2026-04-22 --sun-limit -15 --baseline auto --kind both --min-chance 0.2 --format json | sed -n '/^  "limits"/,/^  }/p' | grep -c '"sun_limit_deg": -15,\|"sun_limit_baseline_deg": -15,\|"baseline_before_min": "auto",\|"baseline_after_min": "auto",\|"kind": "both",\|"min_chance": 0.2,')" = 6
printf '[limits]\nalt_limit_deg = 45\nsun_limit_deg = -18\n' >"$scratch/s.ini"
check "an option wins over the settings file" test "$(quiet night 2026-04-22 --settings "$scratch/s.ini" --alt-limit 40 --format json | grep -c '"alt_limit_deg": 40,\|"sun_limit_deg": -18')" = 3

# --- text
quiet night 2026-04-22 >"$scratch/text"
check "text names both dates" grep -q '22/23 Apr 2026' "$scratch/text"
check "text states the place with letters" grep -q '38.6200 N, 109.3600 W, 2100 m' "$scratch/text"
check "text has the cautions" grep -q 'never point a telescope near the Sun' "$scratch/text"
check "text never says nan" sh -c '! grep -Eiq "\bnan\b" "$1"' - "$scratch/text"
check "plain text has no table" sh -c '"$1" night 2026-04-22 --plain --db "$2" 2>/dev/null | grep -q "^Be on target: "' - "$WANE" "$db"
check "a night without darkness is an answer" sh -c '"$1" night 2026-06-21 --place 69.6,18.9,100 --db "$2" 2>/dev/null | grep -q "^No dark hour"' - "$WANE" "$db"

# --- demo
"$WANE" demo >"$scratch/demo" 2>"$scratch/err" </dev/null
check "demo without a terminal: exit 0" test $? = 0
check "demo says nothing on standard error" test ! -s "$scratch/err"
check "demo stands at the invented place" grep -q 'Tern Hill (38.6200 N, 109.3600 W, 2100 m)' "$scratch/demo"
"$WANE" demo >"$scratch/again" 2>/dev/null </dev/null
check "demo is the same every time" cmp -s "$scratch/demo" "$scratch/again"
check "demo leaves no store" test ! -e "$XDG_DATA_HOME/wane/wane.db"

# --- help
for command in night season sky clock import target site check demo; do
	check "$command --help" sh -c '"$1" "$2" --help | grep -q -- "--db FILE"' - "$WANE" $command
done
check "--help has the cautions" sh -c '"$1" --help | grep -q "never point a telescope near the Sun"' - "$WANE"
for command in import target; do
	check "$command --help lists the fields" test "$("$WANE" $command --help | sed -n '/^Fields of a target/,/^$/p' | grep -c '^  [a-z]')" = 43
done
check "target set ecosw_err" quiet target set "Tern 14 b" ecosw_err=0.001
check "target set ecosw_err: seen" test "$(quiet target show "tern 14 b" --format csv | tail -n 1 | sed 's/,,$//; s/.*,//')" = 0.001
check "--version" sh -c '"$1" --version | grep -Eq "^wane [0-9]+\.[0-9]+\.[0-9]+$"' - "$WANE"
finish
