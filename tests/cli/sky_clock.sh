# `wane clock` and `wane sky` against tables made with astropy 5.2.1 (built-in ERFA ephemeris, IERS-B UT1-UTC), on every row. A row of the table is
# rounded to 1e-8 d (0.86 ms), so times are compared with the light time that stands beside it: within 0.3 ms.
. tests/support/check.sh

grid=tests/data/bjd_grid_astropy.csv
run() { "$WANE" "$@" --db "$scratch/none.db" 2>"$scratch/err"; }

# a - b in seconds of two Julian dates whose digits do not fit a double: whole days and the rest apart
seconds_between() { awk -v a="$1" -v b="$2" 'BEGIN { split(a, x, "."); split(b, y, "."); printf "%.7f", (x[1] - y[1] + ("0." x[2]) - ("0." y[2])) * 86400 }'; }
within() { awk -v a="$1" -v b="$2" -v t="$3" 'BEGIN { d = a - b; exit !(d <= t && -d <= t) }'; }
# difference of two angles, as seen on the sky at an altitude
within_angle() { awk -v a="$1" -v b="$2" -v alt="$3" -v t="$4" 'BEGIN { d = a - b; while (d > 180) d -= 360; while (d < -180) d += 360; d *= cos(alt * 0.017453292519943295); exit !(d <= t && -d <= t) }'; }

grep -v '^#' "$grid" | tail -n +2 >"$scratch/rows"
while IFS=, read -r jd lat lon height ra dec dut1 tdb_utc bary helio bjd hjd; do
	set -- --place "$lat,$lon,$height" --radec "$ra,$dec" --ut1-utc "$dut1"
	got=$(run clock "$jd" --from JD_UTC --to BJD_TDB "$@")
	want=$(awk -v a="$tdb_utc" -v b="$bary" 'BEGIN { printf "%.6f", a + b }')
	check "BJD_TDB of $jd: $got" within "$(seconds_between "$got" "$jd")" "$want" 0.0003
	check "BJD_TDB of $jd as in the table: $bjd" within "$(seconds_between "$got" "$bjd")" 0 0.0009
	back=$(run clock "$got" --from BJD_TDB --to JD_UTC "$@")
	check "$jd there and back: $back" within "$(seconds_between "$back" "$jd")" 0 0.000002
	got=$(run clock "$jd" --from JD_UTC --to HJD_UTC "$@")
	check "HJD_UTC of $jd: $got" within "$(seconds_between "$got" "$jd")" "$helio" 0.0003
	check "HJD_UTC of $jd as in the table: $hjd" within "$(seconds_between "$got" "$hjd")" 0 0.0009
done <"$scratch/rows"
check "the grid of times has 30 rows" test "$(wc -l <"$scratch/rows")" = 30

key() { sed -n "s/^ *\"$1\": \([^,]*\),*$/\1/p" "$scratch/sky"; }
grep -v '^#' tests/data/altaz_moon_grid_astropy.csv | tail -n +2 >"$scratch/rows"
while IFS=, read -r utc jd lat lon height dut1 ra dec alt az sun moon_alt moon_az sep lit; do
	run sky --at "$utc" --place "$lat,$lon,$height" --radec "$ra,$dec" --ut1-utc "$dut1" --format json >"$scratch/sky"
	check "altitude at $utc" within "$(key alt_deg)" "$alt" 0.0003
	check "azimuth at $utc" within_angle "$(key az_deg)" "$az" "$alt" 0.0003
	check "Sun at $utc" within "$(key sun_alt_deg)" "$sun" 0.0004
	# the table's Moon is good to 10 arcsec
	check "Moon at $utc" within "$(key moon_alt_deg)" "$moon_alt" 0.003
	check "Moon's azimuth at $utc" within_angle "$(key moon_az_deg)" "$moon_az" "$moon_alt" 0.003
	check "Moon's distance at $utc" within "$(key moon_sep_deg)" "$sep" 0.003
	check "Moon's lit share at $utc" within "$(key moon_lit)" "$lit" 0.0002
done <"$scratch/rows"
check "the grid of directions has 30 rows" test "$(wc -l <"$scratch/rows")" = 30
check "sky: keys in order" test "$(grep -o '^ *"[a-z0-9_]*":' "$scratch/sky" | tr -d ' ":' | tr '\n' ' ')" = \
	"utc jd_utc bjd_tdb hjd_utc lst_deg ra_deg dec_deg ha_deg alt_deg alt_apparent_deg az_deg parallactic_deg airmass sun_alt_deg sun_az_deg moon_ra_deg moon_dec_deg moon_alt_deg moon_az_deg moon_sep_deg moon_lit sky_mag_arcsec2 sun_sep_deg "

# --- the night of a leap second, UT1 - UTC given for the instant (ERFA 2.0 atco13, no air, dut1 = 0)
run sky --radec 100,20 --at 2017-01-01T03:00:00Z --place 38.62,-109.36,2100 --format json >"$scratch/sky"
check "altitude after the leap second" within "$(key alt_deg)" 32.62318 0.0003
check "azimuth after the leap second" within "$(key az_deg)" 89.54602 0.0003
run sky --radec 100,20 --at 2016-12-31T23:30:00Z --place 38.62,-109.36,2100 --format json >"$scratch/sky"
check "altitude before the leap second" within "$(key alt_deg)" -6.43421 0.0003

# --- a target
db=$scratch/t.db
"$WANE" target add 'Tern 14 b' --radec 150,10 t0_jd=2461000.5 t0_err_d=0.001 period_d=4 period_err_d=0.00001 time_scale=BJD_TDB --db "$db" 2>/dev/null
"$WANE" sky 'tern14b' --at 2026-04-23T04:00Z --place 38.62,-109.36,2100 --db "$db" --format json >"$scratch/sky" 2>/dev/null
check "sky of a target: further keys" test "$(grep -o '^ *"[a-z0-9_]*":' "$scratch/sky" | tail -n 5 | tr -d ' ":' | tr '\n' ' ')" = "epoch phase next_mid_bjd_tdb next_mid_utc sigma_min "
# (2461153.667 - 2461000.5) / 4 = 38.29: by hand
check "epoch" test "$(key epoch)" = 38
check "next mid-time" test "$(key next_mid_bjd_tdb)" = 2461156.500000
check "phase" within "$(key phase)" "$(key bjd_tdb | awk '{ x = ($1 - 2461000.5) / 4; printf "%.8f", x - int(x) }')" 0.000002
# hypot(0.001, 39 * 0.00001) d in minutes
check "sigma" test "$(key sigma_min)" = 1.546
check "an unwritten sky is null" test "$(key sky_mag_arcsec2)" = null
"$WANE" sky --at 2026-04-23T04:00Z --place 38.62,-109.36,2100 --format json --db "$db" >"$scratch/sky" 2>/dev/null
check "sky without a star: Sun and Moon all the same" test "$(key alt_deg)$(key bjd_tdb)" = nullnull

# --- scales that need no direction; TT - UTC was 32.184 + 37 s in 2026 (IERS Bulletin C)
check "JD_UTC to JD_TT" test "$(run clock 2461114.5 --from JD_UTC --to JD_TT)" = 2461114.50080074074
check "UTC to JD_UTC" test "$(run clock 2026-03-15T00:00:00Z --from UTC --to JD_UTC)" = 2461114.50000000000
check "JD_TT to UTC" test "$(run clock 2461114.50080074074 --from JD_TT --to UTC)" = 2026-03-15T00:00:00.000Z
check "MJD and offsets" test "$(run clock 61114 --from MJD_UTC --to JD_UTC-2461000)" = 114.50000000000
check "a leap second is a time of its own" test "$(run clock 2016-12-31T23:59:60.500Z --from UTC --to UTC)" = 2016-12-31T23:59:60.500Z
check "the Earth's centre is told of" grep -q "Earth's centre" "$scratch/err"
run clock 2461114.5 --from JD_UTC --to BJD_TDB >/dev/null
check "light time without a direction: exit 1" test $? = 1
check "and the reason" grep -q '^wane: direction: ' "$scratch/err"
finish
