"""Decides whether the line stage of a line-frame plan can have states for all cells of all its lines: True, False, or None
where that would take too long. The plan must have passed check_agreements.

Lines of different types do not compete, for the kind tells their rows apart; but all of them begin in the same state.
"""

from oracle_line_frame import numbered_from_0, used_types
from oracle_states import MATCHING_EDGES, Codes, counted_line, matches, states_under


def line_cells(plan, codes):
	"""For each type of the frame the (hold, levels of the field signals) of its cells."""
	pins = [plan.pins[name] for name in codes.names()]
	lines = []
	for number in used_types(plan).values():
		line, _, first = plan.lines[number]
		lines.append([(plan.held[cell], tuple(bool(pin[cell]) for pin in pins)) for cell in range(first, first + line.cells)])
	return lines


def allowed_states(plan, codes, choice, under, cell):
	(mask, value), levels = cell
	if (mask, value) not in under:
		under[mask, value] = states_under(plan.machine.bits, mask, value)
	return frozenset(state for state in under[mask, value] if codes.levels(state, choice) == levels)


def merged(sets):
	"""[(count, states)] with equal sets counted together."""
	counts = {}
	for states in sets:
		counts[states] = counts.get(states, 0) + 1
	return [(count, states) for states, count in counts.items()]


def distinct(states, demands):
	"""Of `states` one of each kind: those that are in the same demands serve alike."""
	kinds = {}
	for state in states:
		kinds.setdefault(tuple(state in allowed for line in demands for _, allowed in line), state)
	return kinds.values()


def states_with(plan, codes, choice, under):
	sets = {}
	lines = []
	for line in line_cells(plan, codes):
		for cell in set(line) - set(sets):
			sets[cell] = allowed_states(plan, codes, choice, under, cell)
		lines.append([sets[cell] for cell in line])
	demands = [merged(line[1:]) for line in lines]
	firsts = frozenset.intersection(*(line[0] for line in lines))
	return any(all(matches([(count, sorted(states - {first})) for count, states in line]) for line in demands)
		for first in distinct(firsts, demands))


def table_lines(plan, codes, choices):
	under = {}
	budget = MATCHING_EDGES
	cost = sum(1 << plan.machine.bits - bin(mask).count("1") for line in line_cells(plan, codes) for (mask, _), _ in set(line))
	for choice in choices:
		budget -= cost
		if budget < 0:
			return None
		if states_with(plan, codes, choice, under):
			return True
	return False


def feasible_lines(plan):
	codes = Codes(plan)
	if numbered_from_0(plan):
		return plan.machine.start in (None, 0) and counted_line(plan, codes)
	if table_lines(plan, codes.without_automatic(), [()]) is False:
		return False
	choices, complete = codes.choices(plan)
	found = table_lines(plan, codes, choices)
	return None if found is False and not complete else found
