#!/bin/bash
# Every single allocation fails once: the program refuses with 3 and writes nothing, or its result is whole. And signals that come while
# files are being written leave no temporary.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
program=$(realpath "$SCANLATCH")
cat >"$work/plan.yaml" <<'PLAN'
scanlatch: 1
name: jetty
clock: { master: 1 MHz, cell: 1 tick }
signals:
  sync: { role: composite sync, active: low }
  mark: { role: plain, active: high, from: { field: top, codes: auto } }
lines:
  only:
    regions:
      - { region: sync, cells: 2, assert: [sync] }
      - { region: rest, cells: 4, assert: [mark], hold: { page: col } }
frame: [ { repeat: 1, line: only } ]
machine: { form: loop, state: 4 bits, fields: { top: 3, page: 1..0 } }
chips: { part: 28C64 }
PLAN
cd "$work" || exit 1
"$program" build plan.yaml --listing -o whole >whole.stdout
same 'without faults: status' 0 $?

# A sanitizer has allocators of its own, which can not be replaced.
if grep -qa __asan_init "$program"; then
	finish
	exit
fi
"${CC:-cc}" -shared -fPIC -O1 -o faults.so "$OLDPWD/tests/command/faults.c" || fail 'the faults compile'

# judge STATUS NUMBER: one run with a failed allocation.
judge() {
	case $1 in
	0) diff -r whole out >/dev/null && cmp -s whole.stdout stdout || fail "allocation $2: status 0, but another result" ;;
	3) [ -z "$(find out -type f 2>/dev/null)" ] && [ -s stderr ] || fail "allocation $2: status 3, but files or no word" ;;
	*) fail "allocation $2: status $1" "$(head -n 3 stderr)" ;;
	esac
}

sed -i 's#whole/#out/#' whole.stdout
LD_PRELOAD=./faults.so FAULTS_COUNT=count "$program" build plan.yaml --listing -o out >/dev/null
total=$(cat count)
refusals=0
for ((number = 1; number <= total; number++)); do
	rm -rf out
	LD_PRELOAD=./faults.so FAULTS_ALLOCATION=$number "$program" build plan.yaml --listing -o out >stdout 2>stderr
	status=$?
	[ $status -ne 3 ] || refusals=$((refusals + 1))
	judge $status "$number"
done
holds "$refusals of $total allocations refused" test "$refusals" -gt 500 -a "$cases_failed" -eq 0

# The same of a plan that is measured, with cells that are placed by its limits: what is said is whole, or nothing is.
cp "$OLDPWD/tools/fuzz/plans/limits-composite.yaml" limits.yaml
"$program" check limits.yaml >whole.check
same 'limits: status without faults' 0 $?
LD_PRELOAD=./faults.so FAULTS_COUNT=count "$program" check limits.yaml >/dev/null
refusals=0
total=$(cat count)
# Those before read the plan and the catalogue.
for ((number = total - 450; number <= total; number++)); do
	LD_PRELOAD=./faults.so FAULTS_ALLOCATION=$number "$program" check limits.yaml >stdout 2>stderr
	status=$?
	case $status in
	0) cmp -s whole.check stdout || fail "limits: allocation $number: status 0, but another result" ;;
	3) refusals=$((refusals + 1))
		[ -s stderr ] || fail "limits: allocation $number: status 3, but no word"
		[ ! -s stdout ] || cmp -s whole.check stdout || fail "limits: allocation $number: status 3, but another result" ;;
	*) fail "limits: allocation $number: status $status" "$(head -n 3 stderr)" ;;
	esac
done
holds "limits: $refusals of 450 allocations refused" test "$refusals" -gt 300

# whole_or_none NAME STATUS FIRST STEP LEAST ARGUMENT …: what the program prints is whole and its exit status STATUS, or it is 3 and nothing is
# printed, and that LEAST times; for each STEP-th allocation from FIRST on, which counts from the end if it is below zero.
whole_or_none() {
	local name=$1 wanted=$2 first=$3 step=$4 least=$5 number total status refusals=0
	shift 5
	"$program" "$@" >whole.printed
	same "$name: status" "$wanted" $?
	LD_PRELOAD=./faults.so FAULTS_COUNT=count "$program" "$@" >stdout
	total=$(cat count)
	[ "$first" -ge 0 ] || first=$((total + first))
	for ((number = first; number <= total; number += step)); do
		LD_PRELOAD=./faults.so FAULTS_ALLOCATION=$number "$program" "$@" >stdout 2>stderr
		status=$?
		if [ $status -eq "$wanted" ]; then
			cmp -s whole.printed stdout || fail "$name, allocation $number: status $status, but another result"
		elif [ $status -eq 3 ]; then
			refusals=$((refusals + 1))
			{ [ ! -s stdout ] && [ -s stderr ]; } || fail "$name, allocation $number: status 3, but a result or no word"
		else
			fail "$name, allocation $number: status $status" "$(head -n 3 stderr)"
		fi
	done
	holds "$name: $refusals of $total allocations refused" test "$refusals" -gt "$least" -a "$cases_failed" -eq 0
}

# Of diff every ninth allocation, another ninth for each form.
sed 's/col }/col + 0, page2: 0 }/; s/page: 1..0/page: 1..0, page2: 2/; s/cells: 2/cells: 3/; s/name: jetty/name: pier/' plan.yaml >later.yaml
first=0
for form in --color=never --markdown --json --svg; do
	first=$((first + 1))
	whole_or_none "diff $form" 1 $first 9 500 diff "$form" plan.yaml later.yaml
done

# Of build --json those of its report, which is made after the files are written.
"$program" build plan.yaml -o reported >stdout
whole_or_none 'build --json' 0 -600 1 100 build plan.yaml --json -o reported
# Of lift those of the plan that is read again, too.
sed 's/codes: auto/codes: [1]/' plan.yaml >listed.yaml
"$program" build listed.yaml -o listed >stdout
whole_or_none 'lift --json' 0 1 13 300 lift --json listed.yaml listed
whole_or_none 'lift --near' 0 2 13 300 lift --near listed.yaml listed
whole_or_none 'schema of a report' 0 1 1 0 schema check

# The same of build --near: every eleventh allocation.
mkdir images
cp whole/jetty.rom0.bin whole/jetty.manifest.json images
sed 's/cells: 2/cells: 3/' plan.yaml >longer.yaml
"$program" build longer.yaml --near images --format bin -o longer >near.stdout
same 'near: status' 0 $?
sed -i 's# longer/# out/#' near.stdout
LD_PRELOAD=./faults.so FAULTS_COUNT=count "$program" build longer.yaml --near images --format bin -o out >/dev/null
total=$(cat count)
refusals=0
for ((number = 1; number <= total; number += 11)); do
	rm -rf out
	LD_PRELOAD=./faults.so FAULTS_ALLOCATION=$number "$program" build longer.yaml --near images --format bin -o out >stdout 2>stderr
	status=$?
	[ $status -ne 3 ] || refusals=$((refusals + 1))
	case $status in
	0) diff -r longer out >/dev/null && cmp -s near.stdout stdout || fail "near, allocation $number: status 0, but another result" ;;
	*) judge $status "$number of near" ;;
	esac
done
holds "near: $refusals of $total allocations refused" test "$refusals" -gt 200 -a "$cases_failed" -eq 0

# A signal that comes while the first file is flushed ends the program only after all files are whole.
for signal in INT TERM HUP QUIT; do
	rm -rf out
	holds "$signal ends the program while it writes" python3 "$OLDPWD/tests/command/faults_signal.py" "$signal" "$program" build plan.yaml -o out
	same "$signal: no temporary is left" '' "$(find out -name '.*' -type f)"
	same "$signal: the files are whole" "$(cd whole && cksum jetty.rom0.bin jetty.rom0.hex)" "$(cd out && cksum jetty.rom0.bin jetty.rom0.hex)"
done
finish
