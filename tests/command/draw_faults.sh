#!/bin/bash
# Allocations that fail while pictures are drawn: the program refuses with 3 and draws nothing, or the picture is whole.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
program=$(realpath "$SCANLATCH")
cat >"$work/plan.yaml" <<'PLAN'
scanlatch: 1
name: jetty
standard: { limits: { horizontal sync width: 2 us +- 1 us } }
clock: { master: 1 MHz, cell: 1 tick, subcarrier: master / 4 }
signals:
  sync:  { role: composite sync, active: low }
  blank: { role: blanking, active: high }
  mark:  { role: plain, active: high, lead: 1 cell, from: { field: top, codes: auto } }
lines:
  only:
    regions:
      - { region: sync, cells: 2, assert: [sync, blank] }
      - { region: rest, cells: 4, assert: [mark], hold: { page: col } }
frame: [ { repeat: 1, line: only } ]
machine: { form: loop, state: 4 bits, fields: { top: 3, page: 1..0 } }
chips: { part: 28C64 }
PLAN
cd "$work" || exit 1

# A sanitizer has allocators of its own, which can not be replaced.
if grep -qa __asan_init "$program"; then
	holds 'without faults' "$program" draw line plan.yaml
	finish
	exit
fi
"${CC:-cc}" -shared -fPIC -O1 -o faults.so "$OLDPWD/tests/command/faults.c" || fail 'the faults compile'

# judge NAME STATUS NUMBER: one run with a failed allocation.
judge() {
	case $2 in
	0) cmp -s whole.out out || fail "$1, allocation $3: status 0, but another picture" ;;
	3) [ ! -s out ] && [ -s stderr ] || fail "$1, allocation $3: status 3, but a picture or no word" ;;
	*) fail "$1, allocation $3: status $2" "$(head -n 3 stderr)" ;;
	esac
}

# every NAME ARGUMENT …: each of the allocations that are the picture's own, and some of the reading before.
every() {
	local name=$1 total number status refusals=0
	shift
	"$program" draw "$@" plan.yaml >whole.out
	LD_PRELOAD=./faults.so FAULTS_COUNT=count "$program" draw "$@" plan.yaml >/dev/null
	total=$(cat count)
	for ((number = 1; number <= total; number += number < total - 400 ? 41 : 1)); do
		LD_PRELOAD=./faults.so FAULTS_ALLOCATION=$number "$program" draw "$@" plan.yaml >out 2>stderr
		status=$?
		[ $status -ne 3 ] || refusals=$((refusals + 1))
		judge "$name" $status "$number"
	done
	holds "$name: $refusals of $total allocations refused" test "$refusals" -gt 50
}

every line line
every text line --text
every frame frame
every table table
every phase phase

finish
