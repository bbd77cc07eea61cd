# Drift, mid-times, refit, versions, history and undo from outside: columns, keys, order, counts, published fits.
. tests/support/check.sh

db=$scratch/a.db
quiet() { "$WANE" "$@" --db "$db" 2>"$scratch/err"; }
keys() { grep -o '^ *"[a-z0-9_]*":' | tr -d ' ":' | tr '\n' ' '; }
now='--now 2026-04-23T03:00:00Z'
# column FILE NAME ROW: a cell of a table without quoted commas
column() {
	awk -F, -v name="$2" -v row="$3" 'NR == 1 { for (i = 1; i <= NF; i++) if ($i == name) at = i } $1 == row { print $at }' "$1"
}
# near A B TOLERANCE
near() { awk -v a="$1" -v b="$2" -v t="$3" 'BEGIN { exit !(a != "" && (a - b <= t && b - a <= t)) }'; }

# --- drift
drift='target branch epoch_now sigma_now_min at_utc sigma_at_min limit_min stale_on phase_lost_on last_midtime_utc midtimes next_mid_utc first_refresh_utc best_refresh_utc sigma_after_min stale_on_after flags'
header=$(echo "$drift" | tr ' ' ',')
quiet drift $now --format csv >"$scratch/out"
check "drift of nothing: exit 0" test $? = 0
check "drift of nothing: the header alone" test "$(cat "$scratch/out")" = "$header"
check "reading makes no store" test ! -e "$db"
"$WANE" import config-example/demo-targets.csv --db "$db" >/dev/null 2>&1
quiet drift $now --format csv >"$scratch/d.csv"
check "drift csv: header" test "$(head -n 1 "$scratch/d.csv")" = "$header"
check "drift csv: every target" test "$(wc -l <"$scratch/d.csv")" = 51
check "without a site the refresh columns are empty" test "$(cut -d, -f13-16 "$scratch/d.csv" | sed 1d | sort -u)" = ',,,'
check "and that is said" grep -q '^wane: site: none is chosen' "$scratch/err"
check "--at takes a bare date" test "$("$WANE" drift --db "$db" --no-refresh --at 2030-01-02 --format csv 2>/dev/null | cut -d, -f5 | sed 1d | sort -u)" = 2030-01-02T00:00:00Z
check "--at is today + 3 years" test "$(cut -d, -f5 "$scratch/d.csv" | sed 1d | sort -u)" = 2029-04-23T03:00:00Z
check "29 February + 3 years" test "$(quiet drift 'Tern 1 b' --now 2028-02-29T12:00Z --no-refresh --format csv | sed 1d | cut -d, -f5)" = 2031-02-28T12:00:00Z
check "the default limit is (30 - 15) / 2" test "$(cut -d, -f7 "$scratch/d.csv" | sed 1d | sort -u)" = 7.500
check "already stale" test "$(column "$scratch/d.csv" stale_on 'Tern 28 b')" = already
check "stale is a flag" test "$(column "$scratch/d.csv" flags 'Tern 7 b' | grep -c stale)" = 1
check "phase lost" test "$(column "$scratch/d.csv" phase_lost_on 'Tern 19 b')" = already
check "no errors: no sigma" test "$(column "$scratch/d.csv" sigma_now_min 'Tern 8 b')$(column "$scratch/d.csv" stale_on 'Tern 8 b')" = ''
check "no errors: the next mid-time all the same" test "$(column "$scratch/d.csv" next_mid_utc 'Tern 8 b')" != ''
quiet drift "Tern 14 b" --no-refresh $now --format json >"$scratch/d.json"
check "drift json: keys" test "$(keys <"$scratch/d.json")" = "$drift "
check "drift json: what is not known is null" grep -q '"branch": null' "$scratch/d.json"
quiet drift $now >"$scratch/text"
check "text: no errors, in words" grep -q 'Tern 8 b .*no errors published' "$scratch/text"
check "text: an assumed standard, in words" grep -q 'Tern 9 b .*time standard assumed' "$scratch/text"
check "text: a lost phase, in words" grep -q 'Tern 19 b .*PHASE LOST; STALE NOW' "$scratch/text"
check "text: no site, in words" grep -q '^Refresh: not searched, no site is chosen' "$scratch/text"
check "text: the worst first" test "$(sed -n '/^target /,$p' "$scratch/text" | sed -n 2p | cut -c1-9)" = 'Tern 19 b'
# set S of Deeg 2015, A&A 578, A17, eq. 3 worked by hand: s(E)^2 = s0^2 + E^2 sP^2; E = +-1446.0976 for 10 min
check "target add" quiet target add 'Tern 800 b' --radec 10:00:00,10:00:00 t0_jd=2458350.123456 t0_err_d=2.1e-4 period_d=3.4567890 period_err_d=4.8e-6 time_scale=BJD_TDB
quiet drift 'Tern 800 b' --no-refresh --limit 10 --now 2018-09-01T00:00Z --at '2461288.39 JD_TDB' --format csv >"$scratch/s.csv"
check "sigma at epoch 849: 5.876 min" near "$(column "$scratch/s.csv" sigma_at_min 'Tern 800 b')" 5.876 0.002
check "stale on JD 2463348.9778: 2032-04-26" test "$(column "$scratch/s.csv" stale_on 'Tern 800 b')" = 2032-04-26
quiet target set 'Tern 800 b' t0_period_cov_d2=-6.0e-10
check "with its covariance: E = 1472.3737" test "$(quiet drift 'Tern 800 b' --no-refresh --limit 10 --now 2018-09-01T00:00Z --format csv | sed 1d | cut -d, -f8)" = 2032-07-26
check "never below what T0 alone has" test "$(quiet drift 'Tern 800 b' --no-refresh --limit 0.1 --now 2018-09-01T00:00Z --format csv | sed 1d | cut -d, -f8)" = already
# the two versions lie epoch by epoch 0 apart: the covariance moves no mid-time
check "against: two versions" test "$(quiet drift 'Tern 800 b' --against 1 $now --format csv | sed -n 2p | cut -d, -f2)" = 0.000
quiet target set 'Tern 800 b' period_d=3.4567990
quiet drift 'Tern 800 b' --against 1 --limit 10 --now 2018-09-01T00:00Z --format json >"$scratch/g.json"
# 1e-5 d an orbit: 10 min after 694.4 orbits from T0 (JD 2458350.1), at JD 2460750.7
check "against: the date on which they part" grep -q '"parted_on": "2025-03-1[67]"' "$scratch/g.json"
check "target remove" quiet target remove 'Tern 800 b'

# --- sorting
quiet drift $now --sort sigma_now_min --format csv | sed 1d | cut -d, -f4 | sed '/^$/d' >"$scratch/sorted"
check "--sort: from the least" sort -n -c "$scratch/sorted"
quiet drift $now --sort -sigma_now_min --format csv | sed 1d | cut -d, -f4 | sed '/^$/d' >"$scratch/sorted"
check "--sort -: from the greatest" sort -n -r -c "$scratch/sorted"
check "--sort: empty cells last" test "$(quiet drift $now --sort -sigma_now_min --format csv | tail -n 1 | cut -d, -f1)" = 'Tern 8 b'
for c in $drift; do
	check "--sort $c" quiet drift $now --no-refresh --sort "$c" --format csv --out "$scratch/sort.$c"
done

# --- refresh
quiet site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver >/dev/null
quiet drift $now --format csv >"$scratch/r.csv"
first=$(column "$scratch/r.csv" first_refresh_utc 'Tern 7 b') best=$(column "$scratch/r.csv" best_refresh_utc 'Tern 7 b')
check "a stale target has a best refresh" test -n "$best"
check "and an adequate one" test -n "$first"
after=$(column "$scratch/r.csv" sigma_after_min 'Tern 7 b')
check "which leaves less than it would be" near 0 "$after" "$(column "$scratch/r.csv" sigma_at_min 'Tern 7 b')"
check "it is a window of that night" test "$(quiet season 2026-05-10 2026-05-11 --target 'Tern 7 b' --format csv | cut -d, -f9 | grep -c "$best")" = 1
check "a fresh target needs none" test "$(column "$scratch/r.csv" best_refresh_utc 'Tern 14 b')" = ''
quiet drift 'Tern 14 b' $now --format csv >"$scratch/n.csv"
check "one that is named is searched" test -n "$(column "$scratch/n.csv" best_refresh_utc 'Tern 14 b')"
check "--precision counts" test "$(quiet drift 'Tern 7 b' $now --precision 5 --format csv | sed 1d | cut -d, -f15)" != "$after"
printf '[run]\nrefresh_precision_min = 5\n' >"$scratch/s.ini"
check "so does the setting" test "$(quiet drift 'Tern 7 b' $now --settings "$scratch/s.ini" --format csv)" = "$(quiet drift 'Tern 7 b' $now --precision 5 --format csv)"
check "the precision is said" sh -c '"$1" drift $2 --db "$3" | grep -q "assumed to be good to 1 min"' - "$WANE" "$now" "$db"
check "error scale: the printed sigma stays" test "$(quiet drift $now --no-refresh --error-scale 3 --format csv)" = "$(quiet drift $now --no-refresh --format csv)"
check "drift --help has every column" test "$("$WANE" drift --help | sed -n '/^Columns of csv/,/^$/p' | grep -c '^  [a-z]')" = 17

# --- mid-times: published tables. The targets' count is that of the tables.
wasp=tests/data/midtimes_wasp4b.csv kelt=tests/data/midtimes_kelt16b.csv tres=tests/data/midtimes_tres3b.csv
quiet target add 'WASP-4 b' --radec 353.5627,-42.0614 t0_jd=2456180.5587 t0_err_d=0.0001 period_d=1.3382314 period_err_d=2e-7 time_scale=BJD_TDB
quiet target add 'KELT-16 b' --radec 314.2685,31.661 t0_jd=2458334.458 t0_err_d=0.0002 period_d=0.968993 period_err_d=2e-7 time_scale=BJD_TDB
quiet target add 'TrES-3 b' --radec 268.0293,37.5461 t0_jd=2456824.4074 t0_err_d=0.0003 period_d=1.306186 period_err_d=2e-7 time_scale=BJD_TDB
rows() { grep -c '^-\{0,1\}[0-9]' "$1"; }
n=$(rows $wasp)
check "import" test "$(quiet midtime import 'WASP-4 b' $wasp --scale BJD_TDB)" = "$n read, $n new, 0 same, 0 refused"
check "beyond 3 sigma is said" grep -q 'sigma from what the current ephemeris predicts' "$scratch/err"
check "import again" test "$(quiet midtime import 'WASP-4 b' $wasp --scale BJD_TDB)" = "$n read, 0 new, $n same, 0 refused"
sed '/^#/d' $wasp | cut -d, -f2- >"$scratch/uncounted.csv"
check "epochs are counted as the paper has them" test "$(quiet midtime import 'WASP-4 b' "$scratch/uncounted.csv" --scale BJD_TDB)" = "$n read, 0 new, $n same, 0 refused"
awk -F, -v OFS=, 'NR > 1 && $1 ~ /^-?[0-9]+$/ { $1 += 296 } { print }' $wasp >"$scratch/shifted.csv"
check "a table that counts from another T0" test "$(quiet midtime import 'WASP-4 b' "$scratch/shifted.csv" --scale BJD_TDB)" = "$n read, 0 new, $n same, 0 refused"
check "is said" grep -q 'counts from another T0 than the current ephemeris: -296 was added' "$scratch/err"
quiet midtime list 'WASP-4 b' --format csv >"$scratch/out.csv"
check "list csv is a mid-time table" test "$(head -n 1 "$scratch/out.csv")" = mid_jd,err_d,epoch,time_scale,kind,source,used
check "what is listed comes in again" test "$(quiet midtime import 'WASP-4 b' "$scratch/out.csv")" = "$n read, 0 new, $n same, 0 refused"
quiet midtime import 'KELT-16 b' $kelt --scale BJD_TDB >/dev/null
quiet midtime import 'TrES-3 b' $tres --scale BJD_TDB >/dev/null

# --- refit
quiet refit 'WASP-4 b' --format json >"$scratch/w.json"
check "refit json: keys" test "$(sed '/"residuals"/,$d' "$scratch/w.json" | keys)" = \
	"target n dof_linear ref_epoch jitter_s linear t0_bjd_tdb t0_err_d period_d period_err_d cov_d2 chi2 bic scale_factor quadratic t0_bjd_tdb t0_err_d period_d period_err_d cov_d2 dpde_d dpde_err_d dpdt_ms_yr dpdt_err_ms_yr chi2 bic scale_factor t0_dpde_cov_d2 period_dpde_cov_d2 scale_factor preferred "
check "refit json: residuals" grep -q '{"epoch": -1354, "kind": "transit", "mid_bjd_tdb": 2454368.592790000, "oc_min": [-0-9.]*, "err_min": 0.475200, "z": [-0-9.]*, "used": true,' "$scratch/w.json"
check "a residual for each time" test "$(grep -c '"oc_min"' "$scratch/w.json")" = "$n"
# value FILE KEY NTH
value() { grep -o "\"$2\": [^,}]*" "$1" | sed -n "${3}p" | sed 's/.*: //'; }
# Bouma et al. 2020, ApJL 893, L29, section 3: linear and quadratic; errors inflated by sqrt(chi2/dof)
check "WASP-4 b: T0" near "$(value "$scratch/w.json" t0_bjd_tdb 1)" 2456180.558712 0.000001
check "WASP-4 b: P" near "$(value "$scratch/w.json" period_d 1)" 1.338231429 2e-9
check "WASP-4 b: chi2" near "$(value "$scratch/w.json" chi2 1)" 276 0.6
check "WASP-4 b: quadratic chi2" near "$(value "$scratch/w.json" chi2 2)" 183 0.6
check "WASP-4 b: dP/dt" near "$(value "$scratch/w.json" dpdt_ms_yr 1)" -8.64 0.05
check "WASP-4 b: the quadratic one is preferred" grep -q '"preferred": "quadratic"' "$scratch/w.json"
# Ivshina & Winn 2022, ApJS 259, 62, Table 3
quiet refit 'KELT-16 b' --format json >"$scratch/k.json"
check "KELT-16 b: T0" near "$(value "$scratch/k.json" t0_bjd_tdb 1)" 2458334.458029 0.00002
check "KELT-16 b: P" near "$(value "$scratch/k.json" period_d 1)" 0.96899285 2e-8
quiet refit 'TrES-3 b' >"$scratch/t.txt"
check "TrES-3 b: the time that is 0.575 d off is an outlier" grep -q '^ *1308 transit .*OUTLIER' "$scratch/t.txt"
check "and that is said" grep -q '^wane: refit: .*outlier' "$scratch/err"
check "TrES-3 b: exclude it" test "$(quiet midtime exclude 'TrES-3 b' 1308 | cut -d' ' -f2)" = excluded
quiet refit 'TrES-3 b' --jitter 387.936 --format json >"$scratch/t.json" # 0.00449 d
check "TrES-3 b: T0 then" near "$(value "$scratch/t.json" t0_bjd_tdb 1)" 2456824.4074 0.0003
check "TrES-3 b: P then" near "$(value "$scratch/t.json" period_d 1)" 1.30618627 2.1e-7
check "an excluded time is still listed" grep -q '"used": false' "$scratch/t.json"
check "include it again" test "$(quiet midtime include 'TrES-3 b' 1308 | cut -d' ' -f2)" = included
check "--jitter fit" test "$(quiet refit 'KELT-16 b' --jitter fit --format json | grep -c '"jitter_s": [0-9]')" = 1
# another reference changes no prediction: the residuals are the same
quiet refit 'KELT-16 b' --format csv >"$scratch/k0.csv"
quiet refit 'KELT-16 b' --ref-epoch best --format csv >"$scratch/kb.csv"
check "--ref-epoch best: residuals" test "$(cut -d, -f1-4,6 "$scratch/k0.csv")" = "$(cut -d, -f1-4,6 "$scratch/kb.csv")"
best=$(quiet refit 'KELT-16 b' --ref-epoch best --format json | sed -n 's/.*"ref_epoch": \(-\{0,1\}[0-9]*\).*/\1/p')
check "--ref-epoch best is a number" test -n "$best"
check "--ref-epoch N: the same" test "$(quiet refit 'KELT-16 b' --ref-epoch "$best" --format csv)" = "$(cat "$scratch/kb.csv")"
quiet refit 'KELT-16 b' --prior >"$scratch/p.txt"
check "--prior adds the times to the current ephemeris" grep -q '^current ephemeris with the times added: T0 2458334.458' "$scratch/p.txt"

# --- adopting, and back
before=$(quiet target list --format csv) mids=$(quiet midtime list 'WASP-4 b' --format csv)
check "adopt" quiet refit 'WASP-4 b' --adopt quadratic --out "$scratch/fit.txt"
check "the list has changed" test "$(quiet target list --format csv)" != "$before"
check "two versions" test "$(quiet target show 'WASP-4 b' --format json | grep -c '"version": ')" = 2
check "the new one says what it is" test "$(quiet target show 'WASP-4 b' --format json | grep -c '"current": true.*"source": "refit of .* mid-times"')" = 1
check "text: who" sh -c '"$1" target show "WASP-4 b" --db "$2" 2>/dev/null | grep -q "2 (current).* by .*; refit of"' - "$WANE" "$db"
# J C J^T of the adopted covariance at epoch 3716, worked by hand from target show; without the covariances of the quadratic term it would be 0.554
check "it predicts with its whole covariance" near "$(quiet drift 'WASP-4 b' --no-refresh $now --format csv | sed 1d | cut -d, -f4)" 0.461 0.002
check "the prior would count them twice now" sh -c '"$1" refit "WASP-4 b" --prior --db "$2" 2>&1 >/dev/null | grep -q "double counting"' - "$WANE" "$db"
check "history" test "$(quiet history 'WASP-4 b' --format csv | sed -n 2p | cut -d, -f4)" = 'refit adopt'
check "undo" sh -c '"$1" undo --db "$2" 2>/dev/null | grep -q "^undone: change .*: refit adopt"' - "$WANE" "$db"
check "adopt then undo: the same list" test "$(quiet target list --format csv)" = "$before"
check "adopt then undo: the same mid-times" test "$(quiet midtime list 'WASP-4 b' --format csv)" = "$mids"
check "history says that it is undone" grep -q ',refit adopt,.*,1$' <<-EOT
	$(quiet history --format csv)
EOT
check "the version stays" quiet target adopt 'WASP-4 b' 2
check "adopted by number" test "$(quiet target show 'WASP-4 b' --format json | grep -c '"version": 2, "current": true')" = 1
check "and back" quiet target adopt 'WASP-4 b' 1
check "by number: the same list" test "$(quiet target list --format csv)" = "$before"
quiet refit 'KELT-16 b' --adopt linear --formal --out "$scratch/fit2.txt"
check "a linear one has no quadratic term" test "$(quiet target list --target 'KELT-16 b' --format csv | sed 1d | cut -d, -f25)" = ''
check "its covariance is stored" test "$(quiet target list --target 'KELT-16 b' --format csv | sed 1d | cut -d, -f24)" != ''

# --- single times
check "add" test "$(quiet midtime add 'Tern 14 b' 2461153.7988 0.0004 --scale BJD_TDB --source 'own "night", clear')" = "1 read, 1 new, 0 same, 0 refused"
check "add the same" test "$(quiet midtime add 'Tern 14 b' 2461153.7988 0.0004 --scale BJD_TDB)" = "1 read, 0 new, 1 same, 0 refused"
check "it counts in drift" test "$(quiet drift 'Tern 14 b' --no-refresh $now --format csv | sed 1d | cut -d, -f11)" = 1
check "its text is kept" test "$(quiet midtime list 'Tern 14 b' --format csv | sed 1d | cut -d, -f1)" = 2461153.7988
check "remove" test "$(quiet midtime remove 'Tern 14 b' "$(quiet midtime list 'Tern 14 b' --format csv | sed 1d | cut -d, -f3)")" = '1 removed (kept in history)'
check "a removed one is gone" test "$(quiet midtime list 'Tern 14 b' --format csv | wc -l)" = 1
check "undo brings it back" sh -c '"$1" undo --db "$2" >/dev/null 2>&1 && "$1" midtime list "Tern 14 b" --db "$2" --format csv | grep -q 2461153.7988' - "$WANE" "$db"
check "the store is sound" sh -c '"$1" check --db "$2" | grep -q "^sound"' - "$WANE" "$db"
# --- one night's mid-time put back into a published ephemeris: too few for a fit of its own, enough for the prior
one=$scratch/one.db
"$WANE" target add 'Tern 14 b' --radec 150,10 t0_jd=2460000.5 t0_err_d=0.001 period_d=4 period_err_d=0.00001 time_scale=BJD_TDB --db "$one" 2>/dev/null
"$WANE" midtime add 'Tern 14 b' 2461200.5005 0.0005 --scale BJD_TDB --db "$one" >/dev/null 2>&1
"$WANE" refit 'Tern 14 b' --db "$one" >/dev/null 2>&1
check "one mid-time is no fit" test $? = 1
"$WANE" refit 'Tern 14 b' --prior --format json --db "$one" >"$scratch/one.json" 2>/dev/null
check "one mid-time and a prior: exit 0" test $? = 0
check "no fit of its own" grep -q '"linear": null' "$scratch/one.json"
"$WANE" refit 'Tern 14 b' --prior --db "$one" >"$scratch/one.txt" 2>/dev/null
check "and nothing that is no number" test -z "$(grep -i 'nan' "$scratch/one.txt" "$scratch/one.json")"
"$WANE" refit 'Tern 14 b' --prior --adopt linear --db "$one" >/dev/null 2>&1
check "which can't be adopted" test $? = 1
"$WANE" refit 'Tern 14 b' --prior --adopt prior --db "$one" >/dev/null 2>&1
check "the prior can" test $? = 0
# by hand (Kalman 1960): V(E,E) = 0.001^2 + (300 x 1e-5)^2 = 1e-5 d^2, s^2 = 2.5e-7; V' = V s^2/(V + s^2): 0.000493865 d = 0.7112 min at epoch 300
"$WANE" drift 'Tern 14 b' --no-refresh --now 2026-06-09T00:00Z --at 2026-06-09T12:00Z --format csv --db "$one" 2>/dev/null | sed 1d | cut -d, -f6 >"$scratch/one.sigma"
check "sigma at the observed epoch: $(cat "$scratch/one.sigma")" awk '{ exit !($1 > 0.7105 && $1 < 0.7125) }' "$scratch/one.sigma"

# --- a result never replaces the database, whatever is forced
before=$(cksum <"$db")
for command in "history" "drift --no-refresh" "midtime list 'Tern 14 b'" "refit 'WASP-4 b'"; do
	eval "\"\$WANE\" $command $now --db \"\$db\" --out \"\$db\" --force" >/dev/null 2>"$scratch/err"
	check "$command: exit 1 over the database" test $? = 1
	check "$command: it says why" grep -q 'is the database: a result never replaces it' "$scratch/err"
done
check "the database is as it was" test "$(cksum <"$db")" = "$before"
finish
