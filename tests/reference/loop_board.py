"""Puts the parts of loop.v on a board as a plan wires them, and compares what a simulation of it did with the plan.

    loop_board.py make PLAN IMAGES OUT        writes OUT/board.v and OUT/LABEL.mem for each image IMAGES/NAME.LABEL.bin
    loop_board.py compare PLAN TRACE [SKIP]   TRACE must be the plan's timeline, cell by cell, for more than a frame.
                                              It may begin with up to SKIP cells before the first state (0 if left out)

Wiring and timeline come from the plan's text alone, by the reader in oracle_plan.py (but for the cells that limits chose to
stretch: see there); nothing but the memories' contents comes from images.
"""

import os
import sys

from oracle_chips import chips_of
from oracle_plan import plan_of_file

CELLS_AFTER_FRAME = 50


def start_of(plan):
	"""The first cell's state: as the plan says, or that of a cleared counter."""
	return 0 if plan.machine.counted else plan.machine.start


def memory_text(chip, image):
	"""A word a line, in hexadecimal, address 0 first."""
	width = chip.data_pins // 8
	words = (image[first:first + width][::-1].hex() for first in range(0, len(image), width))
	return "\n".join(words) + "\n"


def address_wire(pin, wire):
	"""What drives an address pin. An open one sees noise."""
	if wire is None:
		return f"noise[{pin}]"
	name, _, number = wire.partition(".")
	return {"low": "1'b0", "high": "1'b1"}.get(wire) or f"{name}[{number}]"


def chip_lines(number, chip):
	pins = ", ".join(address_wire(pin, wire) for pin, wire in reversed(list(enumerate(chip.address))))
	yield f"\twire [{chip.data_pins - 1}:0] data{number};"
	yield (f"\tmemory #(.ADDRESS_PINS({chip.address_pins}), .DATA_PINS({chip.data_pins}), .FILE(\"{chip.label}.mem\"))"
		f" chip{number} (.address({{{pins}}}), .data(data{number}));")


def data_pin(chips, wire):
	"""The data pin that carries a bit of the word."""
	return next(f"data{number}[{pin}]" for number, chip in enumerate(chips) for pin, name in enumerate(chip.data)
		if name == wire)


def state_lines(plan, chips):
	bits = plan.machine.bits
	if plan.machine.counted:
		yield (f"\tcounter #(.BITS({bits}), .ASYNCHRONOUS({int(plan.machine.clear_async)}), .POWER_UP(POWER_UP))"
			f" state_counter (.clock(clock), .clear_n(!{data_pin(chips, 'clear')}), .q(state));")
		return
	next_bits = ", ".join(data_pin(chips, f"next.{bit}") for bit in reversed(range(bits)))
	yield f"\tlatch #(.BITS({bits}), .POWER_UP(POWER_UP)) state_latch (.clock(clock), .d({{{next_bits}}}), .q(state));"


def decoder_lines(plan):
	for field in sorted({signal.field for signal in plan.signals if signal.field}):
		low, width = plan.machine.fields[field]
		yield f"\twire [{(1 << width) - 1}:0] {field}_n;"
		yield f"\tdecoder #(.BITS({width})) {field}_decoder (.code(state[{low + width - 1}:{low}]), .y_n({field}_n));"


def signal_lines(plan, chips, index, signal):
	"""Drives pins[index]."""
	if signal.field:
		outputs = ", ".join(f"{signal.field}_n[{code}]" for code in sorted(signal.codes))
		yield f"\tassign pins[{index}] = {'' if signal.active_low else '!'}(&{{{outputs}}});"
	elif plan.machine.direct:
		yield f"\tassign pins[{index}] = {data_pin(chips, signal.name)};"
	else:
		yield f"\tlatch latch{index} (.clock(clock), .d({data_pin(chips, signal.name)}), .q(pins[{index}]));"


def clock_lines(plan):
	clock = plan.clock
	if plan.stretch_signal is None:
		yield f"\tcell_clock #(.CELL({clock.cell})) cells (.stretched(1'b0), .clock(clock));"
		return
	signal = plan.stretch_signal
	pin = f"{'!' if signal.active_low else ''}pins[{plan.signals.index(signal)}]"
	yield "\twire stretched;"
	yield f"\tdelay #(.CELLS({signal.lead})) stretch_delay (.clock(clock), .d({pin}), .q(stretched));"
	yield (f"\tcell_clock #(.CELL({clock.cell}), .STRETCH({clock.stretch}))"
		" cells (.stretched(stretched), .clock(clock));")


def board_lines(plan, chips):
	bits = plan.machine.bits
	yield f"module board #(parameter [{bits - 1}:0] POWER_UP = {start_of(plan)}, parameter [7:0] BANK = 0, SKIP = 0);"
	yield "\twire clock;"
	yield f"\twire [{bits - 1}:0] state;"
	yield f"\twire [{len(plan.signals) - 1}:0] pins;"
	yield "\twire [7:0] bank = BANK;"
	yield "\treg [31:0] noise = 32'h5AA53CC3;"
	yield "\talways @(posedge clock) noise <= $random;"
	yield from clock_lines(plan)
	for number, chip in enumerate(chips):
		yield from chip_lines(number, chip)
	yield from state_lines(plan, chips)
	yield from decoder_lines(plan)
	for index, signal in enumerate(plan.signals):
		yield from signal_lines(plan, chips, index, signal)
	yield (f"\trecorder #(.BITS({bits}), .PINS({len(plan.signals)}), .CELLS(SKIP + {plan.cells + CELLS_AFTER_FRAME}))"
		" trace (.clock(clock), .state(state), .pins(pins));")
	yield "endmodule"


def write(path, text):
	with open(path, "w", encoding="ascii") as file:
		file.write(text)


def make(path, images, out):
	plan = plan_of_file(path)
	chips = chips_of(plan)
	write(os.path.join(out, "board.v"), "\n".join(board_lines(plan, chips)) + "\n")
	for chip in chips:
		with open(os.path.join(images, f"{plan.name}.{chip.label}.bin"), "rb") as file:
			write(os.path.join(out, f"{chip.label}.mem"), memory_text(chip, file.read()))


def planned_pins(plan, cell):
	"""The levels of all pins in a cell, the last signal first, as Verilog prints them."""
	return "".join("10"[plan.pins[signal.name][cell] == signal.active_low] for signal in reversed(plan.signals))


def differs(plan, ordinal, found, planned):
	"""Levels that are unknown are forgiven in the first cell, where latched outputs are what the power left in them."""
	return any(level != wanted and not (ordinal == 0 and level == "x") for level, wanted in zip(found, planned)) \
		or len(found) != len(planned)


def fault(plan, ordinal, ticks, state, pins, due):
	"""What is wrong in a cell of the trace, or None."""
	cell = ordinal % plan.cells
	mask, value = plan.held[cell]
	if ticks != due:
		return f"begins after {ticks} ticks, expected {due}"
	if differs(plan, ordinal, pins, planned_pins(plan, cell)):
		return f"pins {pins}, expected {planned_pins(plan, cell)}"
	if state & mask != value:
		return f"state {state:#x}, expected {value:#x} under mask {mask:#x}"
	if cell == 0 and state != start_of(plan):
		return f"state {state:#x}, expected the first, {start_of(plan):#x}"
	return None


def read_trace(path):
	with open(path, encoding="ascii") as file:
		for line in file:
			ticks, state, pins = line.split()
			yield int(ticks), int(state, 16), pins


def compare(path, trace_path, skip="0"):
	plan = plan_of_file(path)
	trace = list(read_trace(trace_path))
	home = next((cell for cell, (_, state, _) in enumerate(trace) if state == start_of(plan)), len(trace))
	if home > int(skip) or len(trace) != plan.cells + CELLS_AFTER_FRAME + int(skip):
		sys.exit(f"{len(trace)} cells, the first state after {home} of them")
	due = trace[home][0]
	for ordinal, (ticks, state, pins) in enumerate(trace[home:]):
		wrong = fault(plan, ordinal, ticks, state, pins, due)
		if wrong:
			sys.exit(f"{plan.place(ordinal)}, cell {ordinal} after the first state: {wrong}")
		due += plan.cell_ticks[ordinal % plan.cells]
	print(f"{len(trace) - home} cells, {len(trace) - home - 1} of them with {len(plan.signals)} pins compared")


if __name__ == "__main__":
	{"make": make, "compare": compare}[sys.argv[1]](*sys.argv[2:])
