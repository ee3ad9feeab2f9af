"""Decides whether states can be found for all cells of a plan: True, False, or None where that would take too long."""

import copy
import itertools
import math
import random
from collections import Counter, deque

# Pairs of hold and state that are looked at, over all choices of codes, before the oracle gives up.
MATCHING_EDGES = 1_000_000
CODE_TRIALS = 7000


def divisors(number):
	return [candidate for candidate in range(1, number + 1) if number % candidate == 0]


def pin_period(plan):
	"""The shortest period of the planned pins: cells that far apart, and no others, can have equal rows for ever."""
	cells = list(zip(*plan.pins.values()))
	return next(period for period in divisors(plan.cells) if cells[period:] == cells[:plan.cells - period])


def merged_holds(plan, period):
	"""What holds fix for each cell of a lap of `period` cells, or None when two of its cells contradict each other."""
	holds = [(0, 0)] * period
	for cell, (mask, value) in enumerate(plan.held):
		other_mask, other_value = holds[cell % period]
		if (value ^ other_value) & mask & other_mask:
			return None
		holds[cell % period] = mask | other_mask, value | other_value
	return holds


class Codes:
	"""The field signals of a plan: which level a state gives each of them, for codes listed and codes chosen."""

	def __init__(self, plan):
		self.listed = []
		automatic = {}
		for signal in plan.signals:
			if signal.field is None:
				continue
			low, width = plan.machine.fields[signal.field]
			if signal.codes is None:
				automatic.setdefault((low, width), []).append(signal.name)
			else:
				self.listed.append((signal.name, low, (1 << width) - 1, signal.codes))
		self.automatic = sorted(automatic.items())

	def without_automatic(self):
		"""The same with fewer constraints: where it has no solution there is none."""
		fewer = copy.copy(self)
		fewer.automatic = []
		return fewer

	def names(self):
		return [name for name, *_ in self.listed] + [name for _, names in self.automatic for name in names]

	def levels(self, state, choice):
		"""Levels in the order of names(); choice gives, for each automatic field, the levels of each code."""
		levels = [(state >> low & mask) in codes for _, low, mask, codes in self.listed]
		for ((low, width), _), vectors in zip(self.automatic, choice):
			levels += vectors[state >> low & ((1 << width) - 1)]
		return tuple(levels)

	def choices(self, plan, seed=1):
		"""(iterator over choices to try, whether it is all of them that matter)."""
		options = []
		for (low, width), names in self.automatic:
			vectors = sorted(set(zip(*(map(bool, plan.pins[name]) for name in names))))
			options.append((vectors, 1 << width, self.stands_alone(plan, low, width)))
		total = 1
		for vectors, codes, alone in options:
			total *= math.comb(len(vectors) + codes - 1, codes) if alone else len(vectors) ** codes
		if total > CODE_TRIALS:
			return self.some_choices(plan, options, random.Random(seed)), False
		each = [list(itertools.combinations_with_replacement(vectors, codes) if alone else
			itertools.product(vectors, repeat=codes)) for vectors, codes, alone in options]
		return itertools.product(*each), True

	def stands_alone(self, plan, low, width):
		"""Nothing else looks at the field's bits: then its codes are all alike."""
		mask = ((1 << width) - 1) << low
		others = [field_mask << other for _, other, field_mask, _ in self.listed]
		others += [((1 << wide) - 1) << other for (other, wide), _ in self.automatic if (other, wide) != (low, width)]
		return not any(other & mask for other in others + [held for held, _ in plan.held])

	def some_choices(self, plan, options, chance):
		"""Codes shared out as the cells need them, in varying order."""
		for _ in range(100):
			choice = []
			for (_, names), (vectors, codes, _) in zip(self.automatic, options):
				needed = Counter(zip(*(map(bool, plan.pins[name]) for name in names)))
				shared = list(vectors) + chance.choices(vectors, [needed[vector] for vector in vectors], k=codes)
				shared = shared[:codes]
				chance.shuffle(shared)
				choice.append(tuple(shared))
			yield tuple(choice)


def states_under(bits, mask, value):
	"""All states of that many bits that agree with value in the bits of mask."""
	states = [value]
	for bit in range(bits):
		if not mask >> bit & 1:
			states += [state | 1 << bit for state in states]
	return states


def matches(demands):
	"""Whether each of [(count, allowed states)] can have that many states of its own (augmenting paths over demands)."""
	demands = sorted(demands, key=lambda demand: len(demand[1]))
	owner = {}
	for index, (count, allowed) in enumerate(demands):
		if count > len(allowed):
			return False
		free = [state for state in allowed if state not in owner][:count]
		owner.update((state, index) for state in free)
		for _ in range(count - len(free)):
			if not augment(demands, owner, index):
				return False
	return True


def augment(demands, owner, first):
	came_from = {first: None}
	queue = deque([first])
	while queue:
		index = queue.popleft()
		for state in demands[index][1]:
			if state not in owner:
				owner[state] = index
				while came_from[index]:
					index, state = came_from[index]
					owner[state] = index
				return True
			if owner[state] not in came_from:
				came_from[owner[state]] = (index, state)
				queue.append(owner[state])
	return False


def lap_demands(plan, codes, period):
	holds = merged_holds(plan, period)
	pins = [plan.pins[name] for name in codes.names()]
	return Counter((hold, tuple(bool(pin[cell]) for pin in pins)) for cell, hold in enumerate(holds))


def table_lap(plan, codes, period, choices):
	demands = lap_demands(plan, codes, period)
	under = {}
	for (mask, value), _ in demands:
		under.setdefault((mask, value), states_under(plan.machine.bits, mask, value))
	edges = sum(len(states) for states in under.values())
	budget = MATCHING_EDGES
	for choice in choices:
		budget -= edges
		if budget < 0:
			return None
		sorted_states = {}
		for hold, states in under.items():
			for state in states:
				sorted_states.setdefault((hold, codes.levels(state, choice)), []).append(state)
		if matches([(count, sorted_states.get(demand, ())) for demand, count in demands.items()]):
			return True
	return False


def counted_lap(plan, codes, period):
	"""Cell i has state i, so that only agreement is to be checked."""
	holds = merged_holds(plan, period)
	return counted_agree(codes, [(cell, hold, {name: plan.pins[name][cell] for name in codes.names()})
		for cell, hold in enumerate(holds)])


def counted_line(plan, codes):
	"""Cell i of every line has state i."""
	return counted_agree(codes, [(column, plan.held[cell], {name: plan.pins[name][cell] for name in codes.names()})
		for cell, (_, _, column, _) in enumerate(plan.places)])


def counted_agree(codes, cells):
	"""Whether states that are given suit holds and codes: cells of (state, hold, level of each field signal by name)."""
	if any(state & mask != value for state, (mask, value), _ in cells):
		return False
	for name, low, mask, listed in codes.listed:
		if any(((state >> low & mask) in listed) != bool(levels[name]) for state, _, levels in cells):
			return False
	for (low, width), names in codes.automatic:
		for name in names:
			seen = {(state >> low & ((1 << width) - 1), bool(levels[name])) for state, _, levels in cells}
			if len(seen) != len({code for code, _ in seen}):
				return False
	return True


def lap_feasible(plan, codes, period):
	"""Whether cells `period` apart can share a state, all others having one of their own."""
	if period > plan.machine.room() or not merged_holds(plan, period):
		return False
	if plan.machine.counted:
		return counted_lap(plan, codes, period)
	if table_lap(plan, codes.without_automatic(), period, [()]) is False:
		return False
	choices, complete = codes.choices(plan)
	found = table_lap(plan, codes, period, choices)
	return None if found is False and not complete else found


def feasible(plan):
	"""Cells may share a state where the pins repeat and none holds what another must not."""
	codes = Codes(plan)
	shortest = pin_period(plan)
	answers = [lap_feasible(plan, codes, shortest * laps) for laps in divisors(plan.cells // shortest)]
	return True if True in answers else None if None in answers else False
