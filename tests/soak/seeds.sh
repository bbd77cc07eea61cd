# The property loops again and again, each time with other random numbers: SOAK_ROUNDS seeds (default 10) from SOAK_SEED (default the date),
# printed.
. tests/support/check.sh

seed=${SOAK_SEED:-$(date +%Y%m%d)}
round=0
while [ "$round" -lt "${SOAK_ROUNDS:-10}" ]; do
	round=$((round + 1))
	seed=$((seed + 7919))
	for source in tests/property/*.c tests/unit/test_zone.c; do
		program=build/obj-release/${source%.c}
		check "WANE_SEED=$seed $program" sh -c 'WANE_SEED=$1 "$2" >"$3" 2>&1 || { tail -n 20 "$3"; exit 1; }' - "$seed" "$program" "$scratch/log"
	done
done
finish
