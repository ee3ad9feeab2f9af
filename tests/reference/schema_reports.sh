#!/bin/bash
# What commands print with --json, and the manifests that build writes, against the schemas of reports, by an outside validator
# (python3-jsonschema, draft 2020-12): for every plan and set of plans/ and tests/good, with standards to measure against, as a list, and
# where proofs fail. The schemas are closed, so a key that a report has and its schema does not is found here.
set -u
. tests/report.sh

python=/usr/bin/python3 # Debian's, for its python3-jsonschema
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
mkdir "$work/plans" "$work/reports"

# described NAME FILE …: the schema of that name describes the files, and there are some.
described() {
	local name=$1 faults
	shift
	faults=$("$python" -B tests/reference/schema_reports.py "$name" "$@" 2>&1)
	same "schema $name describes $# files" '' "$(head -n 12 <<<"$faults")"
	holds "schema $name: there are files" test -s "$1"
}

# report FILE ARGUMENT …: what a command prints, kept unless it found the plan bad.
report() {
	local file=$work/reports/$1 status
	shift
	"$SCANLATCH" "$@" --json >"$file" 2>"$work/stderr" </dev/null
	status=$?
	[ "$status" -le 1 ] || { fail "$*: status $status" "$(cat "$work/stderr")"; rm -f "$file"; }
}

# all_reports PLAN: of check, build and prove, and of prove again with wrong bits.
all_reports() {
	local name
	name=$(basename "$1" .yaml)
	report "$name.check" check "$1"
	report "$name.build" build "$1" -o "$work/images/$name" --unproven
	report "$name.prove" prove "$1" "$work/images/$name"
	report "$name.sheet" sheet "$1" -o "$work/sheet.html"
	mkdir "$work/reports/$name"
	"$python" -B tests/reference/schema_damage.py 1 "$work/images/$name" "$1" "$work/reports/$name" || fail "$1: images are damaged"
}

for plan in plans/*.yaml tests/good/*.yaml; do
	all_reports "$plan"
done

# without_standard PLAN: the plan without what it is measured against.
without_standard() {
	awk '/^[^ #]/ { skipping = /^(standard|grade):/ } !skipping' "$1"
}

# measured NAME STANDARD GRADE: a plan of plans/ with a standard.
measured() {
	local plan=$work/plans/$1-at-$3.yaml
	without_standard "plans/$1.yaml" >"$plan"
	printf 'standard: %s\ngrade: %s\n' "$2" "$3" >>"$plan"
	all_reports "$plan"
}

measured tide-board-60 'composite-525' studio
measured tide-board-50 'composite-625' monitor
measured harbour-mouth '{ base: mono-525, limits: { front porch: at least 1 us } }' monitor
measured mooring-board 'dmt-640x480-60' studio
measured pier-clock '{ limits: { horizontal sync width: 4.7 us +- 0.3 us, line rate: 15750 Hz } }' studio

# changed NAME SOURCE EXPRESSION …: a plan with something changed by sed.
changed() {
	local name=$1 source=$2
	shift 2
	sed -E "$@" "$source" >"$work/plans/$name.yaml"
	all_reports "$work/plans/$name.yaml"
}

# Values that never come up; a frame stage that is too slow for a line; a line whose stretched cell limits place.
changed unswept tests/good/sweep.yaml -e 's/state: 2 bits/state: 3 bits/; s/address pins: 2/address pins: 3/; s/state.1..0/state.2..0/'
changed slow-frame tests/good/two-tables.yaml -e 's/(frame: \{ part: [A-Z]+)/\1, speed: 9 us/'
changed placed plans/tide-board-60.yaml \
	-e 's/(region: front porch.*assert: \[blank\])/\1, stretch: auto/'

# Vertical sync that never comes.
changed no-field plans/mooring-board.yaml -e '/region:/s/(, vsync|vsync, )//'

# Phases in more runs than are listed.
{
	cat <<'PLAN'
scanlatch: 1
name: restless
clock: { master: 1 MHz, cell: 3 ticks, subcarrier: master / 4 }
signals: { sync: { role: composite sync, active: low } }
lines:
  short: { regions: [ { region: sync, cells: 1, assert: [sync] }, { region: rest, cells: 1 } ] }
  long: { regions: [ { region: sync, cells: 1, assert: [sync] }, { region: rest, cells: 2 } ] }
machine: { form: loop, state: 13 bits }
chips: { part: 28C64 }
frame:
PLAN
	for block in {1..160}; do
		printf '  - { repeat: %d, line: short }\n  - { repeat: 1, line: long }\n' $((block * block % 11 + 1 + block / 160))
	done
} >"$work/plans/restless.yaml"
all_reports "$work/plans/restless.yaml"

# A spare row that stays where it is: byte 2 of the flickering machine, which its table explains, leads to state 2.
cp -R "$work/images/flicker" "$work/looping"
rm "$work"/looping/*.hex
printf "\\$(printf %03o $(($(od -An -tu1 -j2 -N1 "$work/looping/flicker.rom0.bin") ^ 2)))" |
	dd of="$work/looping/flicker.rom0.bin" bs=1 seek=2 conv=notrunc status=none
report looping.prove prove tests/good/flicker.yaml "$work/looping"

# Plans that differ, do not, and go together with images; sets; a board that is near to what it was.
report same.diff diff plans/tide-board-60.yaml plans/tide-board-60.yaml
report clocks.diff diff plans/tide-board-60.yaml plans/tide-board-50.yaml
report forms.diff diff plans/mooring-board.yaml plans/pier-clock.yaml
report counted.diff diff plans/mooring-board.yaml plans/mooring-board-counted.yaml
report set.diff diff plans/pilot-station.yaml plans/pilot-station-625.yaml
report images.diff diff plans/pier-clock.yaml "$work/images/pier-clock"
# Images of an older plan, and blank ones, in which no lines are to be found.
sed -E 's/(region: burst, +time: )2.51/\13.07/' plans/ferry-queue.yaml >"$work/plans/burst.yaml"
report older.diff diff "$work/images/ferry-queue" "$work/plans/burst.yaml"
mkdir "$work/blank"
head -c 32768 /dev/zero >"$work/blank/pier-clock.rom0.bin"
report blank.diff diff "$work/blank" plans/pier-clock.yaml
sed 's/repeat: 3,/repeat: 4,/' plans/ferry-queue.yaml >"$work/plans/near.yaml"
report edited.diff diff plans/ferry-queue.yaml "$work/plans/near.yaml"
report near.build build "$work/plans/near.yaml" --near "$work/images/ferry-queue" -o "$work/images/near"
# A set with more banks, and a chip with another label.
for plan in plans/pilot-station-*.yaml; do
	sed 's/28C010, speed: 150 ns/39SF020A, speed: 70 ns/' "$plan" >"$work/plans/$(basename "$plan")"
done
sed 's/^bank: .*/bank: 2 bits/' plans/pilot-station.yaml >"$work/plans/wider.yaml"
report wider.diff diff plans/pilot-station.yaml "$work/plans/wider.yaml"
sed 's/label: U1/label: U9/' tests/good/scrambled.yaml >"$work/plans/relabelled.yaml"
report relabelled.diff diff tests/good/scrambled.yaml "$work/plans/relabelled.yaml"
described diff "$work"/reports/*.diff
report several.check check plans/pier-clock.yaml plans/pilot-station.yaml plans/mooring-board.yaml
report several.build build plans/pier-clock.yaml plans/pilot-station.yaml -o "$work/images/several"
report colour.fit fit --standard composite-525 --columns 80 --width 80 --top 3
report mode.fit fit --standard dmt-640x480-60 --columns 80 --top 3
report none.fit fit --standard composite-525 --columns 80 --grade studio
described fit "$work"/reports/*.fit
for what in parts standards crystals; do
	report "$what" list "$what"
	described "$what" "$work/reports/$what"
done
described check "$work"/reports/*.check
described build "$work"/reports/*.build
described prove "$work"/reports/*.prove "$work"/reports/*/*.prove
described sheet "$work"/reports/*.sheet
described manifest "$work"/images/*/*.manifest.json

# The reports are of many kinds, or the above shows little.
for kind in '"second_loop"' '"counterexample"' '"reason"' '"verdict": "absent"' '"low_at"' '"move"' '"not_measured": "' '"spikes"' \
	'"disturbed": \[$' '"jumpers": "pass"' '"out_of_step"' '"H":' '"first_missing"'; do
	holds "some report has $kind" grep -rqE "$kind" "$work/reports"
done

# No key of a schema is there that no report has.
"$python" -B tests/reference/schema_used.py "$work/reports" "$work/images" >"$work/unused" 2>&1
same 'keys that no report has' '' "$(cat "$work/unused")"

# A schema refuses what it does not describe.
printf '{ "crystals": [ { "name": "x" } ] }' >"$work/bad.json"
"$python" -B tests/reference/schema_reports.py crystals "$work/bad.json" >"$work/faults"
holds 'a report with keys missing is refused' grep -q 'required property' "$work/faults"

finish
