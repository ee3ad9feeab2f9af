#!/bin/bash
# The manifest against the files that it speaks of, each sum worked out anew from their bytes.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

for plan in plans/*.yaml tests/good/{bank,scrambled,wide-part,count-async,codes-auto,phase-frames,sweep,period}.yaml; do
	name=$(basename "$plan" .yaml)
	"$SCANLATCH" build "$plan" -o "$work/$name" >"$work/stdout" 2>"$work/stderr"
	same "$name: build" 0 $?
	"$SCANLATCH" prove --json "$plan" "$work/$name" >"$work/$name.proofs" 2>"$work/stderr"
	same "$name: prove" 0 $?
	holds "$name: manifest" python3 tests/command/judge_manifest.py "$plan" "$work/$name" "$work/$name.proofs"
done
"$SCANLATCH" build tests/good/lead.yaml --format hex -o "$work/hex" >"$work/stdout"
holds 'only Intel HEX: manifest' python3 tests/command/judge_manifest.py tests/good/lead.yaml "$work/hex"

# A frame worked out by hand: 31 1/2 cycles of 4 ticks are 126 ticks of 1/4 us, 4000000/126 frames a second.
same 'rate of a frame' '2000000/63 31746.031746 3 14 126' "$(python3 -c '
import json, sys
frame = json.load(open(sys.argv[1]))["frame"]
print(frame["rate"]["fraction"], frame["rate"]["decimal"], frame["lines"], frame["cells"], frame["ticks"])
' "$work/phase-frames/phase-frames.manifest.json")"
same 'a start for each bank' '[(0, 0), (1, 0)]' "$(python3 -c '
import json, sys
print([(start["bank"], start["state"]) for start in json.load(open(sys.argv[1]))["start"]])
' "$work/bank/bank.manifest.json")"
finish
