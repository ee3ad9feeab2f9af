#!/bin/bash
# What `check` says of limits: words for a missed one, and the advice, which is taken at its word.
set -u
. "$(dirname "$0")/../report.sh"

plans=$(realpath "$(dirname "$0")/../../plans")
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
cd "$work" || exit 1

# checked PLAN SED: the plan, changed; what check says of its limits, in one line.
checked() {
	sed -e "$2" "$plans/$1.yaml" >changed.yaml
	if cmp -s "$plans/$1.yaml" changed.yaml; then
		fail "$1 with $2: is another plan"
	fi
	"$SCANLATCH" check changed.yaml >check 2>&1
	sed -n '/^[a-z]*  *limits  /,/^[a-z]*  *speed  /{/ speed  /d;p}' check | tr -s ' \n' ' '
}
# says NAME WORDS FOUND
says() { holds "$1: $2" grep -Fq -- "$2" <<<"$3"; }
# silent NAME WORDS FOUND
silent() { holds "$1: not $2" test "${3#*"$2"}" = "$3"; }

for plan in "$plans"/*.yaml; do
	name=$(basename "$plan" .yaml)
	"$SCANLATCH" check --strict "$plan" >check 2>&1
	same "$name: check --strict" 0 $?
	holds "$name: keeps all limits at its grade" grep -q '^pass  limits .*: all [0-9]* limits kept at' <(tr '\n' ' ' <check | sed 's/pass  limits/\n&/g')
done

# A serration of 9 cells, two of them the next line's front porch: 81 ticks of 22/315 us. A cell fewer, and it is 72.
found=$(checked tide-board-60 's/serration,   cells: 5/serration,   cells: 7/')
says serration 'serration width is 5.657 us, allowed 3.81 to 5.079 us: 0.578 us too much; at line 259 (vertical), cell 94 (serration)' "$found"
says serration 'hint: move the edge between "broad sync" and "serration" 1 cell later: then 5.028 to 5.029 us' "$found"
found=$(checked tide-board-60 's/serration,   cells: 5/serration,   cells: 6/')
says 'advice taken' 'all 24 limits kept at monitor grade' "$found"
same 'advice: what it said comes out' 5.029 "$(sed -n 's/^serration width  *us  *\([0-9.]*\) .*/\1/p' check)"

# The picture a cell to the left: 8 ticks of 22/315 us.
found=$(checked ferry-queue 's/^grade: monitor/grade: studio/')
says 'picture' 'hint: move the picture 1 cell earlier: then 35.759 us' "$found"
checked ferry-queue 's/^grade: monitor/grade: studio/; s/right border, cells: 6/right border, cells: 7/' >/dev/null
same 'picture: what it said comes out' 35.759 "$(sed -n 's/^horizontal centre  *us  *\([0-9.]*\) .*/\1/p' check)"

# Sync at another place in one line type: no advice to make all lines longer.
found=$(checked tide-board-60 '/vertical:/,/^frame/{/front porch/d}')
says 'uneven lines' 'hint: lines differ: let all line types last as long, and sync begin at the same place in each' "$found"
silent 'uneven lines' 'make the lines' "$found"
# All too long alike: 12096000 Hz / (66 cells of 12 ticks).
found=$(checked pier-clock 's/picture,     cells: 52/picture,     cells: 54/; s/cells: 64/cells: 66/')
says 'long lines' 'line rate is 15272.727' "$found"
says 'long lines' 'hint: make the lines 1 cell shorter' "$found"

# An edge at which lines begin is two edges of the plan.
found=$(checked pier-clock 's/^grade: monitor/grade: studio/')
says 'where lines begin' 'move the edge between "back porch" and "picture", where lines begin, 1 cell earlier' "$found"

# Nothing to measure with.
says 'no sync' 'miss limits not judged: no signal has the role composite sync or horizontal sync' \
	"$(checked pier-clock 's/role: composite sync/role: plain/')"
says 'silent sync' 'miss limits not judged: sync is never asserted' "$(checked pier-clock 's/blank, sync\]/blank]/')"
says 'second pulses' '259 sync pulses are of no line and of no vertical interval (the second in its line' \
	"$(checked tide-board-60 's/blank, burst\]/blank, burst, sync]/')"

finish
