"""The machine of two stages, run on the rows that its chips hold, and what must be true of it.

All that feeds back is packed into one number, from bit 0 up: the line stage's state; the latched step bit, where the line
stage has registered outputs; the latched kind, where the frame stage has; the frame stage's state.
"""

import random

from oracle_chips import Fault, Rows
from oracle_machine import Machine
from oracle_plan import Refused

FEEDBACK_BITS = 26
ADDRESS_BITS = 24
EXHAUSTIVE_BITS = 16
SAMPLES = 5000


def feedback_widths(plan):
	"""Bits of H, step, kind and V that feed back."""
	two = plan.machine
	return two.line.bits, int(not two.line.direct), 0 if two.frame.direct else two.kind_bits, two.frame.bits


def kind_codes(plan):
	return {name: code for code, name in enumerate(plan.line_types)}


def used_types(plan):
	"""The line types of the frame with the first line of each: {name: number}."""
	first = {}
	for number, (line, _, _) in enumerate(plan.lines):
		first.setdefault(line.name, number)
	return first


def step_pin(plan, cell):
	"""Whether step is asserted in a cell of the endless frame: in the last of each line."""
	_, line, column, _ = plan.places[cell % plan.cells]
	return column == line.cells - 1


# ---- what a plan must keep


def check_sizes(plan):
	two = plan.machine
	if len(plan.lines) > two.frame.room():
		raise Refused(f"{len(plan.lines)} lines, the frame stage has states for {two.frame.room()}")
	widths = {line.cells for line, _, _ in plan.lines}
	if max(widths) > two.line.room():
		raise Refused(f"{max(widths)} cells, the line stage has states for {two.line.room()}")
	if two.line.clear_async and len(widths) > 1:
		raise Refused(f"lines of {sorted(widths)} cells, and the line stage is cleared at once")
	if two.line.bits + two.kind_bits > ADDRESS_BITS or two.frame.bits > ADDRESS_BITS:
		raise Refused("more address bits than a chip has")
	if sum(feedback_widths(plan)) > FEEDBACK_BITS:
		raise Refused(f"{sum(feedback_widths(plan))} bits feed back")


def stored_for(plan, cell):
	"""What the line stage's row of a cell must bring about: levels of its signals, by name, and step."""
	later = (cell + (not plan.machine.line.direct)) % plan.cells
	levels = {signal.name: plan.pins[signal.name][cell if signal.field else later]
		for signal in plan.signals if signal.stage == "line" or signal.field}
	levels["step"] = step_pin(plan, later)
	return levels


def check_line_rows(plan):
	"""The lines of one type have the same rows, whichever line comes next (or came before, with a negative lead)."""
	seen = {}
	for cell, (_, line, column, _) in enumerate(plan.places):
		stored = stored_for(plan, cell)
		other, known = seen.setdefault((line.name, column), (cell, stored))
		if known != stored:
			name = next(name for name in known if known[name] != stored[name])
			raise Refused(f"{plan.place(other)} and {plan.place(cell)} want different levels of {name}")


def check_frame_signals(plan):
	for signal in plan.signals:
		if signal.stage == "frame":
			if signal.field is not None:
				raise Refused(f"{signal.name}: a frame signal comes from data")
			for number, (line, _, first) in enumerate(plan.lines):
				if len(set(plan.pins[signal.name][first:first + line.cells])) > 1:
					raise Refused(f"{signal.name} changes in line {number} ({line.name})")


def check_agreements(plan):
	"""Refused where a line-frame plan can not be built whatever states are chosen."""
	check_sizes(plan)
	check_frame_signals(plan)
	check_line_rows(plan)


# ---- the machine


class TwoStages(Machine):
	"""After a run: feedback, states (H), frame_states (V), kinds and steps (levels of the step pin), one for each cell."""

	def __init__(self, plan, chips, bank=0):
		two = plan.machine
		self.plan = plan
		self.stages = {"line": two.line, "frame": two.frame}
		self.rows_of = {name: Rows(plan, chips, bank, name) for name in self.stages}
		self.kind_of = self.rows_of["frame"].kind or [0] * (1 << two.frame.bits)
		widths = feedback_widths(plan)
		self.bits = sum(widths)
		self.size = 1 << self.bits
		self.masks = [(1 << width) - 1 for width in widths]
		self.shifts = [sum(widths[:index]) for index in range(4)]
		self.states = []

	def parts(self, feedback):
		"""H, the latched step bit, the latched kind, V; 0 where there is no such latch."""
		return [feedback >> shift & mask for shift, mask in zip(self.shifts, self.masks)]

	def packed(self, parts):
		return sum((part & mask) << shift for part, shift, mask in zip(parts, self.shifts, self.masks))

	def kind(self, latched, frame_state):
		return self.kind_of[frame_state] if self.stages["frame"].direct else latched

	def line_row(self, state, kind):
		"""The number of the row that the line stage reads."""
		return state | kind << self.stages["line"].bits

	def step_level(self, latched, row):
		return self.rows_of["line"].columns["step"][row] if self.stages["line"].direct else latched

	def advanced(self, name, state, row):
		"""The state of a stage after an edge that it obeys. A counter whose clear is asserted, at 0 too, is held there."""
		stage, rows = self.stages[name], self.rows_of[name]
		if not stage.counted:
			return rows.next[row]
		if rows.clear[row]:
			return 0
		return (state + 1) % (1 << stage.bits)

	def settled(self, feedback):
		"""Clears that are asynchronous have their way before the cell begins, the frame stage's first."""
		state, latched_step, latched_kind, frame_state = self.parts(feedback)
		if self.stages["frame"].clear_async and self.rows_of["frame"].clear[frame_state]:
			frame_state = 0
		if self.stages["line"].clear_async:
			if self.rows_of["line"].clear[self.line_row(state, self.kind(latched_kind, frame_state))]:
				state = 0
		return self.packed((state, latched_step, latched_kind, frame_state))

	def after(self, feedback):
		state, latched_step, latched_kind, frame_state = self.parts(feedback)
		row = self.line_row(state, self.kind(latched_kind, frame_state))
		new = [self.advanced("line", state, row), self.rows_of["line"].columns["step"][row], latched_kind, frame_state]
		if self.step_level(latched_step, row):
			new[2:] = self.kind_of[frame_state], self.advanced("frame", frame_state, frame_state)
		return self.settled(self.packed(new))

	def run(self, start, cells):
		self.feedback = []
		feedback = self.settled(start)
		for _ in range(cells):
			self.feedback.append(feedback)
			feedback = self.after(feedback)
		parts = [self.parts(feedback) for feedback in self.feedback]
		self.states = [state for state, _, _, _ in parts]
		self.frame_states = [frame_state for _, _, _, frame_state in parts]
		self.kinds = [self.kind(latched, frame_state) for _, _, latched, frame_state in parts]
		self.steps = [self.step_level(latched, self.line_row(state, kind))
			for (state, latched, _, _), kind in zip(parts, self.kinds)]
		return self.states

	def read_rows(self, stage):
		"""The row that a stage reads in each cell of the run."""
		if stage == "frame":
			return self.frame_states
		return [self.line_row(state, kind) for state, kind in zip(self.states, self.kinds)]

	def data_levels(self, signal):
		"""The pin's level in each cell of the run; unknown (None) as long as its latch has not seen an edge."""
		column = self.rows_of[signal.stage].columns[signal.name]
		levels = [column[row] for row in self.read_rows(signal.stage)]
		if self.stages[signal.stage].direct:
			return levels
		if signal.stage == "line":
			return [None] + levels[:-1]
		pins = [None]
		for level, step in zip(levels, self.steps):
			pins.append(level if step else pins[-1])
		return pins[:-1]


def start_feedback(plan, machine, start):
	"""All that is latched in the frame's first cell, H being `start`."""
	line = plan.lines[0][0]
	return machine.packed((start, line.cells == 1, kind_codes(plan)[line.name], 0))


def run_cells(plan):
	"""Two whole frames, after the line in which what the frame stage latches is unknown."""
	return 2 * plan.cells + plan.lines[0][0].cells + 1


# ---- proofs


def check_closure(plan, machine):
	"""Each line hands over to the next in its last cell, and the frame returns to its first cell."""
	for cell, step in enumerate(machine.steps):
		if step != step_pin(plan, cell):
			raise Fault(f"closure: step is {'' if step else 'not '}asserted at {plan.place(cell)} (frame cell {cell})")
	if machine.feedback[plan.cells] != machine.feedback[0]:
		raise Fault(f"closure: after {plan.cells} cells there is {machine.parts(machine.feedback[plan.cells])} (H, step, kind,"
			f" V), not {machine.parts(machine.feedback[0])}")


def first_states(plan, machine):
	"""Power-up values to look at: all, or chance ones and those next to each other where there are too many."""
	if machine.bits <= EXHAUSTIVE_BITS:
		return range(machine.size)
	chance = random.Random(plan.name)
	return sorted({chance.randrange(machine.size) for _ in range(SAMPLES)} | {0, machine.size - 1})


def ways_home(machine, home, first):
	"""{value: (cells until the frame is reached, where)} for each of `first` and what comes after; a Fault if one never is."""
	ways = {}
	for feedback in first:
		trail = {}
		feedback = machine.settled(feedback)
		while feedback not in home and feedback not in ways:
			if feedback in trail:
				raise Fault(f"power-up: a second loop through {machine.parts(feedback)} (H, step, kind, V)")
			trail[feedback] = None
			feedback = machine.after(feedback)
		cells, where = (0, feedback) if feedback in home else ways[feedback]
		for passed in reversed(trail):
			cells += 1
			ways[passed] = cells, where
	return ways


def check_power_up(plan, machine):
	"""Returns the cells of the longest way, and the values that have it (None where only some were looked at)."""
	home = set(machine.feedback[:plan.cells])
	first = first_states(plan, machine)
	ways = ways_home(machine, home, first)
	lengths = {value: ways.get(machine.settled(value), (0, value))[0] for value in first}
	longest = max(lengths.values())
	if len(lengths) < machine.size:
		return longest, None
	return longest, [value for value, cells in lengths.items() if cells == longest]


def upset(plan, machine):
	"""For each cell of the frame and each feedback bit flipped: (cells until the frame is regained, slip in cells), as lists."""
	position = {feedback: cell for cell, feedback in enumerate(machine.feedback[:plan.cells])}
	flipped = [(cell, machine.settled(feedback ^ 1 << bit)) for feedback, cell in position.items()
		for bit in range(machine.bits)]
	ways = ways_home(machine, position, {value for _, value in flipped})
	waits, slips = [], []
	for cell, value in flipped:
		steps, where = ways.get(value, (0, value))
		slip = (position[where] - cell - steps) % plan.cells
		waits.append(steps)
		slips.append(min(slip, plan.cells - slip))
	return waits, slips


# ---- how the pages number states, and rows that the frame does not use


def numbered_from_0(plan):
	"""Whether the cells of every line have the states 0, 1, …: nothing says otherwise."""
	return plan.machine.counted or not (any(signal.field for signal in plan.signals)
		or any(region.hold for line in plan.line_types.values() for region in line.regions))


def check_kinds(plan, machine):
	codes = kind_codes(plan)
	for cell, (_, line, _, _) in enumerate(plan.places):
		if machine.kinds[cell] != codes[line.name]:
			raise Fault(f"{plan.place(cell)}: kind is {machine.kinds[cell]}, expected {codes[line.name]}")


def check_numbering(plan, machine):
	"""What can be told of images without knowing which codes the maker gave to line types."""
	for cell, (number, _, column, _) in enumerate(plan.places):
		if machine.frame_states[cell] != number:
			raise Fault(f"{plan.place(cell)}: V is {machine.frame_states[cell]}, expected {number}")
		if column == 0 and machine.states[cell] != machine.states[0]:
			raise Fault(f"{plan.place(cell)}: state {machine.states[cell]:#x}, other lines begin at {machine.states[0]:#x}")
		if numbered_from_0(plan) and machine.states[cell] != column:
			raise Fault(f"{plan.place(cell)}: state {machine.states[cell]:#x}, expected {column:#x}")


def spare_level(plan, stage, signal):
	"""Latched signals are as in the frame's first cell, direct ones at rest, with blanking asserted."""
	rest = signal.role == "blanking" if stage.direct else plan.pins[signal.name][0]
	return int(bool(rest) != signal.active_low)


def check_spare_row(machine, stage, row, wanted):
	"""wanted: level of each bit of the word but next and clear, by name."""
	rows = machine.rows_of[stage.name]
	if stage.counted and not rows.clear[row]:
		raise Fault(f"{stage.name} stage: spare row {row:#x} does not assert clear")
	home = machine.states[0] if stage.name == "line" else 0
	if not stage.counted and rows.next[row] != home:
		raise Fault(f"{stage.name} stage: spare row {row:#x} leads to {rows.next[row]:#x}, not to {home:#x}")
	for name, level in wanted.items():
		if rows.columns[name][row] != level:
			raise Fault(f"{stage.name} stage: spare row {row:#x}: {name} is at level {1 - level}")


def check_spare_rows(plan, machine):
	two = plan.machine
	levels = {stage.name: {signal.name: spare_level(plan, stage, signal) for signal in plan.signals
		if signal.field is None and signal.stage == stage.name} for stage in machine.stages.values()}
	used = set(machine.read_rows("line"))
	kinds = {kind_codes(plan)[name] for name in used_types(plan)}
	for row in range(1 << two.line.bits + two.kind_bits):
		if row not in used:
			spare_kind = row >> two.line.bits not in kinds
			step = spare_kind or (not two.line.direct and step_pin(plan, 0))
			check_spare_row(machine, two.line, row, {**levels["line"], "step": int(step)})
	for row in range(len(plan.lines), 1 << two.frame.bits):
		check_spare_row(machine, two.frame, row, levels["frame"])
		if machine.kind_of[row] != kind_codes(plan)[plan.lines[0][0].name]:
			raise Fault(f"frame stage: spare row {row:#x} has kind {machine.kind_of[row]}, not the first line's")
