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

judged=

# described NAME FILE …: the schema of that name describes the files, and there are some.
described() {
	local name=$1 faults
	shift
	faults=$("$python" -B tests/reference/schema_reports.py "$name" "$@" 2>&1)
	same "schema $name describes $# files" '' "$(head -n 12 <<<"$faults")"
	holds "schema $name: there are files" test -s "$1"
	judged+=" $name"
}

# report FILE ARGUMENT …: what a command prints, kept unless it found the plan bad.
report() {
	local file=$work/reports/$1 status
	shift
	"$SCANLATCH" "$@" --json >"$file" 2>"$work/stderr" </dev/null
	status=$?
	[ "$status" -gt 1 ] || return 0
	rm -f "$file"
	grep -qE "\[($may_refuse)\]\$" "$work/stderr" || fail "$*: status $status" "$(cat "$work/stderr")"
}
may_refuse= # the rules by which a command may find a plan or images bad

# all_reports PLAN: of check, build, prove, sheet and lift, and of prove again with wrong bits.
all_reports() {
	local name
	name=$(basename "$1" .yaml)
	report "$name.check" check "$1"
	report "$name.build" build "$1" -o "$work/images/$name" --unproven
	report "$name.prove" prove "$1" "$work/images/$name"
	report "$name.sheet" sheet "$1" -o "$work/sheet.html"
	may_refuse='lift-raster|board-codes'
	report "$name.lift" lift "$1" "$work/images/$name"
	report "$name-near.lift" lift --near "$1" "$work/images/$name"
	may_refuse=
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
mkdir "$work/noted"
cp plans/pilot-station-525.yaml plans/pilot-station-625.yaml "$work/noted"
sed 's/^name: .*/&\nnote: for two harbours/' plans/pilot-station.yaml >"$work/noted/pilot-station.yaml"
report noted.diff diff plans/pilot-station.yaml "$work/noted/pilot-station.yaml"
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

# Boards, the other bank of a set, lines cut at a signal, a kind that no line has, several loops, and images that no plan gives back.
for plan in tide-board-60 mooring-board; do
	awk '/^[^ #]/ { skipping = /^(lines|frame):/ } !skipping; /^  form: line-frame/ { print "  kind: 2 bits" }' "plans/$plan.yaml" \
		>"$work/plans/$plan-board.yaml"
	report "board-$plan.lift" lift "$work/plans/$plan-board.yaml" "$work/images/$plan"
done
report other-bank.lift lift --near --bank 1 plans/pilot-station.yaml "$work/images/pilot-station"
report cut.lift lift --cut load plans/tide-board-60.yaml "$work/images/tide-board-60"
sed 's/^lines:/&\n  spare: { regions: [ { region: rest, cells: 100 } ] }/' plans/mooring-board.yaml >"$work/plans/spare.yaml"
report spare.build build "$work/plans/spare.yaml" -o "$work/images/spare"
report spare.lift lift --near "$work/plans/spare.yaml" "$work/images/spare"
# Fifteen ticks a lap are 15/4 cycles.
cat >"$work/plans/laps.yaml" <<'PLAN'
scanlatch: 1
name: laps
clock: { master: 8 MHz, cell: 1 tick, subcarrier: master / 4, phase: every frame }
signals: { sync: { role: composite sync, active: low }, lamp: { role: plain, active: high } }
lines:
  quay: { regions: [ { region: sync, cells: 1, assert: [sync] }, { region: rest, cells: 14 } ] }
frame: [ { repeat: 4, line: quay } ]
machine: { form: loop, state: 4 bits }
chips: { part: 28C16 }
PLAN
all_reports "$work/plans/laps.yaml"
report loops.lift lift tests/bad/lift-loops.yaml rom0=tests/bad/lift-loops.hex
report near.lift lift --near tests/bad/lift-near.yaml rom0=tests/bad/lift-near.hex
report near-lines.lift lift tests/bad/lift-near-lines.yaml rom0=tests/bad/lift-near-lines.hex rom1=tests/bad/lift-near-lines.other
described lift "$work"/reports/*.lift
for what in parts standards crystals; do
	report "$what" list "$what"
	described "$what" "$work/reports/$what"
done
described check "$work"/reports/*.check
described build "$work"/reports/*.build
described prove "$work"/reports/*.prove "$work"/reports/*/*.prove
described sheet "$work"/reports/*.sheet
described manifest "$work"/images/*/*.manifest.json

# Every command that has --json is judged above, and every schema but those of the languages. What schema prints is judged by
# tests/reference/schema.sh; list has a report for each catalogue.
commands=$("$SCANLATCH" '?' 2>&1 | sed -n 's/.*the commands are //p' | tr -d ,)
holds 'there are commands' test "$(wc -w <<<"$commands")" -gt 5
for command in $commands; do
	case $command in schema | list) continue ;; esac
	"$SCANLATCH" "$command" --help | grep -qe ' --json ' || continue
	holds "reports of $command are judged" grep -q " $command\>" <<<"$judged"
done
for name in $("$SCANLATCH" schema '?' 2>&1 | sed -n 's/.*there are plan, set, board, //p' | tr -d ,); do
	holds "schema $name is used" grep -q " $name\>" <<<"$judged"
done

# The reports are of many kinds, or the above shows little.
for kind in '"second_loop"' '"counterexample"' '"reason"' '"verdict": "absent"' '"low_at"' '"move"' '"not_measured": "' '"spikes"' \
	'"disturbed": \[$' '"jumpers": "pass"' '"out_of_step"' '"H":' '"first_missing"' '"laps": [2-9]' '"near": true' '"other_loop_count": 2' '"used": 0' \
	'"lead_in_cells": [1-9]' '"stretched_cells": [1-9]' '"hold": \{$'; do
	holds "some report has $kind" grep -rqE "$kind" "$work/reports"
done

# No key of a schema is there that no report has.
"$python" -B tests/reference/schema_used.py "$work/reports" "$work/images" >"$work/unused" 2>&1
same 'keys that no report has' '' "$(cat "$work/unused")"

# A schema refuses what it does not describe: the shortest report of each command, broken in every place.
for name in check build prove diff sheet fit lift parts standards crystals; do
	shortest=$(find "$work/reports" -maxdepth 1 \( -name "*.$name" -o -name "$name" \) -printf '%s %p\n' | sort -n | head -n 1)
	"$python" -B tests/reference/schema_broken.py "$name" "${shortest#* }" >"$work/accepted" 2>"$work/tried"
	same "schema $name: what is broken is refused" '' "$(head -n 12 "$work/accepted")"
	holds "schema $name: reports are broken" test "$(cat "$work/tried")" -gt 10
done
printf '{ "crystals": [ { "name": "x" } ] }' >"$work/bad.json"
"$python" -B tests/reference/schema_reports.py crystals "$work/bad.json" >"$work/faults"
holds 'a report with keys missing is refused' grep -q 'required property' "$work/faults"

finish
