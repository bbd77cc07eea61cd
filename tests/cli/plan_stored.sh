# What a stored plan outlives, and what is refused before anything is stored.
. tests/support/check.sh

db=$scratch/a.db
night=2026-04-22
now='--now 2026-04-22T20:00:00Z'
"$WANE" import config-example/demo-targets.csv --db "$db" >/dev/null 2>&1
"$WANE" site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --db "$db" >/dev/null 2>&1
plan() { "$WANE" plan $night --db "$db" "$@" 2>"$scratch/err"; }
code() { plan "$@" >/dev/null; echo $?; }
said() { grep -q -- "$1" "$scratch/err"; }
changes() { "$WANE" history --db "$db" --format csv 2>/dev/null | wc -l; }

# --- one event and all of its target: Tern 31 b has two that night
plan $now --drop 'Tern 31 b' --pin 'Tern 31 b@4101' >"$scratch/one.txt"
check "an event that is pinned stays when the rest of its target is dropped" grep -q '^  [0-9]* pinned .* Tern 31 b *ingress' "$scratch/one.txt"
check "the other is dropped" grep -q '^  Tern 31 b (epoch 4100): dropped by you$' "$scratch/one.txt"
plan $now --pin 'Tern 31 b' --drop 'Tern 31 b@4101' >"$scratch/one.txt"
check "and the other way round" grep -q '^  [0-9]* pinned .* Tern 31 b *egress' "$scratch/one.txt"
check "pinned in two spellings is pinned once" test "$(plan $now --pin 'Tern 14 b' --pin tern14b | grep '^Pinned')" = 'Pinned: Tern 14 b'

# --- nothing is stored when the result can't be written
plan $now --keep >/dev/null
echo old >"$scratch/there.txt"
before=$(changes)
check "--mark with a file that exists: exit 1" test "$(code $now --mark 'Tern 66 b=done' --out "$scratch/there.txt")" = 1
check "the file is as it was" test "$(cat "$scratch/there.txt")" = old
check "and nothing was marked" test "$(changes)" = "$before"
check "a mark that can't be set writes no file" test "$(code $now --mark 'Tern 14 b=done' --out "$scratch/new.txt")$(ls "$scratch" | grep -c new.txt)" = 10

# every change that has a result says first whether it can be written
o=$scratch/o.db
cp "$db" "$o"
for change in 'allot add 2026-04-23 whole' 'telescope add T1' 'site add Far --place 1,1,1' "site set Tern-Hill --half sunset" undo "plan $night --save --draft x"; do
	before=$("$WANE" history --db "$o" --format csv | wc -l)
	# shellcheck disable=SC2086
	"$WANE" $change --db "$o" --out "$scratch/there.txt" >/dev/null 2>"$scratch/err"
	check "with a file that exists: exit 1: $change" test $? = 1
	check "it is said: $change" said 'the file exists; --force replaces it$'
	check "nothing is changed: $change" test "$("$WANE" history --db "$o" --format csv | wc -l)" = "$before"
done

# --- editions
since() { "$WANE" sheet $night --db "$db" --since "$1" >/dev/null 2>"$scratch/err"; echo $?; }
check "--since 1" test "$(since 1)" = 0
check "there is no edition 0: exit 1" test "$(since 0)" = 1
check "in words" said 'no such edition of the plan (got 0, expected 1 to 1)'
check "nor one ahead" test "$(since 2)" = 1

# --- a stored plan is shown as it was stored
plan $now >"$scratch/kept.txt"
check "without a remark" test ! -s "$scratch/err"
plan $now --sun-limit -18 --target 'Tern 8 b' >"$scratch/same.txt"
check "whatever limits are given" cmp -s "$scratch/kept.txt" "$scratch/same.txt"
check "and it is said that they have no part in it" said '^wane: plan: the plan is shown as it was stored'
"$WANE" sheet $night --db "$db" --kind both >/dev/null 2>"$scratch/err"
check "by sheets too" said '^wane: sheet: the plan is shown as it was stored'
plan $now --sun-limit -18 --rebuild >/dev/null
check "not when it is worked out anew" test "$(grep -c 'as it was stored' "$scratch/err")" = 0
check "a position has no events to plan: exit 2" test "$(code $now --radec 10,10)" = 2
check "nor anything for a sheet" test "$("$WANE" sheet $night --db "$db" --radec 10,10 >/dev/null 2>&1; echo $?)" = 2
check "the night of a position has no running order" test "$("$WANE" night $night --db "$db" --radec 10,10 --format json 2>/dev/null | grep -c '"running_order": \[\]')" = 1
check "so nothing is kept or not" test "$("$WANE" night $night --db "$db" --radec 10,10 --format json 2>/dev/null | grep -c '^  "running_order_kept": null$')" = 1
check "the kept plan of a night says that it is" test "$("$WANE" night $night --db "$db" --format json 2>/dev/null | grep -c '^  "running_order_kept": true$')" = 1
check "so it replaces no kept plan" test "$(code $now --radec 10,10 --afresh --keep)$(plan --list | grep -c 'kept: edition 1')" = 21

# --- marks of a target that was removed: Tern 31 b has two items in the kept plan
g=$scratch/g.db
cp "$db" "$g"
"$WANE" target remove 'Tern 31 b' --db "$g" >/dev/null 2>&1
gone() { "$WANE" plan $night $now --db "$g" --mark "$1" 2>"$scratch/err"; }
check "the name alone is not enough: exit 1" test "$(gone 'Tern 31 b=done' >/dev/null; echo $?)" = 1
check "in words" said 'several items of the plan hold it (got "Tern 31 b", expected NAME@EPOCH)'
check "with the epoch it is marked" test "$(gone 'Tern 31 b@4101=done' | grep -c '^  4 done .* Tern 31 b *ingress')" = 1
check "an epoch that is not planned: exit 1" test "$(gone 'Tern 31 b@4102=done' >/dev/null; echo $?)" = 1

# --- limits that are not given again
l=$scratch/l.db
cp "$db" "$l"
limits() { "$WANE" plan $night $now --draft late --db "$l" "$@" >"$scratch/late.txt" 2>"$scratch/err"; }
limits --sun-limit -18 --airmass-limit 1.9 --save
check "a draft made with limits of its own" test "$(grep -c worked "$scratch/err")" = 0
limits --pin 'Tern 14 b'
check "worked out anew without them: that is said" said '^wane: plan: worked out with sun_limit_deg=-12, sun_limit_baseline_deg=-12, airmass_limit=none; the stored plan was made with sun_limit_deg=-18, sun_limit_baseline_deg=-18, airmass_limit=1.9$'
limits --pin 'Tern 14 b' --sun-limit -18 --airmass-limit 1.9
check "with them there is nothing to say" test "$(grep -c worked "$scratch/err")" = 0
limits
check "nor where it is only shown" test "$(grep -c worked "$scratch/err")" = 0

# --- a telescope, then a site, that was removed
t=$scratch/t.db
cp "$db" "$t"
"$WANE" telescope add T1 --db "$t" >/dev/null 2>&1
"$WANE" plan $night $now --telescope T1 --keep --db "$t" >/dev/null 2>&1
"$WANE" sheet $night --telescope T1 --format ics --db "$t" >"$scratch/there.ics" 2>/dev/null
"$WANE" telescope remove T1 --db "$t" >/dev/null 2>&1
past() { "$WANE" plan $night $now --telescope t1 --db "$t" "$@" 2>"$scratch/err"; }
check "the kept plan of a telescope that was removed is shown" test "$(past | grep -c 'kept plan (draft main, edition 1)')" = 1
check "and it is said" said '^wane: telescope: T1 is no longer stored: only its stored plans are shown$'
check "its sheet is as it was" sh -c '"$1" sheet 2026-04-22 --telescope T1 --format ics --db "$2" 2>/dev/null | cmp -s - "$3"' - "$WANE" "$t" "$scratch/there.ics"
check "no other is made of it: exit 1" test "$(past --rebuild >/dev/null; echo $?)" = 1
check "in words" said '^wane: plan: T1: nothing is planned for what is no longer stored$'
check "nor another night's" test "$("$WANE" plan 2026-04-23 --telescope T1 --db "$t" >/dev/null 2>&1; echo $?)" = 1
check "nights know none of it: exit 2" test "$("$WANE" night $night --telescope T1 --db "$t" >/dev/null 2>&1; echo $?)" = 2
check "one that never was: exit 2" test "$("$WANE" plan $night --telescope T2 --db "$t" >/dev/null 2>&1; echo $?)" = 2
"$WANE" site remove 'Tern Hill' --db "$t" >/dev/null 2>&1
check "the plans of a site that was removed are shown" test "$("$WANE" plan $night --site 'tern hill' --telescope T1 --db "$t" 2>/dev/null | grep -c 'kept plan (draft main, edition 1)')" = 1
check "with and without a telescope" test "$("$WANE" sheet $night --site 'tern hill' --db "$t" 2>/dev/null | grep -c '^Plan:  *kept plan (draft main, edition 1)$')" = 1
check "as another store has it in its zone" test "$("$WANE" plan $night --site 'Tern Hill' --db "$t" 2>/dev/null)" = "$(plan)"
check "the store is sound" "$WANE" check --db "$t"

# --- the check says what there is, one of a kind in the singular
many=$scratch/many.db
"$WANE" site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --db "$many" >/dev/null 2>&1
check "a store with one site" sh -c '"$1" check --db "$2" | grep -qx "0 targets, 0 ephemeris versions, 1 site, 0 telescopes, 0 allotments, 0 goals, 0 plans, 1 change"' - "$WANE" "$many"
"$WANE" import config-example/demo-targets.csv --db "$many" >/dev/null 2>&1
"$WANE" telescope add Big --db "$many" >/dev/null 2>&1
"$WANE" allot add 2026-04-22 whole --db "$many" >/dev/null 2>&1
"$WANE" goal set 'Tern 14 b' 3 0 --db "$many" >/dev/null 2>&1
"$WANE" plan $night --db "$many" $now --keep >/dev/null 2>&1
"$WANE" plan $night --db "$many" $now --save --draft cloudy >/dev/null 2>&1
check "and of each other kind" sh -c '"$1" check --db "$2" | grep -qx "50 targets, 50 ephemeris versions, 1 site, 1 telescope, 1 allotment, 1 goal, 2 plans, 7 changes"' - "$WANE" "$many"

# --- what does not happen that night can't be met; what can't be read is wrong
pole=$scratch/pole.db
"$WANE" import config-example/demo-targets.csv --db "$pole" >/dev/null 2>&1
"$WANE" site add 'Tern North' --place 78,15,10 --db "$pole" >/dev/null 2>&1
at() { "$WANE" plan "$@" >/dev/null 2>"$scratch/err"; echo $?; }
for option in --block --lost --poor; do
	tail=$([ $option = --block ] && echo =flats; [ $option = --poor ] && echo ' x2')
	check "no twilight: exit 1: $option" test "$(at 2026-06-21 --db "$pole" $option "evening-9..+20m$tail")" = 1
	check "no twilight: said: $option" said "^wane: plan: ${option#--}: does not happen this night"
	check "the skipped hour: exit 1: $option" test "$(at 2026-03-07 --db "$db" $option "02:30..04:00$tail")" = 1
	check "wrong syntax: exit 2: $option" test "$(at 2026-03-07 --db "$db" $option "2:30..04:00$tail")" = 2
	check "the repeated hour: exit 2: $option" test "$(at 2026-10-31 --db "$db" $option "01:30..04:00$tail")" = 2
done
check "--from in the skipped hour: exit 1" test "$(at 2026-03-07 --db "$db" --from 02:30)" = 1

# --- a plan kept before the first telescope was added
f=$scratch/first.db
"$WANE" import config-example/demo-targets.csv --db "$f" >/dev/null 2>&1
"$WANE" site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --db "$f" >/dev/null 2>&1
first() { "$WANE" "$1" $night --db "$f" $now $2 $3 $4 2>"$scratch/err"; }
first plan --keep >/dev/null
first plan --telescope none >"$scratch/none.txt"
check "--telescope none where there is no telescope" grep -q 'kept plan (draft main, edition 1)' "$scratch/none.txt"
check "and nothing is said of others" test "$(grep -c 'is kept' "$scratch/err")" = 0
"$WANE" telescope add Big --db "$f" >/dev/null 2>&1
check "with the first telescope the plan is a proposal" sh -c 'grep -q "a proposal" "$1"' - "$(first plan >"$scratch/big.txt"; echo "$scratch/big.txt")"
for command in plan sheet; do
	first $command >/dev/null
	check "it is said where one is kept: $command" said "^wane: $command: no plan of this night is kept for Big; one is kept without a telescope (--telescope 'none')\$"
done
first plan --telescope none >"$scratch/none.txt"
check "--telescope none reaches it" grep -q 'kept plan (draft main, edition 1)' "$scratch/none.txt"
first plan --telescope Big --keep >/dev/null
check "kept for this one too: nothing is said" test "$(grep -c 'one is kept' "$scratch/err")" = 0
"$WANE" telescope add none --db "$f" >/dev/null 2>&1
first plan --telescope none >/dev/null
check "a telescope of that name is it" said "^wane: plan: no plan of this night is kept for none; one is kept "
finish
