"""Plans and their timelines, both made from the same lines of cells.

A line is a tuple of cells, a cell the frozenset of the names of its signals; a cell with `stretch` is stretched. A frame is a list
of lines. Lines that are equal become one line type of the plan, and runs of equal signals its regions.
"""

import functools
from fractions import Fraction

ROLES = {"sync": "composite sync", "hsync": "horizontal sync", "vsync": "vertical sync", "blank": "blanking",
	"burst": "burst gate", "stretch": "stretch", "load": "plain"}
MASTERS = {"Hz": 1, "kHz": 1000, "MHz": 10**6}


@functools.cache
def cell(*names):
	return frozenset(names)


def painted(line, name, first, end, on=True):
	"""The line with a signal asserted, or not, in the cells from `first` up to `end`."""
	change = frozenset.union if on else frozenset.difference
	return line[:first] + tuple(change(signals, [name]) for signals in line[first:end]) + line[end:]


def runs_of(line):
	"""(signals, cells) of each run of equal cells."""
	first = 0
	for end in range(1, len(line) + 1):
		if end == len(line) or line[end] != line[first]:
			yield line[first], end - first
			first = end


def bits_for(states):
	return max(1, (states - 1).bit_length())


class Timeline:
	"""For each signal its asserted runs, (start, end) in ticks: 0 <= start < ticks; the frame goes round, so that a run may end
	beyond it. A signal that is asserted for ever has one run of the whole frame."""

	def __init__(self, board):
		self.ticks = 0
		self.starts = []  # of each line
		open_at = {}
		self.runs = {name: [] for name in board.signals}
		lengths = {}
		for line in board.frame:
			self.starts.append(self.ticks)
			if id(line) not in lengths:
				lengths[id(line)] = [(signals, board.ticks_of(signals) * cells) for signals, cells in runs_of(line)]
			for signals, ticks in lengths[id(line)]:
				self.change(open_at, signals)
				self.ticks += ticks
		self.change(open_at, frozenset())
		self.go_round()

	def change(self, open_at, signals):
		for name in [name for name in open_at if name not in signals]:
			self.runs[name].append((open_at.pop(name), self.ticks))
		for name in signals:
			open_at.setdefault(name, self.ticks)

	def go_round(self):
		for runs in self.runs.values():
			if len(runs) > 1 and runs[0][0] == 0 and runs[-1][1] == self.ticks:
				(_, end), (start, _) = runs.pop(0), runs.pop()
				runs.append((start, end + self.ticks))


class Board:
	def __init__(self, name, master, signals, frame, **more):
		"""master and subcarrier as plans have them ("315/22 MHz", "master / 4"); signals: name to (active, lead)."""
		self.name, self.master_text, self.signals, self.frame = name, master, signals, frame
		self.cell = more.get("cell", 1)
		self.stretch = more.get("stretch", 0)
		self.dot = more.get("dot", 1)
		self.subcarrier_text = more.get("subcarrier")
		self.accuracy = more.get("accuracy")
		self.form = more.get("form", "loop")
		self.outputs = more.get("outputs", "registered")  # of a loop
		self.of_frame = more.get("of_frame", ())  # signals of the frame stage
		self.standard = more.get("standard")
		self.grade = more.get("grade")
		number, unit = master.split()
		self.master = Fraction(number) * MASTERS[unit]
		self.subcarrier = self.read_subcarrier()

	def read_subcarrier(self):
		if self.subcarrier_text is None:
			return None
		if self.subcarrier_text.startswith("master / "):
			return self.master / int(self.subcarrier_text.split()[2])
		number, unit = self.subcarrier_text.split()
		return Fraction(number) * MASTERS[unit]

	def ticks_of(self, signals):
		return self.cell + (self.stretch if "stretch" in signals else 0)

	def timeline(self):
		return Timeline(self)

	def tick_of_cell(self):
		"""The tick at which each cell of the frame begins."""
		ticks, passed = [], 0
		for line in self.frame:
			for signals in line:
				ticks.append(passed)
				passed += self.ticks_of(signals)
		return ticks

	def types(self):
		"""Each line type once, in order, and for each line of the frame its type's number."""
		numbers, places, by_id = {}, [], {}
		for line in self.frame:
			if id(line) not in by_id:
				by_id[id(line)] = numbers.setdefault(line, len(numbers))
			places.append(by_id[id(line)])
		return list(numbers), places

	def yaml(self, with_standard=True):
		types, places = self.types()
		lines = ["scanlatch: 1", f"name: {self.name}"]
		if with_standard and self.standard:
			lines += [f"standard: {self.standard}"] + ([f"grade: {self.grade}"] if self.grade else [])
		lines += ["clock:", f"  master: {self.master_text}", f"  dot: {self.dot} ticks", f"  cell: {self.cell} ticks"]
		lines += [f"  stretch: {self.stretch} ticks"] if self.stretch else []
		lines += [f"  subcarrier: {self.subcarrier_text}"] if self.subcarrier_text else []
		lines += [f"  accuracy: {self.accuracy}"] if self.accuracy else []
		lines += ["signals:"]
		for name, (active, lead) in self.signals.items():
			stage = ", stage: frame" if name in self.of_frame else ""
			lines.append(f"  {name}: {{ role: {ROLES[name]}, active: {active}, lead: {lead} cells{stage} }}")
		lines += ["lines:"]
		for number, line in enumerate(types):
			lines += [f"  type {number}:", "    regions:"] + list(self.regions(line))
		lines += ["frame:"] + [f"  - {{ repeat: {repeat}, line: type {number} }}" for number, repeat in runs_of(tuple(places))]
		return "\n".join(lines + self.machine(types)) + "\n"

	@staticmethod
	def regions(line):
		parts = []
		for signals, cells in runs_of(line):
			others = signals - {"stretch"}
			if parts and "stretch" not in signals and parts[-1][0] == others and parts[-1][1] == parts[-1][2]:
				parts[-1][1] += cells
			else:
				parts.append([others, cells, cells if "stretch" in signals else 0])
		for number, (signals, cells, stretched) in enumerate(parts):
			stretch = f", stretch: {stretched}" if stretched else ""
			yield f"      - {{ region: part {number}, cells: {cells}, assert: [{', '.join(sorted(signals))}]{stretch} }}"

	def machine(self, types):
		"""Chips are as small as they can be."""
		def part(name, bits):
			return f"  {name}: {{ address pins: {bits}, data pins: 16, access: [10 ns] }}"

		cells, lines, kinds = sum(map(len, self.frame)), len(self.frame), len(types)
		if self.form == "loop":
			bits = bits_for(cells)
			return ["machine:", "  form: loop", f"  state: {bits} bits", f"  outputs: {self.outputs}",
				"chips: { part: LOOP }", "parts:", part("LOOP", bits)]
		line, frame = bits_for(max(map(len, types))), bits_for(lines)
		return ["machine:", "  form: line-frame", f"  line: {{ state: {line} bits }}", f"  frame: {{ state: {frame} bits }}",
			"chips: { line: { part: LINE }, frame: { part: FRAME } }", "parts:",
			part("LINE", line + (kinds - 1).bit_length()), part("FRAME", frame)]
