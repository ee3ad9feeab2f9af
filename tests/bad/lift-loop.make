# Counters of 12 and 13 bits that nothing clears: 4096 cells, at the last but one of which step is latched, and 8192 lines.
cd "$(dirname "$0")" || exit 1
{
	head -c 4094 /dev/zero
	printf '\001\000'
} >lift-loop.line
head -c 8192 /dev/zero >lift-loop.frame
cat <<'BOARD'
scanlatch: 1
name: buoy
clock: { master: 1 MHz, cell: 1 tick }
signals:
  sync: { role: horizontal sync, active: high }
machine:
  form: line-frame
  line:  { state: 12 bits, advance: count }
  frame: { state: 13 bits, advance: count }
  kind: 0 bits
chips: { line: { part: BUOYROM }, frame: { part: PIERROM } }
parts:
  BUOYROM: { address pins: 12, data pins: 8, access: [100 ns] }
  PIERROM: { address pins: 13, data pins: 8, access: [100 ns] }
BOARD
