#!/bin/bash
# What the README shows is what the program prints: runs the commands of its tour and compares their output, up to lines of "...".
set -u
. "$(dirname "$0")/../report.sh"

readme=$(realpath "$(dirname "$0")/../../README.md")
plans=$(realpath "$(dirname "$0")/../../plans")
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
cp -r "$plans" "$work/plans"
cd "$work" || exit 1
scanlatch() { "$SCANLATCH" "$@"; }

# The n-th block of the README that begins with a command.
block() {
	awk -v wanted="$1" '/^```/ { inside = !inside; first = inside; next }
		inside && first { shown = /^\$ scanlatch/; count += shown; first = 0 }
		inside && shown && count == wanted { print }' "$readme"
}

# The command of a block, on one line, and the output that follows it.
command_of() { block "$1" | awk 'NR == 1 || more { print; more = /\\$/; next } { exit }' | sed 's/^\$ //; s/\\$//' | tr '\n' ' '; }
output_of() { block "$1" | awk 'NR == 1 || more { more = /\\$/; next } { print }'; }

# Compares the output of a block's command with the README; a line "..." stands for any lines.
compare() {
	eval "$(command_of "$1")" >found 2>&1
	output_of "$1" >wanted
	/usr/bin/python3 - wanted found <<'PYTHON'
import sys
wanted = open(sys.argv[1]).read().splitlines()
found = open(sys.argv[2]).read().splitlines()
at, skipping = 0, False
for line in wanted:
    if line == "...":
        skipping = True
        continue
    while skipping and at < len(found) and found[at] != line:
        at += 1
    skipping = False
    if at >= len(found) or found[at] != line:
        sys.exit("README: %r, found %r" % (line, found[at] if at < len(found) else None))
    at += 1
if not skipping and at < len(found):
    sys.exit("README leaves out %r" % found[at])
sys.exit(0 if wanted else "the README shows nothing")
PYTHON
}

holds "check shows what the README shows" compare 1

# The blocks of plain shell: the path (not needed here), limits, the patched chip, the mistaken plan.
shell_block() { awk -v wanted="$1" '/^```/ { if (inside) inside = 0; else if ($0 == "```sh") inside = ++count == wanted; next } inside' "$readme"; }
holds "the README changes a limit" eval "$(shell_block 3)"
holds "a missed limit looks as the README shows" compare 2
holds "the mended one looks as the README shows" compare 3
holds "build shows what the README shows" compare 4

holds "the README patches a chip" eval "$(shell_block 4)"
same "the patch is one bit" 1 "$(cmp -l images/tide-board-60.rom0.bin rom0-readback.bin | wc -l)"
holds "prove shows what the README shows" compare 5

holds "sheet shows what the README shows" compare 6

holds "the README makes mistakes" eval "$(shell_block 5)"
holds "mistakes look as the README shows" compare 7

holds "two stages look as the README shows" compare 8
holds "a set looks as the README shows" compare 9
holds "fit finds what the README shows" compare 10
holds "fit writes as the README shows" compare 11
holds "the plan that fit wrote proves" eval "scanlatch build board.yaml -o board"
holds "a drawing looks as the README shows" compare 12
holds "the README makes a board" eval "$(shell_block 8)"
holds "lift looks as the README shows" compare 13
holds "the lifted plan builds" scanlatch build lifted.yaml -o again
holds "the README moves a burst" eval "$(shell_block 9)"
holds "diff shows what the README shows" compare 14
holds "the README builds what was burned" eval "$(shell_block 10)"
holds "build --near shows what the README shows" compare 15
holds "diff of images shows what the README shows" compare 16
same "the README shows sixteen commands" "$(block 17)" ""

# A block of YAML that is a plan's or a set's own text: each of its lines stands there, but for what a comment says.
yaml_block() { awk -v wanted="$1" '/^```/ { if (inside) inside = 0; else if ($0 == "```yaml") inside = ++count == wanted; next } inside' "$readme"; }
stands_in() { # block, plan
	yaml_block "$1" | sed 's/ *#.*//' | tr -s ' ' | sed '/^ *$/d' >shown
	sed 's/ *#.*//' "$2" | tr -s ' ' >whole
	[ -s shown ] && ! grep -vxFf whole shown
}
holds "the README quotes the tide board" stands_in 1 plans/tide-board-60.yaml
holds "the README quotes the harbour mouth" stands_in 2 plans/harbour-mouth.yaml
holds "the README quotes the mooring board" stands_in 3 plans/mooring-board.yaml
holds "the README quotes the pilot station" stands_in 4 plans/pilot-station.yaml

finish
