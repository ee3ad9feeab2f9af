"""The machine itself, run on the rows that the chips hold, and what must be true of it."""

from oracle_chips import Fault


class Machine:
	"""Steps states. pin(signal, cell) looks at the last run; states holds one state for each cell of the run."""

	def __init__(self, plan, rows):
		self.plan = plan
		self.rows = rows
		self.rows_of = {"loop": rows}
		self.bits = plan.machine.bits
		self.size = 1 << self.bits
		self.counted = plan.machine.counted
		self.clear_async = plan.machine.clear_async
		self.states = []

	def settled(self, state):
		"""An asserted clear that is asynchronous has its way before the cell begins."""
		return 0 if self.counted and self.clear_async and self.rows.clear[state] else state

	def after(self, state):
		if not self.counted:
			return self.rows.next[state]
		if not self.clear_async and self.rows.clear[state]:
			return 0
		return self.settled((state + 1) % self.size)

	def all_after(self):
		return [self.after(state) for state in range(self.size)]

	def run(self, start, cells):
		state = self.settled(start)
		self.states = []
		for _ in range(cells):
			self.states.append(state)
			state = self.after(state)
		return self.states

	def read_rows(self, _):
		"""The row read in each cell of the run."""
		return self.states

	def data_levels(self, signal):
		"""The pin's level in each cell of the run but, where it is latched, the first: that one is unknown (None)."""
		column = self.rows.columns[signal.name]
		levels = [column[state] for state in self.states]
		return levels if self.plan.machine.direct else [None] + levels[:-1]

	def field_levels(self, signal, codes):
		"""The pin's assertion in each cell of the run, made from the state alone."""
		low, width = self.plan.machine.fields[signal.field]
		mask = (1 << width) - 1
		return [(state >> low & mask) in codes for state in self.states]


def codes_seen(plan, machine, signal):
	"""Codes for which the signal is planned to be asserted; a Fault when a code would have to give both levels."""
	if signal.codes is not None:
		return signal.codes
	low, width = plan.machine.fields[signal.field]
	codes = ({}, {})
	for cell, planned in enumerate(plan.pins[signal.name]):
		codes[planned].setdefault(machine.states[cell] >> low & ((1 << width) - 1), cell)
	both = set(codes[0]) & set(codes[1])
	if both:
		code = min(both)
		raise Fault(f"signals: {signal.name}: code {code} of field {signal.field} is asserted at {plan.place(codes[1][code])}"
			f" and not at {plan.place(codes[0][code])}")
	return frozenset(codes[1])


def asserted_pins(plan, machine):
	"""For each signal, in each cell of the run, whether the pin is asserted (None where unknown)."""
	pins = {}
	for signal in plan.signals:
		if signal.field is None:
			pins[signal.name] = [None if level is None else level != signal.active_low for level in machine.data_levels(signal)]
		else:
			pins[signal.name] = machine.field_levels(signal, codes_seen(plan, machine, signal))
	return pins


def check_signals(plan, machine, pins):
	"""Two laps, cell by cell."""
	for signal in plan.signals:
		planned = plan.pins[signal.name]
		for cell, found in enumerate(pins[signal.name]):
			if found is not None and found != planned[cell % plan.cells]:
				raise Fault(f"signals: {signal.name} at {plan.place(cell)} (frame cell {cell}, state {machine.states[cell]:#x}):"
					f" expected {'asserted' if planned[cell % plan.cells] else 'not asserted'}")


def check_closure(plan, machine):
	if machine.states[plan.cells] != machine.states[0]:
		raise Fault(f"closure: after {plan.cells} cells the state is {machine.states[plan.cells]:#x},"
			f" not {machine.states[0]:#x}")


def check_holds(plan, machine):
	for cell, (mask, value) in enumerate(plan.held):
		if machine.states[cell] & mask != value:
			raise Fault(f"holds: {plan.place(cell)}: state {machine.states[cell]:#x}, expected {value:#x} under mask {mask:#x}")


def cell_ticks(plan, machine, pins):
	"""The length of each cell of the second lap, from the stretch pin alone: it is late by the lead."""
	cells = plan.cells
	if plan.stretch_signal is None:
		return [plan.clock.cell] * cells
	pin = pins[plan.stretch_signal.name][cells:2 * cells]
	lead = plan.stretch_signal.lead
	if pin[0] is None:
		raise Fault("signals: a pin of the second lap is unknown")
	return [plan.clock.cell + plan.clock.stretch * pin[(cell - lead) % cells] for cell in range(cells)]


def check_lengths(plan, ticks):
	"""Each cell and each line takes the planned ticks; returns the ticks of each line."""
	lengths = []
	for number, (line, _, first) in enumerate(plan.lines):
		for cell in range(first, first + line.cells):
			if ticks[cell] != plan.cell_ticks[cell]:
				raise Fault(f"closure: {plan.place(cell)} lasts {ticks[cell]} ticks, not {plan.cell_ticks[cell]}")
		lengths.append(sum(ticks[first:first + line.cells]))
		if lengths[-1] != line.ticks(plan.clock):
			raise Fault(f"closure: line {number} ({line.name}) lasts {lengths[-1]} ticks, not {line.ticks(plan.clock)}")
	return lengths


def check_colour(plan, lengths):
	"""The subcarrier is back in step as often as the plan says, from every line of the endless sequence on."""
	clock = plan.clock
	if clock.subcarrier is None or clock.phase is None:
		return
	count, unit = clock.phase
	if unit == "frame":
		if (count * clock.cycles(sum(lengths))).denominator != 1:
			raise Fault("colour: not in step after the frames that the plan demands")
		return
	total = sum(lengths[number % len(lengths)] for number in range(count))
	for number in range(len(lengths)):
		if clock.cycles(total).denominator != 1:
			raise Fault(f"colour: from line {number} on {count} lines are {clock.cycles(total)} cycles")
		total += lengths[(number + count) % len(lengths)] - lengths[number]


def check_power_up(plan, machine):
	"""Every state comes home; returns the cells of the longest way and the states that have it."""
	after = machine.all_after()
	home = set(machine.states[:plan.cells])
	distance = [0 if machine.settled(state) in home else None for state in range(machine.size)]
	for state in range(machine.size):
		trail = []
		on_trail = set()
		while distance[state] is None:
			if state in on_trail:
				raise Fault(f"power-up: a second loop through state {state:#x}")
			trail.append(state)
			on_trail.add(state)
			state = after[state]
		for steps, passed in enumerate(reversed(trail), distance[state] + 1):
			distance[passed] = steps
	longest = max(distance)
	return longest, [state for state in range(machine.size) if distance[state] == longest]


def longest_wait(plan, machine, ticks, bits):
	"""Ticks from the beginning of a cell with a value of those bits to the next such, at worst; None if one never comes."""
	low, width = plan.state_bits(bits)
	mask = (1 << width) - 1
	first = {}
	last = {}
	longest = now = 0
	for state, length in zip(machine.states[:plan.cells], ticks):
		value = state >> low & mask
		longest = max(longest, now - last.get(value, now))
		first.setdefault(value, now)
		last[value] = now
		now += length
	longest = max([longest] + [now + first[value] - last[value] for value in first])
	return longest if len(first) == mask + 1 else None


def check_sweeps(plan, machine, ticks):
	for bits, within in plan.sweeps:
		window = within * plan.clock.master
		wait = longest_wait(plan, machine, ticks, bits)
		if wait is None or wait > window:
			raise Fault(f"sweep: {bits}: " + ("a value never comes up" if wait is None else
				f"a value takes {wait} ticks to come up again, {float(window)} allowed"))


def spare_states(plan, machine):
	home = set(machine.states[:plan.cells])
	return [state for state in range(machine.size) if state not in home]


def check_spare_rows(plan, machine, spare):
	"""Spare rows lead to the first cell; latched signals have its levels, direct ones rest with blanking asserted."""
	rows = machine.rows
	start = machine.states[0]
	for state in spare:
		if machine.counted and not rows.clear[state]:
			raise Fault(f"spare row {state:#x} does not assert clear")
		if not machine.counted and rows.next[state] != start:
			raise Fault(f"spare row {state:#x} leads to {rows.next[state]:#x}, not to {start:#x}")
	for signal in plan.signals:
		if signal.field is None:
			rest = signal.role == "blanking" if plan.machine.direct else plan.pins[signal.name][0]
			level = int(bool(rest) != signal.active_low)
			wrong = [state for state in spare if rows.columns[signal.name][state] != level]
			if wrong:
				raise Fault(f"spare row {wrong[0]:#x}: {signal.name} is at level {1 - level}")


def passing_state(plan, machine, before, after):
	"""What a counter with an asynchronous clear shows between two cells; the state before where it clears nothing."""
	stage = plan.machine.line if plan.machine.form == "line-frame" else plan.machine
	counted = (before + 1) % (1 << stage.bits)
	return before if not (stage.counted and stage.clear_async) or counted == after else counted


def edges_of(plan, machine, low, width):
	"""Codes of a field before an edge, while a state passes, and after it, for each cell of the frame."""
	for cell in range(plan.cells):
		before, after = machine.states[cell:cell + 2]
		states = before, passing_state(plan, machine, before, after), after
		yield tuple(state >> low & ((1 << width) - 1) for state in states)


def path_flips(before, passing, after, codes):
	"""Both halves of the way; or a passing code with a level that neither end has."""
	if edge_flips(before, passing, codes) or edge_flips(passing, after, codes):
		return True
	return (before in codes) == (after in codes) != (passing in codes)


def glitch_edges(plan, machine, signal, codes):
	"""Cell edges at which several bits of the field change and a code in between flips the signal, or a passing state does."""
	low, width = plan.machine.fields[signal.field]
	found = 0
	known = {}
	for edge in edges_of(plan, machine, low, width):
		if edge not in known:
			known[edge] = path_flips(*edge, codes)
		found += known[edge]
	return found


def multi_bit_edges(plan, machine, fields):
	"""Cell edges at which more than one bit of a decoded field changes."""
	many = [False] * plan.cells
	for low, width in fields:
		for cell, (before, passing, after) in enumerate(edges_of(plan, machine, low, width)):
			many[cell] |= max(bin(before ^ passing).count("1"), bin(passing ^ after).count("1")) > 1
	return sum(many)


def edge_flips(before, after, codes):
	"""A way of one bit after the other from code to code on which the signal changes more than it should."""
	changed = before ^ after
	between = [before ^ flipped for flipped in range(1, changed) if flipped & changed == flipped]
	levels = {code in codes for code in between}
	if (before in codes) == (after in codes):
		return bool(levels - {before in codes})
	return unsteady(before, after, codes)


def unsteady(before, after, codes):
	"""Whether some order of the changing bits takes the signal there, back, and there again."""
	changed = before ^ after
	target = after in codes
	reached = [flipped for flipped in range(1, changed)
		if flipped & changed == flipped and ((before ^ flipped) in codes) == target]
	return any(((before ^ further) in codes) != target for flipped in reached for further in range(flipped + 1, changed)
		if further & changed == further and further & flipped == flipped)


def upset(plan, machine):
	"""For each state of the frame and each bit flipped: (cells until the frame is regained, slip in cells) as lists."""
	position = {}
	for cell, state in enumerate(machine.states[:plan.cells]):
		position.setdefault(state, cell)
	period = len(position)
	waits = []
	slips = []
	for state, cell in position.items():
		for bit in range(machine.bits):
			flipped = machine.settled(state ^ 1 << bit)
			steps = 0
			while flipped not in position:
				flipped = machine.after(flipped)
				steps += 1
			slip = (position[flipped] - cell - steps) % period
			waits.append(steps)
			slips.append(min(slip, period - slip))
	return waits, slips
