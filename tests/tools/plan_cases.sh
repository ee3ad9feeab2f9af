#!/bin/bash
# tests/command/plans.sh and tools/expect-bad must notice every way to be wrong. The program is played by a shell that
# runs the "plan" as a script; ARGUMENTS holds how it was called.
# shellcheck disable=SC2016 # the player expands what is quoted
set -u
. tests/report.sh

folder=$(mktemp -d) || exit 1
trap 'rm -rf "$folder"' EXIT
cat >"$folder/player" <<'END'
#!/bin/sh
ARGUMENTS=$*
case $1 in
prove) [ ! -e "$3/unprovable" ] ;;
build) OUT=$4; mkdir -p "$4"; . "./$2" ;;
*) . "./$2" ;;
esac
END
chmod +x "$folder/player"

# put PATH TEXT: a file of a folder of cases.
put() {
	mkdir -p "$(dirname "$folder/$1")"
	printf '%s\n' "$2" >"$folder/$1"
}

# failures SET: the headlines that plans.sh prints for that folder of cases, but for rules without a case.
failures() {
	SCANLATCH=$folder/player PLAN_CASES=$folder/$1 tests/command/plans.sh 2>&1 | grep '^FAILED' | grep -v 'has no bad plan'
}

# Sets that lack one kind of case would fail for that alone.
with_good() {
	put "$1/good/plain.yaml" 'echo built'
	put "$1/good/plain.stdout" 'built'
}
with_bad() {
	put "$1/bad/unknown-key.yaml" 'echo "unknown-key.yaml:1:1: error: no such key [unknown-key]" >&2; exit 2'
	put "$1/bad/unknown-key.stderr" 'unknown-key.yaml:1:1: error: no such key [unknown-key]'
}

with_good right
with_bad right
put right/good/more.yaml 'echo "$ARGUMENTS"; echo "a # b"; printf "\001\377\377" >"$OUT/a.bin"; echo seen >&2; exit 1'
put right/good/more.expected '# worked out by hand
exit 1
args --strict --listing
stdout build more.yaml -o out/more --strict --listing
stdout a # b
files a.bin
size a.bin 3
bytes a.bin 0x1 FF ff  # two of them'
put right/good/more.stderr 'seen'
put right/good/laid.yaml 'case $ARGUMENTS in check*) echo "$ARGUMENTS" ;; esac'
put right/good/laid.check 'check laid.yaml'
put right/good/erased.yaml 'printf "\377\377" >"$OUT/b.bin"'
put right/good/erased.expected 'every b.bin FF'
put right/bad/unknown-key-made.make 'echo "echo \"unknown-key-made.yaml: error: made [unknown-key]\" >&2; exit 2"'
put right/bad/unknown-key-made.stderr 'unknown-key-made.yaml: error: made [unknown-key]'
put right/bad/bad-number-called.yaml 'echo "x: error: $ARGUMENTS [bad-number]" >&2; exit 3'
put right/bad/bad-number-called.args 'look bad-number-called.yaml -o OUT/deep'
put right/bad/bad-number-called.exit 3
put right/bad/bad-number-called.stderr \
	'x: error: look bad-number-called.yaml -o WORK/out/bad-number-called/deep [bad-number]'
put right/bad/several-faults.yaml 'printf "x: error: a [bad-name]\n    x [y]\nx: error: b [bad-bits]\n" >&2; exit 2'
put right/bad/several-faults.stderr 'x: error: a [bad-name]
    x [y]
x: error: b [bad-bits]'
put right/bad/bank-plan.yaml '. ./bank-plan/tide.yaml'
put right/bad/bank-plan/tide.yaml 'echo "bank-plan/tide.yaml:1:1: error: no plan [bank-plan]" >&2; exit 2'
put right/bad/bank-plan.stderr 'bank-plan/tide.yaml:1:1: error: no plan [bank-plan]'
same 'cases that are right' '' "$(failures right)"
same 'rules without a case are named' 'FAILED: rule yaml-tag has no bad plan that breaks it and only it' \
	"$(SCANLATCH=$folder/player PLAN_CASES=$folder/right tests/command/plans.sh | grep 'rule yaml-tag ')"
same 'rules with a case are not' '' \
	"$(SCANLATCH=$folder/player PLAN_CASES=$folder/right tests/command/plans.sh | grep 'rule unknown-key ')"
same 'a failure gives the status' 1 \
	"$(SCANLATCH=$folder/player PLAN_CASES=$folder/right tests/command/plans.sh >/dev/null; echo $?)"

with_bad nogood
same 'no folder of good plans' 'FAILED: good: cannot be copied' "$(failures nogood 2>/dev/null)"
mkdir "$folder/nogood/good"
same 'an empty folder of good plans' 'FAILED: good: no case' "$(failures nogood)"
with_good nobad
mkdir "$folder/nobad/bad"
same 'an empty folder of bad plans' 'FAILED: bad: no case' "$(failures nobad)"

with_bad good
with_good good
put good/good/laid.yaml 'echo hello'
put good/good/laid.check 'goodbye'
put good/good/mute.yaml 'echo hello'
put good/good/vague.yaml 'echo hello'
put good/good/vague.expected '# nothing'
put good/good/refused.yaml 'echo "x: error: y [bad-name]" >&2; exit 2'
put good/good/refused.stdout ''
put good/good/crash.yaml 'kill -SEGV $$'
put good/good/crash.expected 'exit 139'
put good/good/other.yaml 'echo two; printf "\001\002" >"$OUT/a.bin"; : >"$OUT/b.bin"'
put good/good/other.stdout 'one'
put good/good/other.expected 'files a.bin
size a.bin 3
bytes a.bin 0 01 03
bytes a.bin 0 01 02 03
every a.bin 01
stdout tw
tea a.bin'
put good/good/unproven.yaml ': >"$OUT/unprovable"'
put good/good/unproven.expected 'files unprovable'
put good/good/lost.stdout 'x'
same 'good plans that are not right' 'FAILED: good/lost.stdout belongs to no case
FAILED: crash: build crashed, status 139
FAILED: laid: what check prints
FAILED: mute: neither mute.stdout nor anything in mute.expected
FAILED: other: stdout
FAILED: other: files
FAILED: other: size of a.bin
FAILED: other: a.bin from 0
FAILED: other: a.bin from 0
FAILED: other: every byte of a.bin
FAILED: other: stdout has the line '"'tw'"'
FAILED: other.expected: unknown keyword '"'tea'"'
FAILED: refused: build: exit status 2, wanted 0
FAILED: refused: stderr
FAILED: refused: stdout
FAILED: unproven: prove: exit status 1, wanted 0
FAILED: vague: neither vague.stdout nor anything in vague.expected' "$(failures good)"

with_good bad
put bad/bad/bad-name.yaml 'echo "x: error: y [bad-name]" >&2; exit 2'
put bad/bad/bad-bits.yaml 'echo "x: error: y [bad-bits]" >&2; exit 0'
put bad/bad/bad-bits.stderr 'x: error: y [bad-bits]'
put bad/bad/bad-code.yaml 'echo "x: error: y [bad-code]" >&2; kill -ABRT $$'
put bad/bad/bad-code.stderr 'x: error: y [bad-code]'
put bad/bad/bad-code.exit 134
put bad/bad/hold-value.yaml 'echo "x: error: y [hold-value]" >&2; exit 99'
put bad/bad/hold-value.stderr 'x: error: y [hold-value]'
put bad/bad/hold-value.exit 99
put bad/bad/line-length.yaml 'echo "x: error: y [line-length]" >&2; exit 2'
put bad/bad/line-length.stderr 'x: error: z [line-length]'
put bad/bad/like-loop.yaml 'printf "x: error: y [like-loop]\nx: error: y [not-yet]\n" >&2; exit 2'
put bad/bad/like-loop.stderr 'x: error: y [like-loop]
x: error: y [not-yet]'
put bad/bad/node-kind.yaml 'echo "x: error: y [too-many]" >&2; exit 2'
put bad/bad/node-kind.stderr 'x: error: y [too-many]'
put bad/bad/not-yet.args 'build not-yet.yaml -o OUT'
put bad/bad/not-yet.yaml ': >"$OUT/a.bin"; echo "x: error: y [not-yet]" >&2; exit 2'
put bad/bad/not-yet.stderr 'x: error: y [not-yet]'
put bad/bad/several-rules.yaml 'echo "x: error: y [bad-name]" >&2; exit 2'
put bad/bad/several-rules.stderr 'x: error: y [bad-name]'
put bad/bad/lost.exit '1'
put bad/bad/adrift/tide.yaml ''
same 'bad plans that are not right' 'FAILED: bad/lost.exit belongs to no case
FAILED: bad/adrift/ belongs to no case
FAILED: bad-bits: exit status 0, wanted 2
FAILED: bad-code crashed, status 134
FAILED: bad-name: no bad-name.stderr (tools/expect-bad writes it for you to read)
FAILED: hold-value crashed, status 99
FAILED: like-loop breaks another rule than its name says:
FAILED: line-length: stderr
FAILED: node-kind breaks another rule than its name says:
FAILED: not-yet: refused, and yet it wrote
FAILED: several-rules breaks several rules' "$(failures bad)"

# tools/expect-bad works in the tree that it belongs to.
mkdir -p "$folder/tree/tools" "$folder/tree/tests" "$folder/tree/src/base"
cp tools/expect-bad "$folder/tree/tools/"
cp tests/plan_cases.sh "$folder/tree/tests/"
mv "$folder/bad/bad" "$folder/tree/tests/bad"
rm "$folder/tree/tests/bad/bad-code.stderr" "$folder/tree/tests/bad/bad-bits.stderr"
cp "$folder/tree/tests/bad/line-length.stderr" "$folder/kept"
same 'expect-bad writes what is missing and says so' 'bad-bits: status 0, rules: bad-bits 
    x: error: y [bad-bits]
bad-code: crashed, status 134; nothing written
bad-name: status 2, rules: bad-name 
    x: error: y [bad-name]
status 1' "$("$folder/tree/tools/expect-bad" "$folder/player" 2>&1; echo "status $?")"
same 'it writes what was printed' 'x: error: y [bad-name]' "$(cat "$folder/tree/tests/bad/bad-name.stderr")"
same 'it writes a status other than 2' '0' "$(cat "$folder/tree/tests/bad/bad-bits.exit")"
holds 'it writes no status that is 2' test ! -e "$folder/tree/tests/bad/bad-name.exit"
holds 'it writes nothing for a crash' test ! -e "$folder/tree/tests/bad/bad-code.stderr"
holds 'it never overwrites' cmp "$folder/kept" "$folder/tree/tests/bad/line-length.stderr"

finish
