"""Reads a plan and lays out its timeline, from the pages of the plan language alone.

Everything is exact: whole ticks, whole cells, fractions.Fraction. Plans are taken to be well formed (what is a bad plan is
tested elsewhere); Refused is raised for what the pages call an error and a random plan may run into.
"""

import json
import os
import re
import subprocess
from fractions import Fraction

import yaml

UNIT_SCALES = {
	"Hz": Fraction(1), "kHz": Fraction(1000), "MHz": Fraction(10**6),
	"s": Fraction(1), "ms": Fraction(1, 10**3), "us": Fraction(1, 10**6), "ns": Fraction(1, 10**9),
	"tick": Fraction(1), "dot": Fraction(1), "cell": Fraction(1), "line": Fraction(1), "bit": Fraction(1),
	"ppm": Fraction(1, 10**6),
}
TIME_UNITS = ("s", "ms", "us", "ns")
FREQUENCY_UNITS = ("Hz", "kHz", "MHz")


class Refused(Exception):
	"""The plan is one that the program must refuse; the text says why."""


def fraction_of(text):
	"""NUMBER[/NUMBER], decimals read exactly."""
	parts = [Fraction(part.strip()) for part in text.split("/")]
	return parts[0] if len(parts) == 1 else parts[0] / parts[1]


def quantity_of(text):
	"""(value in its base unit, unit without plural)."""
	number, unit = re.fullmatch(r"\s*([0-9./ ]*[0-9])\s*([A-Za-z]+)\s*", text).groups()
	if unit not in UNIT_SCALES:
		unit = unit[:-1]
	return fraction_of(number) * UNIT_SCALES[unit], unit


def integer_of(text):
	return int(text, 16) if text.lower().startswith("0x") else int(text)


def count_of(text):
	"""An integer with or without a unit, such as `16 bits`, `-1 cell`, `3`."""
	return integer_of(text.split()[0])


def bits_of(text):
	"""A bit range as (lowest bit, width)."""
	high, _, low = text.partition("..")
	low = int(low or high)
	return low, int(high) - low + 1


class Expression:
	"""Integers, + - * / % and parentheses over line, cell, col and row; / and % round down."""

	TOKEN = re.compile(r"\s*(?:(0[xX][0-9a-fA-F]+|[0-9]+)|(line|cell|col|row)\b|([-+*/%()]))")

	def __init__(self, text):
		self.text = text
		pieces = []
		self.variables = set()
		position = 0
		text = text.rstrip()
		while position < len(text):
			token = self.TOKEN.match(text, position)
			number, variable, operator = token.groups()
			pieces.append(str(integer_of(number)) if number else variable or {"/": "//"}.get(operator, operator))
			self.variables |= {variable} - {None}
			position = token.end()
		self.code = compile(" ".join(pieces), text, "eval")

	def value(self, line, cell, col, row):
		try:
			return eval(self.code, {"__builtins__": {}}, {"line": line, "cell": cell, "col": col, "row": row})
		except ZeroDivisionError:
			raise Refused(f"line {line} cell {cell}: {self.text}: division by zero") from None


class Clock:
	"""Master in Hz; dot, cell and stretch in ticks; subcarrier in Hz or None; phase as (count, 'line' | 'frame') or None."""

	def __init__(self, tree):
		self.master, _ = quantity_of(tree["master"])
		self.dot = self.ticks(tree["dot"]) if "dot" in tree else 1
		self.cell = self.ticks(tree["cell"])
		self.stretch = self.ticks(tree["stretch"]) if "stretch" in tree else 0
		self.subcarrier = self.frequency(tree["subcarrier"]) if "subcarrier" in tree else None
		self.phase = self.phase_of(tree.get("phase", "free"))

	def ticks(self, text):
		value, unit = quantity_of(text)
		ticks = value * (self.dot if unit == "dot" else 1)
		if ticks.denominator != 1:
			raise Refused(f"{text} is not a whole number of ticks")
		return int(ticks)

	def frequency(self, text):
		divided = re.fullmatch(r"\s*master\s*/\s*([0-9.]+)\s*", text)
		return self.master / Fraction(divided.group(1)) if divided else quantity_of(text)[0]

	@staticmethod
	def phase_of(text):
		words = text.split()
		if words == ["free"]:
			return None
		count = int(words[1]) if len(words) == 3 else 1
		return count, words[-1].rstrip("s")

	def cells_in(self, time_text):
		"""A time as an exact number of normal cells."""
		value, unit = quantity_of(time_text)
		if unit in TIME_UNITS:
			return value * self.master / self.cell
		return value * {"tick": 1, "dot": self.dot, "cell": self.cell}[unit] / self.cell

	def cycles(self, ticks):
		return ticks * self.subcarrier / self.master


class Signal:
	def __init__(self, name, tree):
		self.name = name
		self.role = tree.get("role", "plain")
		self.active_low = tree.get("active", "high") == "low"
		self.lead = count_of(tree.get("lead", "0"))
		self.stage = tree.get("stage", "line")
		source = tree.get("from", "data")
		self.field = None if source == "data" else source["field"]
		self.codes = None
		if self.field and source["codes"] != "auto":
			self.codes = frozenset(integer_of(code) for code in source["codes"])


class Region:
	"""A run of cells: what it asks for (exactly one length), and after layout its first cell and its width in cells."""

	def __init__(self, tree):
		self.name = tree["region"]
		self.length = next((key, tree[key]) for key in ("cells", "time", "fill") if key in tree)
		self.asserted = frozenset(tree.get("assert", ()))
		self.stretch = tree.get("stretch", "0")
		self.hold = {field: Expression(text) for field, text in (tree.get("hold") or {}).items()}
		self.first = self.width = None

	def requested(self, clock):
		kind, value = self.length
		return Fraction(count_of(value)) if kind == "cells" else clock.cells_in(value)


def rounded(position):
	"""The nearest whole number, halves up."""
	return (2 * position.numerator + position.denominator) // (2 * position.denominator)


class LineType:
	"""A line laid out: width in cells, regions with edges, the stretched cells, and whether an edge sat on a half."""

	def __init__(self, name, cells, regions, clock):
		self.name = name
		self.regions = [Region(region) for region in regions]
		self.halves_after_fill = False
		self.cells = cells
		self.lay_out(clock)
		self.stretched = self.fixed_stretch()

	def lay_out(self, clock):
		fill = next((index for index, region in enumerate(self.regions) if region.length[0] == "fill"), None)
		edges = [0]
		before = self.regions if fill is None else self.regions[:fill]
		total = Fraction(0)
		for region in before:
			total += region.requested(clock)
			edges.append(rounded(total))
		if fill is None:
			self.close(edges[-1])
		else:
			edges += self.edges_after(fill, clock)
		for region, first, end in zip(self.regions, edges, edges[1:]):
			region.first, region.width = first, end - first
			if region.width <= 0:
				raise Refused(f"line {self.name}: region {region.name} has no cells")

	def close(self, width):
		if self.cells is not None and self.cells != width:
			raise Refused(f"line {self.name}: regions make {width} cells, not {self.cells}")
		self.cells = width

	def edges_after(self, fill, clock):
		edges = [self.cells]
		total = Fraction(0)
		for region in reversed(self.regions[fill + 1:]):
			total += region.requested(clock)
			self.halves_after_fill |= (2 * total).denominator == 1 and total.denominator == 2
			edges.append(rounded(self.cells - total))
		return reversed(edges)

	def fixed_stretch(self):
		stretched = set()
		for region in self.regions:
			if region.stretch == "auto":
				continue
			count = count_of(region.stretch)
			if count > region.width:
				raise Refused(f"line {self.name}: region {region.name} has fewer than {count} cells to stretch")
			stretched.update(range(region.first, region.first + count))
		return stretched

	def automatic_cells(self):
		return [cell for region in self.regions if region.stretch == "auto"
			for cell in range(region.first, region.first + region.width)]

	def stretch_automatically(self, clock, chosen):
		"""Adds the fewest stretched cells that meet the phase: `chosen` of the marked regions, or the leftmost if that is None."""
		candidates = self.automatic_cells()
		if not candidates:
			return
		if clock.subcarrier is None or clock.phase is None or clock.phase[1] != "line":
			raise Refused("stretch: auto needs a subcarrier and a phase in lines")
		for count in range(len(candidates) + 1):
			if (clock.phase[0] * clock.cycles(self.ticks(clock) + count * clock.stretch)).denominator == 1:
				self.stretched.update(candidates[:count] if chosen is None else self.placed(candidates, chosen, count))
				return
		raise Refused(f"line {self.name}: no number of stretched cells meets the phase")

	def placed(self, candidates, chosen, count):
		"""The cells of runs (first cell, count of marked cells from there on), which are marked, and so many in all."""
		cells = [cell for first, length in chosen for cell in candidates[candidates.index(first):][:length]]
		if len(set(cells)) != count or len(cells) != count:
			raise ValueError(f"line {self.name}: stretch: auto placed {chosen}, wanted {count} marked cells")
		return cells

	def ticks(self, clock):
		return self.cells * clock.cell + len(self.stretched) * clock.stretch

	def region_at(self, cell):
		return next(region for region in self.regions if region.first <= cell < region.first + region.width)


def changed_regions(regions, changes):
	regions = [dict(region) for region in regions]
	for change in changes:
		region = next(region for region in regions if region["region"] == change["region"])
		if any(key in change for key in ("cells", "time", "fill")):
			for key in ("cells", "time", "fill"):
				region.pop(key, None)
		region.update(change)
	return regions


def line_tree(trees, name):
	"""(cells or None, list of region mappings) of a line type, its `like` chain followed."""
	tree = trees[name]
	if "like" not in tree:
		cells, regions = None, tree["regions"]
	else:
		cells, regions = line_tree(trees, tree["like"])
		regions = changed_regions(regions, tree.get("change") or ())
	return (count_of(tree["cells"]) if "cells" in tree else cells), regions


def fields_of(tree, state_bits):
	"""Lowest bit and width of each field."""
	fields = {name: bits_of(bits) for name, bits in (tree.get("fields") or {}).items()}
	if any(low + width > state_bits for low, width in fields.values()):
		raise Refused(f"a field reaches past the {state_bits} bits of the state")
	return fields


class Stage:
	"""A table (or counter) with its latch."""

	def __init__(self, name, tree):
		self.name = name
		self.bits = count_of(tree["state"])
		self.direct = tree.get("outputs", "registered") == "direct"
		self.counted = tree.get("advance", "table") == "count"
		self.clear_async = self.counted and tree.get("clear", "sync") == "async"

	def room(self):
		"""How many cells (or lines) can have a state of their own: a counter cleared at once needs the state past the last."""
		return (1 << self.bits) - self.clear_async


class LoopMachine(Stage):
	form = "loop"
	fixed_variables = ()

	def __init__(self, tree, _):
		super().__init__("loop", tree)
		self.fields = fields_of(tree, self.bits)
		self.start = integer_of(tree["start"]) if "start" in tree else None


class LineFrameMachine:
	"""Fields and start are those of the line stage's state."""

	form = "line-frame"
	fixed_variables = ("line", "row")

	def __init__(self, tree, line_types):
		self.line = Stage("line", tree["line"])
		self.frame = Stage("frame", tree["frame"])
		self.kind_bits = (line_types - 1).bit_length()
		if "kind" in tree:
			if count_of(tree["kind"]) < self.kind_bits:
				raise Refused(f"{line_types} line types need {self.kind_bits} bits of kind")
			self.kind_bits = count_of(tree["kind"])
		self.bits = self.line.bits
		self.fields = fields_of(tree, self.bits)
		self.start = integer_of(tree["start"]) if "start" in tree else None
		self.counted = self.line.counted


class Plan:
	"""The whole plan with its timeline: cell by cell what is asserted, what is held, and each signal's planned pin.

	`placed`: where limits of a standard decided where `stretch: auto` stretches, runs of cells by line type; else None.
	"""

	def __init__(self, text, placed=None):
		tree = yaml.load(text, Loader=yaml.BaseLoader)
		self.tree = tree
		self.placed = placed
		self.name = tree["name"]
		self.clock = Clock(tree["clock"])
		self.signals = [Signal(name, signal or {}) for name, signal in tree["signals"].items()]
		self.stretch_signal = next((signal for signal in self.signals if signal.role == "stretch"), None)
		self.machine = self.machine_of(tree["machine"])
		self.sweeps = [(sweep["bits"], quantity_of(sweep["within"])[0]) for sweep in tree.get("sweep") or ()]
		self.line_types = {name: self.line_type(name) for name in tree["lines"]}
		self.lay_out_frame()
		self.hold_states()

	def machine_of(self, tree):
		form = LineFrameMachine if tree["form"] == "line-frame" else LoopMachine
		return form(tree, len(self.tree["lines"]))

	def line_type(self, name):
		line = LineType(name, *line_tree(self.tree["lines"], name), self.clock)
		if self.stretch_signal:
			line.stretched.update(cell for region in line.regions if self.stretch_signal.name in region.asserted
				for cell in range(region.first, region.first + region.width))
		line.stretch_automatically(self.clock, None if self.placed is None else self.placed.get(name, []))
		if line.stretched and not self.stretch_signal:
			raise Refused(f"line {name}: stretched without a stretch signal")
		return line

	def lay_out_frame(self):
		"""lines: (line type, row in its block, first cell); places: (line number, line type, cell, region)."""
		self.lines = []
		self.places = []
		for block in self.tree["frame"]:
			line_type = self.line_types[block["line"]]
			for row in range(count_of(block.get("repeat", "1"))):
				number = len(self.lines)
				self.lines.append((line_type, row, len(self.places)))
				self.places += [(number, line_type, region.first + col, region)
					for region in line_type.regions for col in range(region.width)]
		self.asserted = {signal.name: self.planned(signal) for signal in self.signals}
		self.pins = {signal.name: shifted(self.asserted[signal.name], signal.lead) for signal in self.signals}
		self.cell_ticks = [self.clock.cell + self.clock.stretch * (cell in line.stretched)
			for _, line, cell, _ in self.places]

	def planned(self, signal):
		if signal is self.stretch_signal:
			return bytes(cell in line.stretched for _, line, cell, _ in self.places)
		return bytes(signal.name in region.asserted for _, _, _, region in self.places)

	def hold_states(self):
		"""held: for each cell of the frame (mask, value) of the state bits that holds and start fix."""
		self.held = []
		for number, line, cell, region in self.places:
			mask = value = 0
			for field, expression in region.hold.items():
				if expression.variables & set(self.machine.fixed_variables):
					raise Refused(f"{expression.text}: a line's states can not depend on its number")
				held = expression.value(number, cell, cell - region.first, self.lines[number][1])
				mask, value = self.fixed(mask, value, self.machine.fields[field], held, (number, cell, field))
			self.held.append((mask, value))
		if self.machine.start is not None:
			for number, cell in self.start_cells():
				self.held[cell] = self.fixed(*self.held[cell], (0, self.machine.bits), self.machine.start, (number, 0, "start"))

	def start_cells(self):
		"""(line, cell of the frame) of the cells whose state `start` is: the frame's first, or every line's."""
		if self.machine.form == "loop":
			return [(0, 0)]
		return [(number, first) for number, (_, _, first) in enumerate(self.lines)]

	@staticmethod
	def fixed(mask, value, bits, number, where):
		low, width = bits
		if not 0 <= number < 1 << width:
			raise Refused(f"line {where[0]} cell {where[1]}: {number} does not fit {where[2]}")
		new_mask = ((1 << width) - 1) << low
		if (value ^ (number << low)) & mask & new_mask:
			raise Refused(f"line {where[0]} cell {where[1]}: {where[2]} contradicts another hold")
		return mask | new_mask, value | (number << low)

	@property
	def cells(self):
		return len(self.places)

	@property
	def ticks(self):
		return sum(self.cell_ticks)

	def place(self, cell):
		number, line, column, region = self.places[cell % self.cells]
		return f"line {number} ({line.name}) cell {column} region {region.name}"

	def state_bits(self, text):
		"""Bits of the state as (lowest bit, width): FIELD, FIELD.hi..lo or state.hi..lo."""
		name, _, part = text.partition(".")
		low, width = (0, self.machine.bits) if name == "state" else self.machine.fields[name]
		if part:
			inner, width = bits_of(part)
			low += inner
		return low, width


def shifted(levels, lead):
	"""What the pin must show so that hardware that delays by `lead` cells comes out right."""
	lead %= len(levels)
	return levels[lead:] + levels[:lead]


def asks_for_limits(tree):
	"""Whether the limits of a standard may decide where `stretch: auto` stretches."""
	regions = (region for line in tree["lines"].values() for region in line.get("regions") or line.get("change") or ())
	return "standard" in tree and any(region.get("stretch") == "auto" for region in regions)


def placed_by_program(path):
	"""Runs of stretched cells by line type, as `check --json` tells them; None if it tells of none."""
	check = subprocess.run([os.environ["SCANLATCH"], "check", "--json", path], capture_output=True, check=False)
	best = (json.loads(check.stdout or "{}").get("stretch_auto") or {}).get("best")
	if best is None:
		return None
	placed = {}
	for run in best["stretched"]:
		placed.setdefault(run["line"], []).append((run["first_cell"], run["cells"]))
	return placed


def plan_of_file(path):
	"""The plan in a file. Where limits place stretched cells, the program says where; that they are as few as can be and in
	marked regions is seen to here, and that no other place is better in tests/layout."""
	with open(path, encoding="utf-8") as file:
		text = file.read()
	return Plan(text, placed_by_program(path) if asks_for_limits(yaml.load(text, Loader=yaml.BaseLoader)) else None)
