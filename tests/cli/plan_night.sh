# A night as it runs, from the first plan to the last mark, with frozen clocks: a telescope with allotted time, time lost to cloud, a plan worked out
# anew, the program killed in the middle of storing, what became of each item. After each step the plan is looked at by another program.
. tests/support/check.sh

if ! command -v python3 >/dev/null 2>&1; then
	skip "python3 is not there"
	finish
fi
db=$scratch/a.db night=2026-04-22
wane() { "$WANE" "$@" --db "$db" </dev/null 2>"$scratch/err"; }
plan() { wane plan "$night" "$@"; }
setup=2026-04-20T18:00:00Z
wane import config-example/demo-targets.csv --now "$setup" >/dev/null
wane site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --now "$setup" >/dev/null
wane telescope add North slew_deg_s=1 settle_min=4 'blocks=dusk..dusk+15m=focus' --now "$setup" >/dev/null
check "a telescope: $(head -n 1 "$scratch/err")" test $? = 0
wane allot add "$night" sunset+20m..sunrise --now "$setup" >/dev/null
check "allotted time: $(head -n 1 "$scratch/err")" test $? = 0

cat >"$scratch/look.py" <<'EOT'
import json, subprocess, sys
from datetime import datetime, timedelta

def say(what, good):
    print(("ok " if good else "BAD ") + what)

def at(text):
    return datetime.strptime(text, "%Y-%m-%dT%H:%M:%SZ")

def load(name):
    with open(name) as f:
        return json.load(f)

TOP = ["site", "night", "telescope", "limits", "gap_min", "worth_total", "worth_bound", "optimal", "items", "blocks", "left_out"]
ITEM = ["order", "windows", "slew_by_utc", "start_utc", "latest_start_utc", "end_utc", "state", "note"]
MINUTE = timedelta(minutes=1)

# Keys, order and sums of one plan.
def sound(name):
    d = load(name)
    say("keys of the plan, in order", list(d)[:len(TOP)] == TOP)
    items = d["items"]
    say("keys of every item, in order", all(list(i)[:len(ITEM)] == ITEM for i in items))
    say("keys of what is left out", all(list(l)[:4] == ["target", "kind", "epoch", "reason"] for l in d["left_out"]))
    say("numbered from 1", [i["order"] for i in items] == list(range(1, len(items) + 1)))
    say("each is slewed to, started and left in this order", all(at(i["slew_by_utc"]) <= at(i["start_utc"]) < at(i["end_utc"]) for i in items))
    say("a latest start lies between", all(at(i["start_utc"]) <= at(i["latest_start_utc"]) <= at(i["end_utc"]) for i in items if i["latest_start_utc"]))
    pairs = [(a, b) for a, b in zip(items, items[1:]) if a["state"] != "lost" and b["state"] != "lost"]
    say("none begins before the one before it ends, the move between them", all(at(b["start_utc"]) - at(a["end_utc"]) >= timedelta(minutes=d["gap_min"]) for a, b in pairs))
    say("no event twice", len({(w["target"], w["kind"], w["epoch"]) for i in items for w in i["windows"]}) == sum(len(i["windows"]) for i in items))
    say("an item is worth its parts", all(abs(i["worth"] - sum(p["worth"] for p in i["parts"])) < 2e-6 * (1 + len(i["parts"])) for i in items))
    total = sum(i["worth"] for i in items if i["state"] != "lost")
    say("the total is their sum: %.6f of %.6f" % (d["worth_total"], total), abs(d["worth_total"] - total) < 2e-6 * (1 + len(items)))
    say("and no more than the bound", d["worth_total"] <= d["worth_bound"] + 1e-6)
    say("whatever was left out has a reason", all(l["reason"] for l in d["left_out"]))
    taken = [(at(b["from_utc"]), at(b["to_utc"])) for b in d["blocks"] if b["kind"] in ("set", "standing", "block")]
    say("blocks hold no item", all(at(i["end_utc"]) <= f or at(i["start_utc"]) >= t for i in items for f, t in taken))

# From one plan to the next: nothing that had begun is let go of without a word, nothing disappears.
def kept(before, after, now):
    a, b = load(before), load(after)
    new = {i["key"]: i for i in b["items"]}
    reasons = {(l["target"], l["epoch"]): l["reason"] for l in b["left_out"]}
    where = {(w["target"], w["epoch"]): i for i in b["items"] for w in i["windows"]}
    for i in a["items"]:
        begun = i["state"] in ("started", "done", "partly") or at(i["start_utc"]) <= at(now)
        same = new.get(i["key"])
        if begun and same and same["state"] != "lost":
            say("%s stands" % i["key"], same["start_utc"] == i["start_utc"] and same["end_utc"] == i["end_utc"])
            continue
        for w in i["windows"]:
            event = (w["target"], w["epoch"])
            item = where.get(event)
            why = reasons.get(event) or (item and (item["note"] or item["cause"])) or (item and item["state"] != "lost" and "planned")
            say("%s, epoch %d is planned or has a reason: %s" % (event + (why,)), bool(why))

# No limb is lost that could be kept: each that what is left of the night holds whole is planned, or stands among the left out with a reason that says
# that others go before it. Worked out here from the night's windows: T1 - b_min to T2 + pad, T3 - pad to T4 + b_min.
def limbs(after, night, now, telescope_from):
    d, windows = load(after), load(night)["windows"]
    b_min, k = d["limits"]["min_baseline_min"], d["limits"]["pad"]
    lost = [(at(b["from_utc"]), at(b["to_utc"])) for b in d["blocks"] if b["kind"] != "poor"]
    begun = [(at(i["start_utc"]), at(i["end_utc"])) for i in d["items"] if i["state"] != "lost" and at(i["start_utc"]) <= at(now)]
    # the first move: 90 deg at 1 deg/s, and the settling
    ready = max(at(now), at(telescope_from)) + timedelta(minutes=1.5 + d["limits"]["settle_min"]) + MINUTE
    planned = {(w["target"], w["epoch"]) for i in d["items"] for w in i["windows"] if i["state"] != "lost"}
    reasons = {(l["target"], l["epoch"]): l["reason"] for l in d["left_out"]}
    no_room = ("lost time leaves", "a block leaves", "what is left of the night", "no allotted time", "no free time", "neither limb")
    could, bad = 0, []
    for w in windows:
        if w["t2_utc"] is None or w["sigma_contact_min"] is None or w["chance_done"] is None:
            continue
        pad, base = timedelta(minutes=k * w["sigma_contact_min"]), timedelta(minutes=b_min)
        spans = [(at(w["t1_utc"]) - base, at(w["t2_utc"]) + pad, w["chance_ingress"]), (at(w["t3_utc"]) - pad, at(w["t4_utc"]) + base, w["chance_egress"])]
        event = (w["target"], w["epoch"])
        for s, (f, t, chance) in enumerate(spans):
            f, t = f - MINUTE, t + MINUTE
            usable = any(at(u) <= f and t <= at(v) for u, v in w["usable"])
            after_move = timedelta(minutes=1.5 + d["limits"]["settle_min"])
            clear = all(t <= x or f >= y + after_move for x, y in lost)
            if f < ready or not usable or not clear or chance < 0.05:
                continue
            if any(f < y + after_move * 2 and t > x - after_move * 2 for x, y in begun):
                continue
            could += 1
            why = reasons.get(event)
            if event not in planned and (not why or why.startswith(no_room)):
                bad.append((event, "ingress" if s == 0 else "egress", why))
    say("limbs that could be kept and are not told of: %s" % bad, not bad)
    say("there were such limbs: %d" % could, could >= 3 or at(now) > at("2026-04-23T08:00:00Z"))

# The order is the best: no plan with one event more forced in is worth more, and each one is worth less by what was said.
def best(after, *command):
    d = load(after)
    bad, n = [], 0
    for l in d["left_out"]:
        if l["reason"] == "dropped by you":
            continue
        run = subprocess.run(list(command) + ["--pin", "%s@%d" % (l["target"], l["epoch"]), "--format", "json"], capture_output=True, stdin=subprocess.DEVNULL)
        if run.returncode != 0:
            bad.append((l["target"], run.stderr.decode()))
            continue
        forced = json.loads(run.stdout)
        there = any(p["target"] == l["target"] and p["epoch"] == l["epoch"] for i in forced["items"] for p in i["parts"] if i["state"] != "lost")
        n += there
        if forced["worth_total"] > d["worth_total"] + 1e-5:
            bad.append((l["target"], "worth more", forced["worth_total"]))
        if l.get("cost") is not None and abs(d["worth_total"] - l["cost"] - forced["worth_total"]) > 1e-5:
            bad.append((l["target"], "cost", l["cost"], forced["worth_total"]))
        if there != (l.get("cost") is not None):
            bad.append((l["target"], "can it be forced in?", l["reason"]))
    say("each of %d forced in costs what was said, and none gains: %s" % (n, bad), not bad and d["optimal"])

{"sound": sound, "kept": kept, "limbs": limbs, "best": best}[sys.argv[1]](*sys.argv[2:])
EOT
look() { # look HOW ARGUMENTS: a check for each line that is said
	python3 "$scratch/look.py" "$@" >"$scratch/said" 2>&1
	check "look $1: it comes to its end: $(tail -n 1 "$scratch/said")" test $? = 0
	check "look $1: something is said" test -s "$scratch/said"
	while IFS= read -r line; do
		check "$step: $line" test "${line%% *}" = ok
	done <"$scratch/said"
}
# the Nth item of a plan: name@epoch of its first event
event() { python3 -c 'import json,sys; i = json.load(open(sys.argv[1]))["items"][int(sys.argv[2]) - 1]["windows"][0]; print("%s@%d" % (i["target"], i["epoch"]))' "$1" "$2"; }
time_of() { python3 -c 'import json,sys; print(json.load(open(sys.argv[1]))["items"][int(sys.argv[2]) - 1][sys.argv[3]])' "$1" "$2" "$3"; }
items() { grep -c '^      "order"' "$1"; }
wane night "$night" --format json >"$scratch/night.json"

# --- the afternoon: planned and kept
step=afternoon
plan --keep --now 2026-04-22T20:00:00Z --format json >"$scratch/0.json"
check "kept: exit 0: $(head -n 1 "$scratch/err")" test $? = 0
check "there are three items at least" test "$(items "$scratch/0.json")" -ge 3
look sound "$scratch/0.json"
# allotted from 20 minutes behind sunset; focusing holds the telescope for 15 minutes from dusk
look limbs "$scratch/0.json" "$scratch/night.json" 2026-04-22T20:00:00Z 2026-04-23T02:21:02Z
look best "$scratch/0.json" "$WANE" plan "$night" --db "$db" --now 2026-04-22T20:00:00Z --rebuild

# --- the first is begun; then cloud from 22:40 to 23:50
step=started
first=$(event "$scratch/0.json" 1)
plan --mark "$first=started" --now "$(time_of "$scratch/0.json" 1 start_utc)" >/dev/null
check "$first is begun: $(head -n 1 "$scratch/err")" test $? = 0
plan --format json --now 2026-04-23T05:50:00Z >"$scratch/1.json"
look sound "$scratch/1.json"
step='lost time'
now=2026-04-23T05:50:00Z
plan --lost 22:40..23:50 --now "$now" --format json >"$scratch/2.json"
look sound "$scratch/2.json"
look kept "$scratch/1.json" "$scratch/2.json" "$now"
look limbs "$scratch/2.json" "$scratch/night.json" "$now" "$now"
look best "$scratch/2.json" "$WANE" plan "$night" --db "$db" --now "$now" --lost 22:40..23:50
check "it was shown, not stored" sh -c '"$1" plan "$2" --db "$3" --format json 2>/dev/null | cmp -s - "$4"' - "$WANE" "$night" "$db" "$scratch/1.json"

# --- killed while storing: what is read is what was there before, or all of what was to be there
# kills NAME ARGUMENTS: of `wane plan`, at moments spread over somewhat more than the time that it takes
kills() {
	name=$1
	shift
	cp "$db" "$scratch/after.db"
	begin=$(date +%s%N)
	"$WANE" plan "$night" --db "$scratch/after.db" "$@" </dev/null >/dev/null 2>&1
	check "$name: undisturbed it is stored" test $? = 0
	whole_us=$((($(date +%s%N) - begin) / 1000))
	"$WANE" plan "$night" --db "$db" --format json </dev/null >"$scratch/was.json" 2>/dev/null
	"$WANE" plan "$night" --db "$scratch/after.db" --format json </dev/null >"$scratch/is.json" 2>/dev/null
	check "$name: it changes what is read" sh -c '! cmp -s "$1" "$2"' - "$scratch/was.json" "$scratch/is.json"
	old=0 new=0 torn=0 unsound=0 k=0
	while [ $k -lt 42 ]; do
		rm -f "$scratch/k.db" "$scratch/k.db-journal"
		cp "$db" "$scratch/k.db"
		# half of them within 20 ms, half spread to the end
		if [ $((k % 2)) = 0 ]; then us=$((k * 500)); else us=$((whole_us * k * 13 / 420)); fi
		"$WANE" plan "$night" --db "$scratch/k.db" "$@" </dev/null >/dev/null 2>&1 &
		pid=$!
		sleep "$(printf '%d.%06d' $((us / 1000000)) $((us % 1000000)))"
		kill -9 $pid 2>/dev/null
		wait $pid 2>/dev/null
		"$WANE" plan "$night" --db "$scratch/k.db" --format json </dev/null >"$scratch/k.json" 2>/dev/null
		if cmp -s "$scratch/k.json" "$scratch/was.json"; then
			old=$((old + 1))
		elif cmp -s "$scratch/k.json" "$scratch/is.json"; then
			new=$((new + 1))
		else
			torn=$((torn + 1))
		fi
		"$WANE" check --db "$scratch/k.db" </dev/null >/dev/null 2>&1 || unsound=$((unsound + 1))
		k=$((k + 1))
	done
	check "$name: 42 kills: $old as before, $new as after, $torn torn" test $torn = 0
	check "$name: every store is sound ($unsound are not)" test $unsound = 0
	check "$name: some were killed before it was stored" test $old -gt 0
}
kills keep --lost 22:40..23:50 --keep --now "$now"
plan --lost 22:40..23:50 --keep --now "$now" >/dev/null
check "kept anew: $(head -n 1 "$scratch/err")" test $? = 0
plan --format json >"$scratch/3.json"
step='kept anew'
look sound "$scratch/3.json"
look kept "$scratch/2.json" "$scratch/3.json" "$now"
check "edition 2" grep -q '"edition": 2' "$scratch/3.json"
kills mark --mark "$first=partly" --cause cloud --note 'no ingress' --now 2026-04-23T06:00:00Z
plan --mark "$first=partly" --cause cloud --note 'no ingress' --now 2026-04-23T06:00:00Z >/dev/null
check "$first is done in part: $(head -n 1 "$scratch/err")" test $? = 0

# --- opened again; the rest of the night, one after the other
plan --format json >"$scratch/4.json"
step=reopened
look sound "$scratch/4.json"
look kept "$scratch/3.json" "$scratch/4.json" 2026-04-23T06:00:00Z
check "the cause is stored" grep -q '"cause": "cloud"' "$scratch/4.json"
check "and the note" grep -q '"note": "no ingress"' "$scratch/4.json"
before=$scratch/4.json i=2 n=$(items "$scratch/4.json")
while [ $i -le "$n" ]; do
	step="item $i"
	begin=$(time_of "$before" $i start_utc) end=$(time_of "$before" $i end_utc)
	plan --mark "$(event "$before" $i)=started" --now "$begin" >/dev/null
	check "item $i is begun: $(head -n 1 "$scratch/err")" test $? = 0
	# what is left of the night, worked out anew meanwhile, leaves it alone
	plan --rebuild --now "$end" --format json >"$scratch/anew.json"
	look sound "$scratch/anew.json"
	look kept "$before" "$scratch/anew.json" "$begin"
	if [ $i = "$n" ]; then
		plan --mark "$(event "$before" $i)=lost" --cause dew --now "$end" >/dev/null
	else
		plan --mark "$(event "$before" $i)=done" --now "$end" >/dev/null
	fi
	check "item $i is marked: $(head -n 1 "$scratch/err")" test $? = 0
	plan --format json >"$scratch/m$i.json"
	look sound "$scratch/m$i.json"
	look kept "$before" "$scratch/m$i.json" "$end"
	before=$scratch/m$i.json
	i=$((i + 1))
done
step=morning
check "nothing is left to do" test "$(grep -cE '"state": "(planned|started|pinned)"' "$before")" = 0
check "each has what became of it" test "$(grep -cE '"state": "(done|partly|lost)"' "$before")" = "$n"
check "the store is sound" sh -c '"$1" check --db "$2" >/dev/null' - "$WANE" "$db"
check "marks and editions are in the history" test "$(wane history | grep -c 'plan')" -ge $((2 * n))

# --- words: of two events of one target it is said which; what is planned of an event is said where it isn't all
"$WANE" plan "$night" --place 38.62,-109.36,2100 --db "$db" </dev/null >"$scratch/two.txt" 2>/dev/null
check "an order without a telescope holds Tern 31 b twice" test "$(sed -n '/^  # /,/^$/p' "$scratch/two.txt" | grep -c 'Tern 31 b')" = 2
check "they are told apart" grep -q 'put out Tern 31 b (T1 [0-9:]* [A-Z]*), .* and Tern 31 b (T1 [0-9:]* [A-Z]*) and cost' "$scratch/two.txt"
check "none is named alike" sh -c '! grep -q "put out.*Tern 31 b[^(]*Tern 31 b" "$1"' - "$scratch/two.txt"
"$WANE" sheet "$night" --place 38.62,-109.36,2100 --db "$db" </dev/null >"$scratch/two.txt" 2>/dev/null
check "the text sheet says what is planned of it" grep -qx ' 1  Tern 31 b (egress only)' "$scratch/two.txt"
check "of each of two events" grep -qx ' 2  Tern 27 b (short) + Tern 27 c (ingress only)' "$scratch/two.txt"
check "and nothing of a whole one" grep -qx ' 3  Tern 66 b' "$scratch/two.txt"
"$WANE" sheet "$night" --place 38.62,-109.36,2100 --db "$db" --format html </dev/null >"$scratch/two.html" 2>/dev/null
check "the page too" grep -q '>Tern 27 b + Tern 27 c</a> <small>Tern 27 b short, Tern 27 c ingress only</small>' "$scratch/two.html"
check "one alone without its name" grep -q '>Tern 31 b</a> <small>egress only</small>' "$scratch/two.html"
finish
