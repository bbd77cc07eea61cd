#!/bin/sh
# run.sh DIR SECONDS: every fuzz target in DIR, SECONDS in all. Starts from tests/fuzz/seeds/TARGET; what it finds on the way stays in
# build/fuzz, an input that breaks something is named and kept there. Such an input becomes a seed, so that it is tried in every run.
set -u
dir=$1 seconds=$2
targets=$(find "$dir" -type f -name 'fuzz_*' -perm -u+x ! -name '*.*' | sort)
n=$(echo "$targets" | grep -c .)
[ "$n" -gt 0 ] || { echo "no fuzz targets in $dir" >&2; exit 1; }
each=$((seconds / n))
[ "$each" -ge 1 ] || each=1
failed=0
for target in $targets; do
	name=${target##*/}
	corpus=build/fuzz/$name
	mkdir -p "$corpus"
	seeds=tests/fuzz/seeds/$name
	[ -d "$seeds" ] || seeds=
	# shellcheck disable=SC2086
	if "$target" -max_total_time="$each" -timeout=10 -rss_limit_mb=1024 -max_len=4096 -artifact_prefix="$corpus-" -print_final_stats=1 \
		"$corpus" $seeds >"$corpus.log" 2>&1; then
		echo "ok   $name: $(sed -n 's/.*number_of_executed_units: *//p' "$corpus.log") inputs"
	else
		failed=$((failed + 1))
		echo "FAIL $name:"
		grep -aE 'broken:|ERROR|SUMMARY|Test unit written' "$corpus.log" || tail -n 20 "$corpus.log"
	fi
done
[ "$failed" = 0 ]
