"""Puts the parts of loop.v and line_frame.v on a board as a line-frame plan wires them, and compares what a simulation of it
did with the plan.

    line_frame_board.py make PLAN IMAGES OUT      writes OUT/board.v and OUT/LABEL.mem for each image IMAGES/NAME.LABEL.bin
    line_frame_board.py compare PLAN IMAGES TRACE [SKIP]
                                                  TRACE must be the plan's timeline, cell by cell, for more than two frames. It
                                                  may begin with up to SKIP cells before the frame's first (0 if left out)
    line_frame_board.py powers PLAN               prints a SKIP and four values that power can leave in what feeds back
    line_frame_board.py wirable PLAN              fails where the stretch pin comes late (no board delays by less than nothing)
    line_frame_board.py flip PLAN IMAGES OUT      writes IMAGES to OUT with one wired bit flipped in a row of the frame, at all
                                                  addresses at which the row is

Wiring and timeline come from the plan's text alone, by the reader in oracle_plan.py; nothing comes from images but the memories'
contents and, from IMAGES/NAME.manifest.json, what a plan leaves open: in which state lines begin, and the codes of signals
that say `codes: auto`. What feeds back is traced as one number, packed as in oracle_line_frame.py.
"""

import os
import random
import shutil
import sys

from loop_board import clock_lines, data_pin, decoder_lines, memory_text, planned_pins, read_trace, write
from oracle import machine_run, read_images, read_plan, start_of
from oracle_chips import chips_of, row_addresses
from oracle_line_frame import feedback_widths, kind_codes, numbered_from_0, step_pin
from oracle_manifest import load

CELLS_AFTER_FRAMES = 50


def power_up(plan, start):
	"""What feeds back in the frame's first cell, H being `start`."""
	line, step, kind, _ = feedback_widths(plan)
	code = kind_codes(plan)[plan.lines[0][0].name] if kind else 0
	return start | (step and int(step_pin(plan, 0)) << line) | code << line + step


def address_wire(pin, wire, stage):
	"""What drives an address pin. An open one sees noise."""
	if wire is None:
		return f"noise[{pin}]"
	name, _, number = wire.partition(".")
	name = f"{stage}_state" if name == "state" else name
	return {"low": "1'b0", "high": "1'b1"}.get(wire) or f"{name}[{number}]"


def chip_lines(number, chip):
	pins = ", ".join(address_wire(pin, wire, chip.stage) for pin, wire in reversed(list(enumerate(chip.address))))
	yield f"\twire [{chip.data_pins - 1}:0] data{number};"
	yield (f"\tslow_memory #(.ADDRESS_PINS({chip.address_pins}), .DATA_PINS({chip.data_pins}), .FILE(\"{chip.label}.mem\"))"
		f" chip{number} (.address({{{pins}}}), .data(data{number}));")


class Word:
	"""Where the bits of a stage's word are."""

	def __init__(self, chips, stage):
		self.chips = chips
		self.stage = stage

	def pin(self, wire):
		"""The data pin that carries a bit; chips of the other stage carry bits of the same names."""
		return data_pin([chip if chip.stage == self.stage else NO_CHIP for chip in self.chips], wire)

	def number(self, name, bits):
		return "{" + ", ".join(self.pin(f"{name}.{bit}") for bit in reversed(range(bits))) + "}"


class NoChip:
	data = ()


NO_CHIP = NoChip()


def state_lines(stage, word, enable, initial):
	name = f"{stage.name}_state"
	if stage.counted:
		yield (f"\tstage_counter #(.BITS({stage.bits}), .ASYNCHRONOUS({int(stage.clear_async)}), .POWER_UP({initial}))"
			f" {stage.name}_counter (.clock(clock), .enable({enable}), .clear({word.pin('clear')}), .q({name}));")
	else:
		yield (f"\tenabled_latch #(.BITS({stage.bits}), .POWER_UP({initial})) {stage.name}_latch (.clock(clock),"
			f" .enable({enable}), .d({word.number('next', stage.bits)}), .q({name}));")


def latched_lines(stage, enable, bits, source, target, initial=None):
	"""Drives `target` from a pin of a word: by way of a latch, where the stage has them."""
	if stage.direct:
		yield f"\tassign {target} = {source};"
		return
	known = "" if initial is None else f", .POWER_UP({initial})"
	label = target.replace("[", "_").replace("]", "")
	yield f"\tenabled_latch #(.BITS({bits}){known}) latch_{label} (.clock(clock), .enable({enable}), .d({source}), .q({target}));"


def control_lines(plan, words):
	"""The states, step and kind, with what the power leaves in them."""
	two = plan.machine
	line, step, kind, _ = feedback_widths(plan)
	shifts = [0, line, line + step, line + step + kind]
	initial = [f"(POWER_UP >> {shift})" for shift in shifts]
	yield from latched_lines(two.line, "1'b1", 1, words["line"].pin("step"), "step", f"({initial[1]} & 1)")
	if two.kind_bits:
		mask = (1 << two.kind_bits) - 1
		yield from latched_lines(two.frame, "step", two.kind_bits, words["frame"].number("kind", two.kind_bits), "kind",
			f"({initial[2]} & {mask})")
	yield from state_lines(two.line, words["line"], "1'b1", f"({initial[0]} & {(1 << line) - 1})")
	yield from state_lines(two.frame, words["frame"], "step", initial[3])


def wire_lines(two):
	yield "\twire step;"
	if two.kind_bits:
		yield f"\twire [{two.kind_bits - 1}:0] kind;"
	for stage in (two.line, two.frame):
		yield f"\twire [{stage.bits - 1}:0] {stage.name}_state;"
	yield f"\twire [{two.line.bits - 1}:0] state = line_state;"


def feedback_wires(plan):
	two = plan.machine
	wires = ["frame_state"]
	wires += [] if two.frame.direct or not two.kind_bits else ["kind"]
	wires += [] if two.line.direct else ["step"]
	return "{" + ", ".join(wires + ["line_state"]) + "}"


def signal_lines(plan, words, index, signal):
	"""Drives pins[index]."""
	if signal.field:
		outputs = ", ".join(f"{signal.field}_n[{code}]" for code in sorted(signal.codes)) or "1'b1"
		yield f"\tassign pins[{index}] = {'' if signal.active_low else '!'}(&{{{outputs}}});"
		return
	stage = plan.machine.line if signal.stage == "line" else plan.machine.frame
	enable = "1'b1" if signal.stage == "line" else "step"
	yield from latched_lines(stage, enable, 1, words[signal.stage].pin(signal.name), f"pins[{index}]")


def give_codes(plan, images):
	"""Codes that the program chose: the decoder's outputs are wired to suit."""
	if any(signal.field and signal.codes is None for signal in plan.signals):
		codes = load(os.path.join(images, f"{plan.name}.manifest.json"))["proofs"]["signals"]["codes"]
		for signal in plan.signals:
			if signal.field and signal.codes is None:
				signal.codes = frozenset(codes[signal.name])


def board_lines(plan, chips, start):
	bits = sum(feedback_widths(plan))
	pins = len(plan.signals)
	words = {stage: Word(chips, stage) for stage in ("line", "frame")}
	yield f"module board #(parameter [{bits - 1}:0] POWER_UP = {power_up(plan, start)}, parameter [7:0] BANK = 0,"
	yield "\t\tparameter integer SKIP = 0);"
	yield "\twire clock;"
	yield f"\twire [{pins - 1}:0] pins;"
	yield from wire_lines(plan.machine)
	yield "\twire [7:0] bank = BANK;"
	yield "\treg [31:0] noise = 32'h5AA53CC3;"
	yield "\talways @(posedge clock) noise <= $random;"
	yield from clock_lines(plan)
	for number, chip in enumerate(chips):
		yield from chip_lines(number, chip)
	yield from control_lines(plan, words)
	yield from decoder_lines(plan)
	for index, signal in enumerate(plan.signals):
		yield from signal_lines(plan, words, index, signal)
	feedback = feedback_wires(plan)
	yield f"\tsettled #(.BITS({bits + pins})) still (.clock(clock), .wires({{pins, {feedback}}}));"
	yield (f"\trecorder #(.BITS({bits}), .PINS({pins}), .CELLS(SKIP + {2 * plan.cells + CELLS_AFTER_FRAMES}))"
		f" trace (.clock(clock), .state({feedback}), .pins(pins));")
	yield "endmodule"


def make(path, images, out):
	plan = read_plan(path)
	chips = chips_of(plan)
	give_codes(plan, images)
	write(os.path.join(out, "board.v"), "\n".join(board_lines(plan, chips, start_of(plan, images))) + "\n")
	for chip in chips:
		with open(os.path.join(images, f"{plan.name}.{chip.label}.bin"), "rb") as file:
			write(os.path.join(out, f"{chip.label}.mem"), memory_text(chip, file.read()))


def feedback_parts(plan, feedback):
	"""H, the latched step bit, the latched kind, V (None where there is no such latch)."""
	parts = []
	for width in feedback_widths(plan):
		parts.append(feedback & ((1 << width) - 1) if width else None)
		feedback >>= width
	return parts


def planned_parts(plan, cell, start):
	"""The same as the plan has it; H is None where it is free."""
	number, line, column, _ = plan.places[cell]
	mask, value = plan.held[cell]
	whole = mask == (1 << plan.machine.bits) - 1
	state = column if numbered_from_0(plan) else start if column == 0 else value if whole else None
	_, step, kind, _ = feedback_widths(plan)
	return [state, int(step_pin(plan, cell)) if step else None, kind_codes(plan)[line.name] if kind else None, number]


def wrong_state(plan, cell, feedback, start):
	found = feedback_parts(plan, feedback)
	planned = planned_parts(plan, cell, start)
	mask, value = plan.held[cell]
	if any(wanted not in (None, part) for part, wanted in zip(found, planned)) or found[0] & mask != value:
		return f"H, step, kind, V are {found}, expected {planned} and {value:#x} under mask {mask:#x}"
	return None


def unknown(plan, signal, ordinal):
	"""Whether a pin may be what the power left in its latch."""
	if signal.field:
		return False
	if signal.stage == "frame":
		return not plan.machine.frame.direct and ordinal < plan.lines[0][0].cells
	return not plan.machine.line.direct and ordinal == 0


def wrong_pins(plan, ordinal, pins):
	planned = planned_pins(plan, ordinal % plan.cells)
	forgiven = [unknown(plan, signal, ordinal) for signal in reversed(plan.signals)]
	if len(pins) == len(planned) and all(level == wanted or free and level == "x"
			for level, wanted, free in zip(pins, planned, forgiven)):
		return None
	return f"pins {pins}, expected {planned}"


def fault(plan, ordinal, row, due, start):
	"""What is wrong in a cell of the trace, or None."""
	ticks, feedback, pins = row
	if ticks != due:
		return f"begins after {ticks} ticks, expected {due}"
	return wrong_pins(plan, ordinal, pins) or wrong_state(plan, ordinal % plan.cells, feedback, start)


def compare(path, images, trace_path, skip="0"):
	plan = read_plan(path)
	trace = list(read_trace(trace_path))
	start = start_of(plan, images)
	first = power_up(plan, start)
	home = next((cell for cell, (_, feedback, _) in enumerate(trace) if feedback == first), len(trace))
	if home > int(skip) or len(trace) != 2 * plan.cells + CELLS_AFTER_FRAMES + int(skip):
		sys.exit(f"{len(trace)} cells, the frame's first after {home} of them")
	due = trace[home][0]
	for ordinal, row in enumerate(trace[home:]):
		wrong = fault(plan, ordinal, row, due, start)
		if wrong:
			sys.exit(f"{plan.place(ordinal)}, cell {ordinal} after the frame's first: {wrong}")
		due += plan.cell_ticks[ordinal % plan.cells]
	print(f"{len(trace) - home} cells with {len(plan.signals)} pins")


def powers(path):
	"""The skip is two frames: one to regain the frame, one to its first cell."""
	plan = read_plan(path)
	values = 1 << sum(feedback_widths(plan))
	chance = random.Random(plan.name)
	print(2 * plan.cells, values - 1, *(chance.randrange(values) for _ in range(3)))


def wirable(path):
	plan = read_plan(path)
	sys.exit(int(plan.stretch_signal is not None and plan.stretch_signal.lead < 0))


def flip(path, images, out):
	plan = read_plan(path)
	chips = read_images(plan, images, ["bin"], 16)
	machine = machine_run(plan, chips, start_of(plan, images))
	chance = random.Random(plan.name)
	chip = chance.choice(chips)
	row = chance.choice(machine.read_rows(chip.stage)[:plan.cells])
	pin = chance.choice([pin for pin, wire in enumerate(chip.data) if wire])
	names = machine.rows_of[chip.stage].names
	wired = sum(1 << pin for pin, wire in enumerate(chip.address) if wire in names)
	place = row_addresses(chip, names)[row] & wired
	image = bytearray(chip.image)
	for address in range(1 << chip.address_pins):
		if address & wired == place:
			image[address * (chip.data_pins // 8) + pin // 8] ^= 1 << pin % 8
	chip.image = bytes(image)
	os.makedirs(out)
	for chip in chips:
		with open(os.path.join(out, f"{plan.name}.{chip.label}.bin"), "wb") as file:
			file.write(chip.image)
	shutil.copy(os.path.join(images, f"{plan.name}.manifest.json"), out)


COMMANDS = {"make": make, "compare": compare, "powers": powers, "wirable": wirable, "flip": flip}

if __name__ == "__main__":
	COMMANDS[sys.argv[1]](*sys.argv[2:])
