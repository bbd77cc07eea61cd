# What telescope, allot, --telescope and --half refuse: exit code, one line of reason, nothing on standard output, nothing stored.
. tests/support/check.sh

db=$scratch/a.db
quiet() { "$WANE" "$@" --db "$db" 2>"$scratch/err"; }
quiet site add 'Tern Hill' --place 38.62,-109.36,2100 --zone America/Denver >/dev/null
quiet site add 'Tern South' --place -30.5,-70.8,2200 >/dev/null
quiet telescope add Big --site 'Tern Hill' >/dev/null
quiet allot add 2026-04-22 21:00..01:30 --site 'Tern Hill' >/dev/null
sum=$(cksum <"$db")
refuse() { # refuse CODE TEXT WORDS...
	code=$1
	text=$2
	shift 2
	quiet "$@" >"$scratch/out"
	check "exit $code: $*" test $? = "$code"
	check "reason: $*: $(cat "$scratch/err")" grep -qF -- "$text" "$scratch/err"
	check "every line begins with wane: $*" sh -c '! grep -v "^wane: " "$1"' - "$scratch/err"
	check "no control characters: $*" sh -c '! LC_ALL=C grep -q "[[:cntrl:]]" "$1"' - "$scratch/err"
	check "no result: $*" test ! -s "$scratch/out"
	check "store untouched: $*" test "$(cksum <"$db")" = "$sum"
}
hill() { # hill CODE TEXT WORDS...: at Tern Hill
	refuse "$@" --site 'Tern Hill'
}

# --- telescope
refuse 2 'telescope: no such verb (got "lst", expected list, show, add, set, remove)' telescope lst
refuse 2 'NAME: is missing' telescope show
refuse 2 'telescope: list takes no name' telescope list Big
refuse 1 'site: several are stored, choose one with --site' telescope list
refuse 2 'telescope takes one site or place' telescope list --site 'Tern Hill' --site 'Tern South'
refuse 2 '--place: a telescope belongs to a stored site' telescope list --place 1,1,1
hill 2 'telescope: nothing to set' telescope set Big
hill 2 'telescope: an argument too many (got "more")' telescope show Big more
hill 2 'field: no value (got "slew_deg_s", expected FIELD=VALUE)' telescope set Big slew_deg_s
hill 2 'field: unknown (got "slew_deg_m", did you mean slew_deg_s' telescope set Big slew_deg_m=2
hill 2 'slew_deg_s: given twice' telescope set Big slew_deg_s=2 slew_deg_s=3
hill 2 'slew_deg_s: too large (got "2000", expected a number 0.01..100 deg/s)' telescope set Big slew_deg_s=2000
hill 2 'slew_deg_s: ' telescope set Big slew_deg_s=fast
hill 2 'alt_min_deg: ' telescope set Big alt_min_deg=nan
hill 2 'mount: ' telescope set Big mount=dobson
hill 2 'band: ' telescope set Big "band=$(printf 'V\033[31m')"
hill 2 'blocks: not a block (got "flats", expected SPAN=TEXT' telescope set Big blocks=flats
hill 2 'blocks: not a block (got "evening-6..evening-9="' telescope set Big 'blocks=evening-6..evening-9='
hill 2 'blocks: not a span of the night (got "flats"' telescope set Big 'blocks=evening-6..evening-9=flats;flats=evening'
hill 2 'blocks: the span has no length' telescope set Big 'blocks=22:00..+0m=nothing'
hill 1 'telescope: "Big" exists already (wane telescope set changes it)' telescope add big
hill 1 'telescope: no such telescope at Tern Hill (got "Other"; see wane telescope list)' telescope set Other slew_deg_s=2
hill 1 'telescope: no such telescope at Tern Hill (got "Other"' telescope show Other
hill 1 'telescope: no such telescope at Tern Hill (got "Other"' telescope remove Other
hill 2 'NAME: ' telescope add "$(printf 'a\033b')"
refuse 1 'telescope: no such telescope at Tern South (got "Big"' telescope show Big --site 'Tern South'

# --- --telescope
hill 2 'telescope: no such telescope at Tern Hill (got "Other", expected one of: Big; wane telescope add NAME adds one)' night --telescope Other
refuse 2 'telescope: none is stored at Tern South (got "Big", expected it added first: wane telescope add NAME)' night --telescope Big --site 'Tern South'
refuse 2 'telescope: only a stored site has telescopes (got "Big"' night --telescope Big --place 1,1,1
refuse 2 '--telescope: a telescope belongs to one site, and 2 are given' season 2026-04-22 2026-04-22 --telescope Big --site 'Tern Hill' --site 'Tern South'
hill 2 '--telescope: the value is empty' night --telescope ''

# --- allot
refuse 2 'allot: no such verb (got "", expected list, add, remove)' allot
refuse 2 'allot: no such verb (got "set"' allot set
hill 2 'NIGHT: is missing' allot add
hill 2 'SPAN: is missing' allot add 2026-04-23
hill 2 'ID: is missing' allot remove
hill 2 'an argument too many' allot add 2026-04-23 whole note more
hill 2 'allot: an argument too many' allot list 2026-04-23
refuse 2 '--place: time is allotted at a stored site' allot list --place 1,1,1
refuse 1 'site: several are stored' allot add 2026-04-23 whole
hill 2 'NIGHT: ' allot add tomorrow whole
hill 2 'NIGHT: ' allot add 2026-02-30 whole
hill 2 'NIGHT: ' allot add 2026-04-23.. whole
hill 2 'NIGHT: the last night is before the first' allot add 2026-04-23..2026-04-22 whole
hill 2 'NIGHT: too many nights (got "2026-01-01..2027-12-31", expected at most 400)' allot add 2026-01-01..2027-12-31 whole
hill 2 'SPAN: not a span of the night (got "all", expected FROM..TO' allot add 2026-04-23 all
hill 2 'SPAN: not a span of the night' allot add 2026-04-23 "$(printf '\033[31m')"
hill 2 'SPAN: ends before it begins (got "01:30..21:00": from Fri 24 Apr 01:30 MDT (07:30 UTC) to Thu 23 Apr 21:00 MDT' allot add 2026-04-23 01:30..21:00
hill 2 'SPAN: not in this night' allot add 2026-04-23 2026-04-25T01:00Z..+1h
hill 2 'SPAN: hours must be 0 to 23' allot add 2026-04-23 21:00..24:00
hill 2 'telescope: no such telescope at Tern Hill (got "Other"' allot add 2026-04-23 whole --telescope Other
hill 2 'ID: not the number of an allotment' allot remove first
hill 1 'allot: no such allotment is stored (got "99"; see wane allot list)' allot remove 99
refuse 1 'allot: no such allotment is stored (got "1"' allot remove 1 --site 'Tern South'
hill 2 '--no-allotments: unknown option of allot' allot list --no-allotments

# --- --half
refuse 2 '--half: not a rule for halves of the night (got "noon", expected dark, sunset or HH:MM)' site set 'Tern Hill' --half noon
refuse 2 '--half: no middle of a night (got "12:00", expected 18:00 to 06:00)' site set 'Tern Hill' --half 12:00
refuse 2 '--half: no such time of day (got "24:00"' site set 'Tern Hill' --half 24:00
refuse 2 '--half: the value is empty' site set 'Tern Hill' --half ''
hill 2 '--half: unknown option of night' night --half dark
finish
