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
# below the horizon there is no sky
check "the sky behind it" test "$(key sky_mag_arcsec2)" != null
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
run clock 2031-01-01T00:00Z --from UTC --to JD_TT >/dev/null
check "UTC beyond the leap-second table is told of" grep -q '^wane: leap seconds: the table is known to be complete until' "$scratch/err"
run clock 2461114.5 --from JD_UTC --to JD_TT >/dev/null
check "UTC within it is not" sh -c '! grep -q "leap seconds" "$1"' - "$scratch/err"
# Denver is 7 h behind UTC in winter (IANA time zone database)
check "a leap second in local time" grep -q '^Time: 2016-12-31T23:59:60Z, 16:59:60 MST' <<-EOT
	$(run site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver >/dev/null && run sky --at 2016-12-31T23:59:60Z)
EOT
check "-0 is 0" sh -c '"$1" night 2026-04-22 --place 38.62,-109.36,2100 --sun-limit -0 --format json --db "$2" 2>/dev/null | grep -q "\"sun_limit_deg\": 0,"' - "$WANE" "$db"

# --- near the end of the dates: the place as usual, no next mid-time
"$WANE" sky 'tern14b' --at 2100-12-31T22:00Z --place 38.62,-109.36,2100 --db "$db" --format json >"$scratch/sky" 2>"$scratch/err"
check "sky at the end of the dates: exit 0: $(cat "$scratch/err")" test $? = 0
check "sky at the end: a place" sh -c 'test "$1" != null && test -n "$1"' - "$(key alt_deg)"
check "sky at the end: no next mid-time" test "$(key next_mid_bjd_tdb)$(key next_mid_utc)" = nullnull
check "sky at the end: an epoch" test "$(key epoch)" -gt 6000

# --- the night of a clock change: Denver goes from UTC-6 to UTC-7 on 1 Nov 2026 at 08:00 UTC (IANA time zone database); one transit
# 01:30 MDT to 01:30 MST has its mid-time at 08:00 UTC
"$WANE" target add 'Tern 20 b' --radec 30,35 t0_jd=2461345.833333 t0_err_d=0.0001 period_d=4 period_err_d=0.00001 duration_h=1 time_scale=JD_UTC --db "$db" 2>/dev/null
set -- --target 'Tern 20 b' --site 'Tern Hill' --db "$db"
"$WANE" site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --db "$db" >/dev/null 2>&1
"$WANE" night 2026-10-31 --all "$@" >"$scratch/text" 2>/dev/null
check "the head says what the mark means" grep -qF 'from MDT to MST: in the table a time with * is MST, one without is MDT.' "$scratch/text"
check "the repeated hour is told apart: $(grep '^Tern 20 b' "$scratch/text")" grep -q '^Tern 20 b .* 01:30  01:30\* ' "$scratch/text"
"$WANE" season 2026-10-31 2026-11-01 --all "$@" >"$scratch/text" 2>/dev/null
check "a season says so too" grep -q 'there a time with \* is one after the change' "$scratch/text"
check "a season marks it" grep -q 'Tern 20 b .* 01:30  01:30\* ' "$scratch/text"
"$WANE" season 2026-11-02 2026-11-03 --all "$@" >"$scratch/text" 2>/dev/null
check "no change, no mark" sh -c '! grep -q "[0-9]\*" "$1" && ! grep -q "clocks change" "$1"' - "$scratch/text"

# --- a site that is named twice is one
"$WANE" season 2026-10-31 2026-11-01 --all --target 'Tern 20 b' --site 'Tern Hill' --format csv --db "$db" >"$scratch/one" 2>/dev/null
"$WANE" season 2026-10-31 2026-11-01 --all --target 'Tern 20 b' --site 'Tern Hill' --site tern-HILL --format csv --db "$db" 2>/dev/null | cmp -s - "$scratch/one"
check "a site named twice" test $? = 0
"$WANE" season 2026-10-31 2026-11-01 --all --target 'Tern 20 b' --place 38.62,-109.36,2100 --format csv --db "$db" >"$scratch/one" 2>/dev/null
"$WANE" season 2026-10-31 2026-11-01 --all --target 'Tern 20 b' --place 38.62,-109.36,2100 --place 38.62,-109.36,2100 --format csv --db "$db" 2>/dev/null | cmp -s - "$scratch/one"
check "a place named twice" test $? = 0
finish
