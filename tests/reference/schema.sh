#!/bin/bash
# The schemas of the languages, by an outside validator (python3-jsonschema, draft 2020-12) on what a YAML 1.2 parser makes of plans:
# good plans are accepted, those that are bad by form refused, and reader and schema agree on plans with chance faults.
# SCHEMA_SEED and SCHEMA_PLANS say which and how many of the last.
set -u
. tests/report.sh
. tests/plan_cases.sh

python=/usr/bin/python3 # Debian's, for its python3-jsonschema and python3-yaml
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

# Rules of what one key asks of another, which a schema can see too.
bonds='board-kind clear-without-count doubled-fill fill-without-cells frame-field phase-without-subcarrier region-length'

# Plans of tests/bad that break a rule of form, or such a one, and that a schema cannot see, each with its reason. Exact: one that is seen must go,
# one that is not seen any more must not come back unsaid.
unseen() {
	cat <<'CASES'
bad-bits: bad-bits # the number of state bits stands elsewhere
bad-bits-order: bad-bits # no pattern compares numbers
bad-bits-sweep: bad-bits # how many bits a field has stands elsewhere
bad-expression-deep: bad-expression # no pattern pairs parentheses
bad-expression-number: bad-expression # no pattern compares numbers
bad-number-share: bad-number # no pattern compares numerator and denominator
bad-number-start: bad-number # the number of state bits stands elsewhere
bad-quantity-half-lead: bad-quantity # no pattern divides
bad-quantity-overflow: bad-quantity # no pattern counts what 64 bits hold
bank-plan: bank-plan # the plans of a set are other files
bank-plan-missing: bank-plan # the same
bank-plan-other: bank-plan # the same
doubled-fill-derived: doubled-fill # the other fill stands in the line type that this one is like
doubled-name-bank: doubled-name # 0 and 0x0 are different keys
doubled-name-change: doubled-name # changes cannot be compared by name
doubled-name-label: doubled-name # nor chips by label
CASES
}

for name in plan set board; do
	holds "schema $name is valid by the meta-schema" "$python" -B -c "
import sys
sys.path.insert(0, 'tests/reference')
import schema_validators
schema_validators.schema('$name')"
done
same 'without a name, the schema of plans' "$("$SCANLATCH" schema plan | cksum)" "$("$SCANLATCH" schema | cksum)"

# Keys that no other plan has, and values in forms that are rare.
cat >"$work/rare.yaml" <<'PLAN'
scanlatch: "1"
name: 2024
note:
standard:
  base: composite-525
  limits: { horizontal sync width: 4.7 us +- 10000 ppm, front porch: 1.5 us (1.4 us to 1.6 us), breezeway: at least 0.4 us,
    burst length in cycles: 8 cycles to 11 cycles, line rate: exactly 4500000/286 Hz, horizontal sync polarity: negative }
grade: studio
clock: { master: 315/22MHz, accuracy: 0 ppm, dot: 2/2 ticks, cell: 9 dots, stretch: 3 tick, subcarrier: master/4, phase: every 1 line }
signals:
  true: { role: composite sync, active: low, from: { field: code, codes: [0x1, "0"] } }
  stretch: { role: stretch, active: "high", lead: 4/2 cells, from: data }
lines:
  1: { cells: "6", regions: [ { region: 1.5, cells: 0x2, assert: [true] }, { region: rest, fill: true, hold: { code: 2 } } ] }
  2: { like: 1, change: [ { region: rest, cells: 4, stretch: "0", hold: { code: "(2)" } } ] }
frame: [ { repeat: 1, line: 1 }, { repeat: 0x1, line: 2 } ]
machine: { form: loop, state: 8/2 bits, fields: { code: 3..2, low_bit: 0 }, start: "0x0", outputs: registered, advance: table }
parts: { 2716: { address pins: 4, data pins: "8", access: [100 ns, 0.12 us], package: 24 } }
chips:
  - { label: 7, part: 2716, speed: 120ns, address: [state.0, state.1, state.2, state.3],
      data: [next.0, next.1, next.2, next.3, stretch, -, -, -] }
timing: { latch: 74HC574, counter: 74HC163, decoder: 74HC138, latch delay: 30 ns, latch setup: 0 ns, counter delay: 30 ns,
  counter setup: 10 ns, decoder delay: 20 ns, share: 1, margin: 1 ns }
sweep: [ { bits: code.1..0, within: 1 s } ]
PLAN
"$SCANLATCH" check "$work/rare.yaml" >/dev/null 2>"$work/messages"
holds 'the reader takes rare forms too' test "$?" -le 1
same 'the reader takes rare forms too: messages' '' "$(cat "$work/messages")"
plans=(plans/*.yaml tests/good/*.yaml "$work/rare.yaml")
"$python" -B tests/reference/schema_good.py "${plans[@]}" >"$work/good" 2>&1
same 'good plans, sets and boards are accepted, and have every key of the languages' '' "$(cat "$work/good")"

stage tests/bad "$work/bad" || fail 'tests/bad can be copied'
form="$(rules_of FORM | grep -v '^yaml-' | tr '\n' ' ')$bonds"
"$python" -B tests/reference/schema_bad.py "$work/bad" "$form" >"$work/accepted" 2>"$work/judged"
for rule in $bonds; do
	holds "$rule is a rule" grep -q "\"$rule\"" src/base/rules.def
done
same 'plans that are bad by form are refused, but for those listed' "$(unseen | sed 's/ #.*//' | sort)" "$(sort "$work/accepted")"
holds "most plans of tests/bad were judged: $(cat "$work/judged")" test "$(sed -n 's/^judged //p' "$work/judged")" -gt 300

"$python" -B tests/reference/schema_bad.py "$work/bad" wire-missing >"$work/accepted" 2>"$work/judged"
same 'a stage without a chip in the list is refused' '' "$(grep '^wire-missing-no-chip:' "$work/accepted")"
holds 'other wires that are missing are not seen' grep -q '^wire-missing:' "$work/accepted"

# mutated WHAT COUNT: reader and schema agree on so many mutated plans or boards.
mutated() {
	local outcome found
	mkdir "$work/$1"
	cp plans/pilot-station-*.yaml "$work/$1" # the set's
	"$python" -B tests/reference/schema_mutations.py "$1" "${SCHEMA_SEED:-1}" "$2" "$work/$1" "$form" "${plans[@]}" \
		>"$work/disagreements" 2>"$work/tally"
	same "reader and schema agree on mutated $1: status" 0 $?
	same "reader and schema agree on mutated $1" '' "$(head -n 20 "$work/disagreements")"
	for outcome in 'refused form' 'accepted read' 'accepted other'; do
		found=$(sed -n "s/ $outcome\$//p" "$work/tally")
		holds "mutated $1 come out each way: ${found:-0} $outcome" test "${found:-0}" -gt $(($2 / 100))
	done
}
mutated plans "${SCHEMA_PLANS:-2500}"
mutated boards $((${SCHEMA_PLANS:-2500} / 4))

finish
