# The calendar of a kept plan, read by another program (python3-icalendar): identifiers that are distinct and stay, the same bytes from the same data,
# SEQUENCE with each edition, CANCELLED for what is gone.
. tests/support/check.sh

python=
for p in python3 /usr/bin/python3; do
	"$p" -c 'import icalendar' 2>/dev/null && python=$p && break
done
if [ -z "$python" ]; then
	skip "python3-icalendar is not there"
	finish
fi

db=$scratch/a.db night=2026-04-22
wane() { "$WANE" "$@" --db "$db" </dev/null 2>"$scratch/err"; }
first=2026-04-20T18:05:00Z second=2026-04-21T09:30:15Z third=2026-04-21T20:00:00Z
wane site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver --now 2026-04-19T12:00:00Z >/dev/null
wane telescope add North --now 2026-04-19T12:00:00Z >/dev/null
wane telescope add South --now 2026-04-19T12:00:00Z >/dev/null
# invented: transit and occultation of one epoch in one night, and another target between them
wane target add 'Tern 18 b' --radec 221.9,61.2 t0_jd=2461153.7005 t0_err_d=0.0002 period_d=0.451203 period_err_d=1.1e-7 \
	time_scale=BJD_TDB duration_h=0.9 k=0.09 a_rs=2.7 inc_deg=84 ecc=0 omega_deg=90 --now 2026-04-19T12:00:00Z >/dev/null
wane target add 'Tern 50 b' --radec 235.6,28.3 t0_jd=2461153.824 t0_err_d=0.0002 period_d=3.10442 period_err_d=1e-6 \
	time_scale=BJD_TDB duration_h=1 k=0.13 a_rs=9 inc_deg=88 --now 2026-04-19T12:00:00Z >/dev/null

keep() { # keep TELESCOPE NOW [ARGUMENTS]
	telescope=$1 now=$2
	shift 2
	wane plan "$night" --kind both --keep --telescope "$telescope" --now "$now" "$@" >/dev/null
	check "plan of $telescope at $now: exit 0" test $? = 0
}
sheet() { wane sheet "$night" --telescope "$1" --format ics --now "$2"; }

keep North "$first"
keep South "$first"
sheet North "$first" >"$scratch/north.ics"
check "exit 0" test $? = 0
sheet North 2026-04-23T05:00:00Z >"$scratch/later.ics"
check "unchanged data gives the same bytes, whatever the clock says" cmp -s "$scratch/north.ics" "$scratch/later.ics"
sheet South "$first" >"$scratch/south.ics"
keep North "$second" --drop 'Tern 50 b'
sheet North "$second" >"$scratch/dropped.ics"
keep North "$third" --free 'Tern 50 b'
cp "$db" "$scratch/c.db"
sheet North "$third" >"$scratch/back.ics"
check "no clock in the text" sh -c '! tr -d "\r" <"$1" | grep -q "^DTSTAMP:20260423"' - "$scratch/later.ics"
check "a calendar has no METHOD" sh -c '! grep -q METHOD "$1"' - "$scratch/north.ics"
check "every line ends in CR LF" test "$(tr -cd '\r' <"$scratch/north.ics" | wc -c)" = "$(wc -l <"$scratch/north.ics")"
check "no line is longer than 75 octets" sh -c '! tr -d "\r" <"$1" | LC_ALL=C grep -q "^.\{76\}"' - "$scratch/north.ics"

cat >"$scratch/read.py" <<'EOT'
import sys
import icalendar

def events(name):
    with open(sys.argv[1] + "/" + name, "rb") as f:
        calendar = icalendar.Calendar.from_ical(f.read())
    return [e for e in calendar.walk("VEVENT")]

def say(what, good):
    print(("ok " if good else "BAD ") + what)

def kinds(all_events):
    return sorted(str(e["SUMMARY"]) for e in all_events)

def by_uid(all_events):
    return {str(e["UID"]): e for e in all_events}

def one(all_events, summary):
    found = [e for e in all_events if str(e["SUMMARY"]).startswith(summary)]
    return found[0] if len(found) == 1 else None

north, south, dropped, back = [events(n + ".ics") for n in ("north", "south", "dropped", "back")]
wanted = ["Tern 18 b (occultation)", "Tern 18 b (transit)", "Tern 50 b (transit)"]
say("transit and occultation of one epoch are two events: %s" % kinds(north), kinds(north) == wanted)
say("the other telescope has them too: %s" % kinds(south), kinds(south) == wanted)
calendar = {}
for twice in range(2):
    calendar.update(by_uid(north))
    calendar.update(by_uid(south))
say("imported twice, all six are there once: %d" % len(calendar), len(calendar) == 6)
say("identifiers are UUIDs of version 5", all(u[14] == "5" and len(u) == 36 for u in calendar))
say("first edition: SEQUENCE 1", all(int(e["SEQUENCE"]) == 1 for e in north))
say("second edition: SEQUENCE 2", all(int(e["SEQUENCE"]) == 2 for e in dropped))
say("third edition: SEQUENCE 3", all(int(e["SEQUENCE"]) == 3 for e in back))
stamp = lambda e: e["DTSTAMP"].to_ical().decode()
say("DTSTAMP is when the edition was stored", {stamp(e) for e in north} == {"20260420T180500Z"} and {stamp(e) for e in dropped} == {"20260421T093015Z"})
old, gone, again = [one(x, "Tern 50 b") for x in (north, dropped, back)]
say("what was dropped is exported once more, cancelled", gone is not None and str(gone["STATUS"]) == "CANCELLED")
say("under its identifier and with its last times", gone is not None and gone["UID"] == old["UID"] and gone["DTSTART"].dt == old["DTSTART"].dt and gone["DTEND"].dt == old["DTEND"].dt)
say("a cancelled event rings no bell", not gone.walk("VALARM"))
say("what comes back is confirmed, under its identifier", str(again["STATUS"]) == "CONFIRMED" and again["UID"] == old["UID"])
say("those that stay keep their identifiers", set(by_uid(north)) == set(by_uid(dropped)) == set(by_uid(back)))
say("a bell for each, before its start", all(len(e.walk("VALARM")) == 1 and e.walk("VALARM")[0]["TRIGGER"].dt <= e["DTSTART"].dt for e in north))
say("no reader's error", all(not e.errors for e in north + south + dropped + back))
EOT
"$python" "$scratch/read.py" "$scratch" >"$scratch/said" 2>&1
check "the reader comes to its end: $(tail -n 1 "$scratch/said")" test $? = 0
while IFS= read -r line; do
	check "$line" test "${line%% *}" = ok
done <"$scratch/said"
check "all was looked at" test "$(wc -l <"$scratch/said")" = 15

# --- a night that goes through drafts, undos and blocks: one file after each step, in order
step=0
export_step() { # export_step NOW: the kept plan's calendar
	step=$((step + 1))
	wane sheet "$night" --telescope "North" --format ics --now "$1" >"$scratch/$(printf 'step%d.ics' "$step")"
	check "step $step: exit 0: $(head -n 1 "$scratch/err")" test $? = 0
}
plan_step() { # NOW ARGUMENTS
	now=$1
	shift
	wane plan "$night" --kind both --telescope "North" --now "$now" "$@" >/dev/null
	check "plan $*: exit 0: $(head -n 1 "$scratch/err")" test $? = 0
}
export_step 2026-04-21T20:10:00Z # 1: main, edition 3
plan_step 2026-04-21T20:20:00Z --keep --block '22:40..23:10=flats' --block '22:40..+30m=flats'
export_step 2026-04-21T20:21:00Z # 2: with a block
plan_step 2026-04-21T20:30:00Z --keep --unblock flats
export_step 2026-04-21T20:31:00Z # 3: the block is gone
plan_step 2026-04-21T20:40:00Z --draft windy --save --drop 'Tern 18 b'
export_step 2026-04-21T20:41:00Z # 4: another draft beside it
plan_step 2026-04-21T20:50:00Z --draft windy --keep
export_step 2026-04-21T20:51:00Z # 5: it is the kept one
wane undo --now 2026-04-21T21:00:00Z >/dev/null
check "undo: exit 0" test $? = 0
export_step 2026-04-21T21:01:00Z # 6: main again
plan_step 2026-04-21T21:10:00Z --draft windy --keep
wane plan "$night" --telescope North --remove main --now 2026-04-21T21:11:00Z >/dev/null
check "main is removed" test $? = 0
export_step 2026-04-21T21:12:00Z # 7: windy, main is in no list
wane plan "$night" --telescope North --remove windy --now 2026-04-21T21:30:00Z >/dev/null
check "windy is removed" test $? = 0
export_step 2026-04-21T21:31:00Z # 8: nothing is kept: a proposal
plan_step 2026-04-21T21:40:00Z --keep --draft late --afresh
wane site set 'Tern Hill' --place 38.62,30,2100 --now 2026-04-21T21:41:00Z >/dev/null
check "the site is moved: $(head -n 1 "$scratch/err")" test $? = 0
export_step 2026-04-21T21:42:00Z # 9: nine hours farther east what was planned stands in daylight
cat >"$scratch/steps.py" <<'EOT'
import glob, sys
import icalendar

def say(what, good):
    print(("ok " if good else "BAD ") + what)

def read(name):
    with open(name, "rb") as f:
        calendar = icalendar.Calendar.from_ical(f.read())
    every = [e for e in calendar.walk() if e.name in ("VEVENT", "VJOURNAL")]
    return {str(e["UID"]): e for e in every}, len(every)

steps = [read(n) for n in sorted(glob.glob(sys.argv[1] + "/step*.ics"))]
for k, (all_of, n) in enumerate(steps):
    say("step %d: identifiers are distinct" % (k + 1), len(all_of) == n)
steps = [s[0] for s in steps]
for k in range(1, len(steps)):
    before, now = steps[k - 1], steps[k]
    missing = [str(e["SUMMARY"]) for u, e in before.items() if u not in now]
    say("step %d: whatever the step before had is there: %s" % (k + 1, missing), not missing)
    both = [(before[u], e) for u, e in now.items() if u in before]
    fallen = [str(e["SUMMARY"]) for b, e in both if int(e["SEQUENCE"]) < int(b["SEQUENCE"])]
    say("step %d: no SEQUENCE falls: %s" % (k + 1, fallen), not fallen)
    back = [str(e["SUMMARY"]) for b, e in both if e["DTSTAMP"].dt < b["DTSTAMP"].dt]
    say("step %d: no DTSTAMP falls: %s" % (k + 1, back), not back)
    # that a site was put right is no revision of its plans: SEQUENCE may stay
    same = [str(e["SUMMARY"]) for b, e in both if e["STATUS"] != b["STATUS"] and e["SEQUENCE"] == b["SEQUENCE"]]
    say("step %d: another status has a greater SEQUENCE: %s" % (k + 1, same), not same or k + 1 == 9)

def status(k):
    return sorted((str(e["SUMMARY"]).replace(" (cancelled)", "").replace(", cancelled", ""), str(e["STATUS"])) for e in steps[k - 1].values() if e.name == "VEVENT")

both, other = ["Tern 18 b (occultation)", "Tern 18 b (transit)"], "Tern 50 b (transit)"
flats = "block: flats"
say("step 2: a block twice is one event: %s" % status(2), [s for s in status(2) if s[0] == flats] == [(flats, "CONFIRMED")])
say("step 3: it is cancelled: %s" % status(3), (flats, "CANCELLED") in status(3))
say("step 3: the others are confirmed", all(s[1] == "CONFIRMED" for s in status(3) if s[0] != flats))
say("step 5: what the other draft leaves out is cancelled: %s" % status(5), all((b, "CANCELLED") in status(5) for b in both) and (other, "CONFIRMED") in status(5))
say("step 6: and confirmed again: %s" % status(6), all((b, "CONFIRMED") in status(6) for b in both))
say("step 7: what only a removed draft had is cancelled: %s" % status(7), all((b, "CANCELLED") in status(7) for b in both))
say("step 8: a proposal confirms nothing: %s" % status(8), not any(s[1] == "CONFIRMED" for s in status(8)))
say("step 9: nothing in daylight is confirmed: %s" % status(9), len(status(9)) == 4 and all(s[1] == "CANCELLED" for s in status(9)))
say("step 9: and rings no bell", all(not e.walk("VALARM") for e in steps[8].values()))
EOT
"$python" "$scratch/steps.py" "$scratch" >"$scratch/said" 2>&1
check "the reader of the steps comes to its end: $(tail -n 1 "$scratch/said")" test $? = 0
while IFS= read -r line; do
	check "$line" test "${line%% *}" = ok
done <"$scratch/said"
check "all steps were looked at" test "$(wc -l <"$scratch/said")" = 50

# --- the command line
db=$scratch/c.db
sheet_fault() { # CODE TEXT ARGUMENTS
	code=$1 text=$2
	shift 2
	wane sheet "$night" --telescope North "$@" >"$scratch/out"
	got=$?
	check "exit $code (got $got): $*" test "$got" = "$code"
	check "\"$text\" said of: $* ($(head -n 1 "$scratch/err"))" grep -qF -- "$text" "$scratch/err"
	check "nothing on standard output: $*" test ! -s "$scratch/out"
}
sheet_fault 2 'no such format here (got "pdf", expected text, csv, json, ics, html)' --format pdf
sheet_fault 2 'goes with text, json and html' --format ics --since 1
sheet_fault 1 'no such edition of the plan (got 9, expected 1 to 3)' --since 9
sheet_fault 1 'no such draft of this night (got "windy"' --since windy
sheet_fault 1 'no such draft of this night (got "windy"' --draft windy
sheet_fault 2 '--keep' --keep
wane sheet "$night" --telescope North --since 2 >"$scratch/text"
check "since an edition: what is new is said: $(sed -n 7p "$scratch/text")" sh -c 'sed -n "/CHANGED SINCE edition 2/,/^$/p" "$1" | grep -q "Tern 50 b"' - "$scratch/text"
wane sheet "$night" --telescope North --since 3 --format json >"$scratch/json"
check "since the edition that holds: nothing" grep -qF '"changes": []' "$scratch/json"
"$python" -m json.tool "$scratch/json" >/dev/null 2>&1
check "JSON is read by another program" test $? = 0
wane sheet "$night" --telescope North --format html --out "$scratch/a.html"
check "a page" grep -q '</html>' "$scratch/a.html"
wane sheet 2026-05-01 --telescope North --now "$first" >/dev/null
check "a night without a plan: a proposal, exit 0" test $? = 0
check "and said so" grep -q 'no plan of this night is kept: this is a proposal' "$scratch/err"
finish
