# Plans from outside: proposed, pinned, blocked, kept, moved, marked, worked out anew; keys, exit codes, equal bytes.
. tests/support/check.sh

db=$scratch/a.db
night=2026-04-22
now='--now 2026-04-22T20:00:00Z'
"$WANE" import config-example/demo-targets.csv --db "$db" >/dev/null 2>&1
"$WANE" site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --db "$db" >/dev/null 2>&1
plan() { "$WANE" plan $night --db "$db" "$@" 2>"$scratch/err"; }
code() { plan "$@" >/dev/null; echo $?; }
said() { grep -q -- "$1" "$scratch/err"; }
keys() { grep -o '^  "[a-z_]*":' | tr -d ' ":' | tr '\n' ' '; }
# targets FILE: those of a text plan, in order
targets() { sed -n '/^  # /,/^$/p' "$1" | grep -o 'Tern [0-9]* [bcde]' | tr '\n' ','; }
# row FILE TARGET: its line in the table of a text plan
row() { sed -n '/^  # /,/^$/p' "$1" | grep "$2"; }
item_keys='order windows slew_by_utc start_utc latest_start_utc end_utc state note'

# --- a proposal
plan $now >"$scratch/p.txt"
check "a proposal: exit 0" test $? = 0
check "it says that it is not stored" said '^wane: plan: shown, not stored'
check "and shows its worth and the bound" grep -q '^Worth [0-9.]* of at most [0-9.]* (optimal); [0-9]* items, at least 4 min between' "$scratch/p.txt"
check "reading stores nothing" test "$(plan --list | tail -n 1)" = "None is stored (wane plan DATE --keep)."
plan $now >"$scratch/again.txt"
check "the same bytes twice" cmp -s "$scratch/p.txt" "$scratch/again.txt"
plan --now 2026-01-01T00:00Z >"$scratch/again.txt"
check "whatever the clock says outside that night" cmp -s "$scratch/p.txt" "$scratch/again.txt"
plan $now --format json >"$scratch/p.json"
plan $now --format json >"$scratch/q.json"
check "json: the same bytes twice" cmp -s "$scratch/p.json" "$scratch/q.json"
check "json: top keys, those of the contract in order" test "$(keys <"$scratch/p.json" | tr ' ' '\n' | grep -Ex 'site|night|telescope|limits|gap_min|worth_total|worth_bound|optimal|items|blocks|left_out' | tr '\n' ' ')" = \
	"site night telescope limits gap_min worth_total worth_bound optimal items blocks left_out "
check "json: keys of an item" test "$(sed -n '/^  "items"/,/^  \]/p' "$scratch/p.json" | grep -o '^      "[a-z_]*":' | tr -d ' ":' | head -n 8 | tr '\n' ' ')" = "$item_keys "
check "--plain has no table" test "$(plan $now --plain | grep -c '^  # ')" = 0
check "--plain says each item" test "$(plan $now --plain | grep -c '^Item ')" = "$(sed -n '/^  # /,/^$/p' "$scratch/p.txt" | grep -c '^ *[0-9]')"
check "the cautions stand below" grep -q '^Cautions' "$scratch/p.txt"
check "the share of one limb alone is that of --help" test "$(grep -o '"limb_share": [0-9.]*' "$scratch/p.json" | cut -d ' ' -f 2)" = \
	"$("$WANE" plan --help | tr '\n' ' ' | grep -o 'one limb alone [0-9.]*' | cut -d ' ' -f 4)"
check "--target limits the choice" test "$(plan $now --target 'Tern 14 b' | targets /dev/stdin)" = 'Tern 14 b,'
check "a place has plans too" test "$("$WANE" plan $night --db "$db" --place 38.62,-109.36,2100 2>/dev/null | grep -c '^  1 planned')" = 1
check "which can't be kept" test "$("$WANE" plan $night --db "$db" --place 38.62,-109.36,2100 --keep >/dev/null 2>&1; echo $?)" = 1

# --- pins, drops, blocks
plan $now --pin 'Tern 33 b' >"$scratch/pin.txt"
check "--pin" sh -c 'echo "$1" | grep -q "pinned"' - "$(row "$scratch/pin.txt" 'Tern 33 b')"
check "it was not there before" test "$(row "$scratch/p.txt" 'Tern 33 b')" = ''
plan $now --drop 'tern-14 B' >"$scratch/drop.txt"
check "--drop, by a folded name" test "$(row "$scratch/drop.txt" 'Tern 14 b')" = ''
check "and it says why it is left out" grep -q '^  Tern 14 b: dropped by you$' "$scratch/drop.txt"
check "what is left out costs something" grep -q 'others are worth more: forcing it in would put out .* and cost [0-9.]*$' "$scratch/p.txt"
plan $now --block '22:40..+50m=engineering hour' >"$scratch/block.txt"
check "--block: echoed with its date" said '^wane: plan: block engineering hour: Wed 22 Apr 22:40 MDT (04:40 UTC on 23 Apr) to Wed 22 Apr 23:30 MDT (05:30 UTC on 23 Apr)$'
check "--block: in the table" sh -c 'echo "$1" | grep -q "22:40 *23:30 *engineering hour"' - "$(row "$scratch/block.txt" 'engineering hour')"
plan $now --block 'evening-2..evening-5=evening flats' >"$scratch/flats.txt"
check "a block with the Sun near has its caution" grep -q 'evening flats; THE SUN IS NEAR OR UP' "$scratch/flats.txt"
plan $now --poor 'start..end x2' >"$scratch/poor.txt"
worth() { sed -n 's/^Worth \([0-9.]*\) of.*/\1/p' "$1"; }
check "--poor: a factor of 2 over it all leaves a quarter" awk -v a="$(worth "$scratch/p.txt")" -v b="$(worth "$scratch/poor.txt")" 'BEGIN { exit !(b < 0.255 * a && b > 0.245 * a) }'
plan $now --pin 'Tern 31 b' --pin 'Tern 5 b' --pin 'Tern 11 b' --pin 'Tern 48 b' --pin 'Tern 40 b' >"$scratch/clash.txt"
check "pins that clash: exit 0" test $? = 0
check "and it is said which is left out" said '^wane: plan: Tern [0-9]* b: pinned, but it clashes with'
plan $now --sun-limit 0 --pin 'Tern 22 b' >"$scratch/day.txt"
check "an item with the Sun up says so" grep -q '^    THE SUN IS UP for some of it: do not slew there' "$scratch/day.txt"
check "and no program is given it" test "$(plan $now --sun-limit 0 --pin 'Tern 22 b' --format json | sed -n '/^  "items"/,/^  \]/p' | grep -c '"target": "Tern 22 b", "kind"')" = 0

# --- refusals
check "an unknown target: exit 1" test "$(code --pin 'Tern 1400 b')" = 1
check "in words" said 'no such target is stored (got "Tern 1400 b"'
check "a target without a window: exit 1" test "$(code --pin 'Tern 14 b@1')" = 1
check "in words" said 'pin: no window this night'
check "a span the wrong way round: exit 2" test "$(code --lost 23:50..22:40)" = 2
check "a span that can't be read: exit 2" test "$(code --lost sometime)" = 2
check "a block without a text: exit 2" test "$(code --block 22:00..23:00)" = 2
check "noise out of range: exit 2" test "$(code --poor '22:00..23:00 x21')" = 2
check "a state that is none: exit 2" test "$(code --mark 'Tern 14 b=finished')" = 2
check "a mark without a stored plan: exit 1" test "$(code --mark 'Tern 14 b=done')" = 1
check "in words" said 'no stored plan'
check "an unknown draft: exit 1" test "$(code --draft windy)" = 1
check "an unknown draft to compare: exit 1" test "$(code --compare windy)" = 1
check "an unknown draft to remove: exit 1" test "$(code --remove windy)" = 1
check "--list changes nothing: exit 2 with a pin" test "$(code --list --pin 'Tern 14 b')" = 2
check "--note without --mark: exit 2" test "$(code --note x)" = 2
check "--mark with --keep: exit 2" test "$(code --mark 'Tern 14 b=done' --keep)" = 2
check "csv: exit 2" test "$(code --format csv)" = 2
check "an option of another command: exit 2" test "$(code --min-chance 0.1)" = 2
check "no target on --free: exit 1" test "$(code --free 'Tern 14 b')" = 1
check "a wrong date: exit 2" test "$("$WANE" plan 2026-02-30 --db "$db" >/dev/null 2>&1; echo $?)" = 2
check "nothing of this was stored" test "$(plan --list | tail -n 1)" = 'None is stored (wane plan DATE --keep).'

# --- keeping
# Tern 31 b has two events, one in each twilight: without them the order begins with Tern 27 b and holds Tern 77 b
plan $now --drop 'Tern 70 b' --drop 'Tern 31 b' --keep >"$scratch/kept.txt"
check "--keep: exit 0" test $? = 0
check "it says what it is" grep -q '^Running order of night 22/23 Apr 2026: kept plan (draft main, edition 1), stored 2026-04-22T20:00:00Z by' "$scratch/kept.txt"
plan --now 2026-04-22T23:00:00Z >"$scratch/shown.txt"
check "the kept plan is shown as it was stored" cmp -s "$scratch/kept.txt" "$scratch/shown.txt"
check "without a remark" test ! -s "$scratch/err"
check "--list" test "$(plan --list | grep -c '^main, kept: edition 1, worth')" = 1
plan $now --free 'Tern 70 b' --free 'Tern 31 b' >"$scratch/free.txt"
check "choices are worked out from those that are stored" test "$(targets "$scratch/free.txt")" = "$(targets "$scratch/p.txt")"
check "wane night names it" sh -c '"$1" night 2026-04-22 --db "$2" 2>/dev/null | grep -q "^Running order kept, draft main: [0-9]* items, worth [0-9.]* (wane plan 2026-04-22).$"' - "$WANE" "$db"
check "and holds it" test "$("$WANE" night $night --db "$db" --format json 2>/dev/null | sed -n '/^  "running_order"/,$p' | grep -c '"order"')" = "$(plan --format json | sed -n '/^  "items"/,/^  \]/p' | grep -c '"order"')"
plan $now --draft windy --drop 'Tern 27 b' --save >/dev/null
check "--save: a draft that is not kept" test "$(plan --list | grep -c '^windy: edition 1')" = 1
plan --compare windy >"$scratch/compare.txt"
check "--compare: both totals" test "$(grep -c ', worth [0-9.]* of at most' "$scratch/compare.txt")" = 2
check "--compare: in words" grep -q '^  Tern 27 b: gone, dropped by you$' "$scratch/compare.txt"
check "--compare with itself" test "$(plan --compare main | tail -n 1)" = 'The two are the same.'
check "--remove" test "$(code --remove windy)$(plan --list | grep -c windy)" = 00
check "the store is sound" "$WANE" check --db "$db"

# --- another ephemeris
target=$(sed -n '/^  # /,/^$/p' "$scratch/kept.txt" | grep -o 'Tern 77 b')
check "the plan holds Tern 77 b" test "$target" = 'Tern 77 b'
cp "$db" "$scratch/b.db"
"$WANE" target set 'Tern 77 b' t0_jd=2459275.27194 --db "$db" >/dev/null 2>&1
plan >"$scratch/moved.txt"
# T0 0.007 d later: 10.08 min
check "what moved is shown" sh -c 'echo "$1" | grep -q "+10.1$"' - "$(row "$scratch/moved.txt" 'Tern 77 b')"
check "and why" grep -q '^  Tern 77 b +10.1 min: version 2 (Tern list 2) adopted' "$scratch/moved.txt"
check "the plan is as it was" test "$(targets "$scratch/moved.txt")" = "$(targets "$scratch/kept.txt")"
check "--moved 11 does not count it" test "$(plan --moved 11 | grep -c 'less than counts')" = 1
check "json: moved" test "$(plan --format json | grep -c '"moved": true')" = 1
plan $now --rebuild >"$scratch/anew.txt"
check "worked out anew nothing has moved" test "$(grep -c '^Moved' "$scratch/anew.txt")" = 0
check "--rebuild takes the choices over" grep -q '^Dropped: Tern 70 b, Tern 31 b$' "$scratch/anew.txt"
plan $now --afresh >"$scratch/afresh.txt"
check "--afresh does not" test "$(grep -c '^Dropped' "$scratch/afresh.txt")" = 0
mv "$scratch/b.db" "$db"

# --- the running night. The first item holds 21:20 to 22:46 MDT.
first=$(sed -n '/^  # /,/^$/p' "$scratch/kept.txt" | sed -n 2p | grep -o 'Tern [0-9]* [bc]')
check "--mark" test "$(code --now 2026-04-23T03:25:00Z --mark "$first=started" --note 'seeing 2')" = 0
plan >"$scratch/marked.txt"
check "is stored at once" sh -c 'echo "$1" | grep -q "^  1 started"' - "$(row "$scratch/marked.txt" "$first")"
check "with its note" grep -q '^    seeing 2$' "$scratch/marked.txt"
check "a mark is a change of its own" test "$("$WANE" history --db "$db" | sed -n 2p | grep -c 'plan mark')" = 1
plan --now 2026-04-23T05:50:00Z --lost 22:40..23:50 >"$scratch/lost.txt"
check "--lost: echoed" said '^wane: plan: lost: Wed 22 Apr 22:40 MDT (04:40 UTC on 23 Apr) to Wed 22 Apr 23:50 MDT'
check "what has begun stands" test "$(row "$scratch/lost.txt" "$first")" = "$(row "$scratch/marked.txt" "$first")"
begins() { sed -n '/^  # /,/^$/p' "$1" | sed -E 's/ (whole|short|ingress|egress) .*//'; }
begins "$scratch/marked.txt" >"$scratch/begins.txt"
check "nothing new begins before now" test "$(begins "$scratch/lost.txt" | grep ' planned  2[0-3]:' | grep -v ' planned  23:5' | grep -cvxFf "$scratch/begins.txt")" = 0
plan --now 2026-04-23T05:50:00Z --lost 21:20..23:50 >"$scratch/all.txt"
check "lost time over all of it: it is lost, and said why" sh -c 'echo "$1" | grep -q "^  1 lost"' - "$(row "$scratch/all.txt" "$first")"
check "in words" grep -q '^    lost time; it took ' "$scratch/all.txt"
check "shown, not stored" sh -c 'echo "$1" | grep -q "^  1 started"' - "$(plan | grep "$first" | head -n 1)"
plan --now 2026-04-23T05:50:00Z --lost 21:20..23:50 --keep >"$scratch/two.txt"
check "--keep: the next edition" grep -q 'edition 2' "$scratch/two.txt"
plan --now 2026-04-23T06:00:00Z >"$scratch/shown.txt"
check "shown as it was stored" cmp -s "$scratch/two.txt" "$scratch/shown.txt"
plan --now 2026-04-23T05:50:00Z --from 01:00 >"$scratch/from.txt"
check "--from: echoed" said '^wane: plan: from: Thu 23 Apr 01:00 MDT (07:00 UTC)$'
check "--from: nothing new before" test "$(sed -n '/^  # /,/^$/p' "$scratch/from.txt" | grep -c ' planned  00:')" = 0
check "undo takes the edition back" "$WANE" undo --db "$db" --now 2026-04-23T06:10:00Z
check "and the plan is the one before" test "$(plan | head -n 1 | grep -c 'edition 1')" = 1
check "--mark planned takes the mark back" test "$(code --mark "$first=planned")$(plan | grep -c '^  1 planned')" = 01
check "the store is sound" "$WANE" check --db "$db"

# --- the night of a clock change: 01:30 comes twice on 1 November 2026
night=2026-10-31
check "a time that comes twice: exit 2" test "$(code --lost 01:30..02:30)" = 2
check "and it is said what helps" said 'comes twice this night.*expected it with Z'
plan --lost 07:30Z..08:30Z >"$scratch/change.txt"
check "with Z it is one" test $? = 0
check "echoed in the zone that holds then" said 'Sun 1 Nov 01:30 MDT (07:30 UTC) to Sun 1 Nov 01:30 MST (08:30 UTC)'
check "the mark of the later hour" grep -q '01:30 .*01:30\*' "$scratch/change.txt"
finish
