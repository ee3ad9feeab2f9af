#!/usr/bin/python3
"""A second implementation of the machines, written from the design pages alone, that judges what scanlatch builds.

	oracle.py judge            lines PLAN<TAB>FOLDER<TAB>STATUS<TAB>FORMATS<TAB>RECORD on standard input: STATUS is what
	                           `build PLAN -o FOLDER --format FORMATS --record RECORD` came to. Where it is 1, FOLDER.unproven
	                           must hold what the same with --unproven wrote
	oracle.py damage OUT SEED  the same lines on standard input: for each with status 0, copies the images to a folder in
	                           OUT with one bit flipped, and prints PLAN, folder, what the musts are then worth (pass or
	                           fail) and why, with tabs between

judge prints `ok`, `FAILED` or `undecided`, then PLAN and what was found, and fails when a line FAILED.
"""

# Where the pages can be read in more ways than one, this is how they were read here. Page numbers are those of the design.
#
#  1. Rounding (2.5): an edge's place is counted from the line's start, also after a fill; so "halves up" is always to
#     the right. Stretched cells count as normal ones: a time says nothing of how long its region lasts once cells are
#     stretched.
#  2. stretch: auto (2.5): the line type alone must meet the phase: N times its cycles are whole. Cells stretched by
#     `stretch: N` count, and stay. Leftmost means the first cells of the first marked region, then of the next. Where
#     the limits of a standard decide, any so many cells of marked regions will do here: which are better is measured,
#     and this reader measures nothing. The program says which it took (SCANLATCH check --json).
#  3. phase: every N lines (2.3): from the start of every line of the endless sequence, across the frame's end too,
#     the N lines that follow have whole cycles. A phase that repeats sooner, after a divisor of N, is in step after N
#     too. Left out, it is free.
#  4. A signal of role stretch may also be in `assert`: all cells of the region are then stretched (1.2).
#  5. Shortest period (1.3): it is that of the pins; what cells hold only has to agree where they share a state. Any
#     multiple of it that divides the frame is a lap, too, where that suits the holds better.
#  6. clear (1.5): a stored 1 is an asserted clear. The pages do not say; the clear pins of 74x161 and 74x163 are
#     active low.
#  7. clear: async (1.5): a counter of n bits has at most 2^n - 1 cells, for there must be a row that clears; that a
#     full counter comes round by itself is not made use of. A state that clears at once takes no cell on the way
#     home, and upsets too settle at once.
#  8. Spare rows (1.3): "its level for that cell" is the pin's level in the frame's first cell, so the lead is in it.
#     With direct outputs only the signal of role blanking is asserted. Counted machines have the same levels.
#  9. Without `start` (1.3) the first cell's state is the planner's choice; the manifest says which.
# 10. Address pins wired to bank.N in a plan of no set (1.6): the images are the same for every bank, and proofs count
#     every bank.
# 11. Expressions (2.2): only the result must not be negative; on the way there / and % round down (-1/2 is -1, -1%4
#     is 3).
# 12. `change` (2.5): a hold or assert given there replaces the whole of the original's. `like` may name a type that
#     comes later, and a type that is like another may have `cells` of its own.
# 13. Sweep (1.7, 2.10): a value comes up where a cell with it begins; from one such beginning to the next is at most
#     the window.
# 14. Upset (1.7): the slip is the shorter way round the (shortest) frame; in the mean every state of the frame and
#     every bit counts once.
# 15. Glitches (1.7): where the signal itself changes on an edge, it flickers if the bits can change in an order that
#     takes it there, back, and there again.
# 16. Speed (1.7): of a counted machine's setup only what the plan overrides could be checked; it is the latch's or
#     the counter's.
# 17. Intel HEX (3.1): no type 04 record for the first 64 KiB; a part smaller than a record has one short record.
# 18. Manifest (3.1): the page names the entries only roughly; the keys looked for are those that the program writes.
#     sum16 is a number.
# 19. Kind (1.4, 2.7): a line type's code is its place in `lines`, whether the frame uses it or not; codes of types that it
#     does not use are spare, like those past the last type. V is the number of the line, with a table too.
# 20. Spare rows of two stages (1.3, 1.5): those of a kind in use do not step (registered: as in the frame's first cell);
#     under a spare kind all rows step, so that it ends. Those of the frame stage have the first line's kind.
# 21. Clears (1.5): the frame stage obeys a synchronous clear only in a cell that steps, an asynchronous one at once, and
#     before the line stage's.
# 22. Closure (1.7): "each line hands over to the next" means that step is asserted at its pin in each line's last cell and
#     in no other.
# 23. Upset and power-up (1.7) range over H, V, and the step bit and the kind where those are latched.

import os
import random
import sys

import oracle_line_frame
import oracle_machine
from oracle_chips import (Fault, Rows, bank_count, check_open_data_pins, check_repeats, chips_of, image_size_fault, read_hex,
	row_addresses)
from oracle_colour import check_figures
from oracle_line_states import feasible_lines
from oracle_machine import (Machine, asserted_pins, cell_ticks, check_colour, check_holds, check_lengths, check_signals,
	check_spare_rows, check_sweeps, spare_states)
from oracle_manifest import check_manifest, load
from oracle_plan import Refused, plan_of_file
from oracle_states import feasible


class Undecided(Exception):
	"""The oracle can not tell whether that was right."""


def read_plan(path):
	plan = plan_of_file(path)
	if plan.machine.form == "line-frame":
		oracle_line_frame.check_agreements(plan)
	return plan


def read_images(plan, folder, formats, record_bytes):
	"""The plan's chips with their images; where there are both files of an image they must agree."""
	chips = chips_of(plan)
	for chip in chips:
		images = []
		base = os.path.join(folder, f"{plan.name}.{chip.label}")
		if "bin" in formats:
			with open(base + ".bin", "rb") as file:
				images.append(file.read())
		if "hex" in formats:
			with open(base + ".hex", encoding="ascii", newline="") as file:
				images.append(read_hex(file.read(), chip.capacity, record_bytes))
		if images[0] != images[-1]:
			raise Fault(f"{chip.label}: .bin and .hex differ")
		chip.image = images[0]
		image_size_fault(chip, chip.image)
	return chips


def start_of(plan, folder):
	"""Page 2.7: `start`; a counter begins at 0; otherwise the planner chose, and the manifest says what."""
	two = plan.machine.form == "line-frame"
	if plan.machine.start is not None:
		return plan.machine.start
	if plan.machine.counted or two and oracle_line_frame.numbered_from_0(plan):
		return 0
	entries = load(os.path.join(folder, f"{plan.name}.manifest.json"))["start"]
	return next(entry["state"] for entry in entries if entry["stage"] == ("line" if two else "loop"))


def machine_run(plan, chips, start, bank=0):
	"""The machine after two laps from its first cell."""
	if plan.machine.form == "line-frame":
		machine = oracle_line_frame.TwoStages(plan, chips, bank)
		machine.run(oracle_line_frame.start_feedback(plan, machine, start), oracle_line_frame.run_cells(plan))
	else:
		machine = Machine(plan, Rows(plan, chips, bank))
		machine.run(start, 2 * plan.cells + 1)
	return machine


def prove_musts(plan, chips, start, bank=0):
	"""Everything that makes images wrong; returns what was measured on the way."""
	proofs = oracle_line_frame if plan.machine.form == "line-frame" else oracle_machine
	machine = machine_run(plan, chips, start, bank)
	pins = asserted_pins(plan, machine)
	check_signals(plan, machine, pins)
	proofs.check_closure(plan, machine)
	check_holds(plan, machine)
	ticks = cell_ticks(plan, machine, pins)
	lengths = check_lengths(plan, ticks)
	longest = proofs.check_power_up(plan, machine)
	check_colour(plan, lengths)
	check_sweeps(plan, machine, ticks)
	return machine, ticks, lengths, longest


def judge_built(plan, path, folder, options):
	chips = read_images(plan, folder, *options)
	for chip in chips:
		check_repeats(chip)
		check_open_data_pins(chip)
	found = prove_musts(plan, chips, start_of(plan, folder))
	if plan.machine.form == "line-frame":
		oracle_line_frame.check_kinds(plan, found[0])
		oracle_line_frame.check_numbering(plan, found[0])
		oracle_line_frame.check_spare_rows(plan, found[0])
	else:
		check_spare_rows(plan, found[0], spare_states(plan, found[0]))
	check_manifest(plan, path, folder, chips, options[0], found)
	return "built"


def judge_refused(plan):
	verdict = feasible_lines(plan) if plan.machine.form == "line-frame" else feasible(plan)
	if verdict:
		raise Fault("refused, but there are states for all cells")
	if verdict is None:
		raise Undecided("refused, and finding states takes too long here")
	return "refused: no states for all cells"


def judge_failed(plan, folder, options):
	"""A must failed: nothing was written, and what --unproven wrote to FOLDER.unproven fails by the plan's colour or sweep."""
	if os.path.isdir(folder) and os.listdir(folder):
		raise Fault("a must failed, and yet there are files")
	folder += ".unproven"
	manifest = load(os.path.join(folder, f"{plan.name}.manifest.json"))
	failed = {name for name, proof in manifest["proofs"].items() if proof["must"] and proof["verdict"] == "fail"}
	try:
		prove_musts(plan, read_images(plan, folder, *options), start_of(plan, folder))
	except Fault as fault:
		if str(fault).split(":")[0] not in failed & {"colour", "sweep"}:
			raise
		if "colour" in failed:
			lengths = [line.ticks(plan.clock) for line, _, _ in plan.lines]
			check_figures(plan.clock, lengths, manifest["proofs"]["colour"])
		return f"failed as it must: {fault}"
	raise Fault(f"{sorted(failed)} failed, but the oracle finds nothing wrong")


def judge(path, folder, status, options):
	"""A line for a plan and what became of it; Fault when that is not what the pages say."""
	try:
		plan = read_plan(path)
	except Refused as reason:
		if status != 2:
			raise Fault(f"exit status {status}, but the plan is wrong: {reason}") from None
		return f"refused: {reason}"
	if status == 2:
		return judge_refused(plan)
	if status == 1:
		return judge_failed(plan, folder, options)
	if status == 0:
		return judge_built(plan, path, folder, options)
	raise Fault(f"exit status {status}")


def builds(lines):
	"""(plan's path, folder, status, (formats, record bytes)) of each line."""
	for line in lines:
		path, folder, status, formats, record = line.rstrip("\n").split("\t")
		yield path, folder, int(status), (formats.split(","), int(record))


def judge_all(lines):
	failed = 0
	for path, folder, status, options in builds(lines):
		try:
			print(f"ok {path}: {judge(path, folder, status, options)}")
		except Undecided as reason:
			print(f"undecided {path}: {reason}")
		except Exception as fault:  # whatever is wrong with the files must not hide the other plans
			failed += 1
			print(f"FAILED {path}: {'' if isinstance(fault, Fault) else type(fault).__name__ + ': '}{fault}")
	return 1 if failed else 0


def flipped_copy(plan, chips, machine, chance):
	"""Flips one bit of one chip: half of the time a wired one in a row of the frame, else any."""
	chip = chance.choice(chips)
	place, bit = chance.randrange(chip.capacity), chance.randrange(8)
	if chance.random() < 0.5:
		row = chance.choice(machine.read_rows(chip.stage)[:plan.cells])
		pin = chance.choice([pin for pin, wire in enumerate(chip.data) if wire])
		place = row_addresses(chip, machine.rows_of[chip.stage].names)[row] * (chip.data_pins // 8) + pin // 8
		bit = pin % 8
	chip.image = chip.image[:place] + bytes([chip.image[place] ^ 1 << bit]) + chip.image[place + 1:]
	return f"{chip.label} {place:#x} bit {bit}"


def damage(path, folder, options, out, seed):
	"""Writes damaged images and says what the musts are then worth."""
	plan = read_plan(path)
	chips = read_images(plan, folder, *options)
	start = start_of(plan, folder)
	machine = machine_run(plan, chips, start)
	what = flipped_copy(plan, chips, machine, random.Random(f"{seed} {plan.name}"))
	os.makedirs(out)
	for chip in chips:
		with open(os.path.join(out, f"{plan.name}.{chip.label}.bin"), "wb") as file:
			file.write(chip.image)
	try:
		sampled = False
		for bank in range(bank_count(chips)):
			found = prove_musts(plan, chips, start, bank)
			if plan.machine.form == "line-frame":
				oracle_line_frame.check_numbering(plan, found[0])
			sampled |= found[3][1] is None
		return "unknown" if sampled else "pass", what
	except Fault as fault:
		return "fail", f"{what}: {fault}"


def damage_all(lines, out, seed):
	for path, folder, status, options in builds(lines):
		if status == 0:
			copy = os.path.join(out, os.path.basename(folder))
			print(path, copy, *damage(path, folder, options, copy, seed), sep="\t")
	return 0


def main(arguments):
	if arguments[:1] == ["judge"]:
		return judge_all(sys.stdin)
	if arguments[:1] == ["damage"] and len(arguments) == 3:
		return damage_all(sys.stdin, *arguments[1:])
	print(__doc__, file=sys.stderr)
	return 2


if __name__ == "__main__":
	sys.exit(main(sys.argv[1:]))
