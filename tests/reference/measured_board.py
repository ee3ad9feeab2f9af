"""Runs the images of a plan on the board that the plan wires, from whatever the power leaves in the latches, and keeps what the
pins do.

Of the plan it takes names, wiring and clock; lines and frame it does not read. Short forms of chips only, no clear that is
asynchronous, no stretched cells, and data signals only: what the plans need that are measured here.
"""

import os
from fractions import Fraction

import yaml

from oracle_chips import PARTS
from oracle_plan import Clock, count_of

# Cells that pass before pins are kept: more than a frame of any plan measured.
SETTLING_CELLS = 110_000
KEPT_CELLS = 330_000


class Stage:
	"""Rows of one stage by address, state bits lowest: next (or None), clear, step, kind, and the pins of its signals."""

	def __init__(self, tree, part, before_signals, signals):
		self.bits = count_of(tree["state"])
		self.counted = tree.get("advance", "table") == "count"
		self.direct = tree.get("outputs", "registered") == "direct"
		if self.counted and tree.get("clear", "sync") != "sync":
			raise NotImplementedError("clear: async")
		control = [] if self.counted else [f"next.{bit}" for bit in range(self.bits)]
		control += before_signals + (["clear"] if self.counted else [])
		self.word = control + signals
		self.kind_bits = sum(bit.startswith("kind.") for bit in self.word)
		self.part = part
		self.chips = -(-len(self.word) // PARTS[part][1])
		self.signals = signals

	def take(self, images, address_bits, jumpers):
		"""Straight wiring: bit n of the word is data pin n, counted on from chip to chip, low byte first."""
		width = PARTS[self.part][1] // 8
		lanes = [image[lane::width] for image in images for lane in range(width)]
		words = [sum(lane[address] << 8 * number for number, lane in enumerate(lanes))
			for address in range(jumpers, jumpers + (1 << address_bits))]
		self.next = self.column(words, "next.")
		self.kind = self.column(words, "kind.")
		self.clear = self.column(words, "clear")
		self.step = self.column(words, "step")
		first = self.word.index(self.signals[0]) if self.signals else 0
		self.pins = [word >> first & (1 << len(self.signals)) - 1 for word in words]

	def column(self, words, name):
		places = [place for place, bit in enumerate(self.word) if bit.startswith(name)]
		if not places:
			return None
		mask = (1 << len(places)) - 1
		return [word >> places[0] & mask for word in words]

	def after(self, address, state):
		if not self.counted:
			return self.next[address]
		return 0 if self.clear[address] else (state + 1) & (1 << self.bits) - 1


class Trace:
	"""Levels of every pin, cell by cell, and their runs in ticks."""

	def __init__(self, clock, levels):
		self.clock = clock
		self.levels = levels

	def runs(self, name):
		"""(first tick, ticks, level) of each stretch of one level, but for the first and the last, which are cut off."""
		levels = self.levels[name]
		edges = [cell for cell in range(1, len(levels)) if levels[cell] != levels[cell - 1]]
		return [(first * self.clock.cell, (end - first) * self.clock.cell, levels[first])
			for first, end in zip(edges, edges[1:])]

	def rarer_level(self, name):
		"""The level that a pin has for less than half of the time: that of a pulse."""
		return int(2 * sum(self.levels[name]) < len(self.levels[name]))

	def microseconds(self, ticks):
		return Fraction(ticks) / self.clock.master * 10**6


def read_tree(path):
	with open(path, encoding="utf-8") as file:
		return yaml.load(file, Loader=yaml.BaseLoader)


def images_of(folder, name, labels):
	for label in labels:
		with open(os.path.join(folder, f"{name}.{label}.bin"), "rb") as file:
			yield file.read()


def stages_of(tree):
	"""(line stage, frame stage or None) of a line-frame machine, or of a loop, whose only stage is taken as the line's."""
	machine, chips, signals = tree["machine"], tree["chips"], tree["signals"]
	if any(signal.get("from", "data") != "data" for signal in signals.values()):
		raise NotImplementedError("decoded signals")
	of_frame = [name for name, signal in signals.items() if signal.get("stage") == "frame"]
	of_line = [name for name in signals if name not in of_frame]
	if machine["form"] == "loop":
		return Stage(machine, chips["part"], [], of_line), None
	kinds = max((len(tree["lines"]) - 1).bit_length(), count_of(machine.get("kind", "0")))
	return (Stage(machine["line"], chips["line"]["part"], ["step"], of_line),
		Stage(machine["frame"], chips["frame"]["part"], [f"kind.{bit}" for bit in range(kinds)], of_frame))


class Board:
	"""`name` is what the image files begin with: the plan's name if left out, or that of the set whose bank it is in."""

	def __init__(self, path, folder, name=None, bank=0):
		tree = read_tree(path)
		self.clock = Clock(tree["clock"])
		self.line, self.frame = stages_of(tree)
		address_bits = self.line.bits
		labels = [f"rom{number}" for number in range(self.line.chips + (self.frame.chips if self.frame else 0))]
		images = list(images_of(folder, name or tree["name"], labels))
		if self.frame:
			address_bits += self.frame.kind_bits
			self.frame.take(images[self.line.chips:], self.frame.bits, bank << self.frame.bits)
		self.line.take(images[:self.line.chips], address_bits, bank << address_bits)

	def cells(self):
		"""For ever (pins of the line stage, pins of the frame stage), a cell each. All latches wake up full of ones."""
		line, frame = self.line, self.frame
		h = (1 << line.bits) - 1
		v, kind, step, line_pins, frame_pins = 0, 0, 1, 0, 0
		if frame:
			v = (1 << frame.bits) - 1
			kind = (1 << frame.kind_bits) - 1
		while True:
			if frame and frame.direct:
				kind, frame_pins = frame.kind[v], frame.pins[v]
			address = kind << line.bits | h
			if line.direct:
				line_pins, step = line.pins[address], line.step[address] if frame else 0
			yield line_pins, frame_pins
			stepped = step
			h = line.after(address, h)
			if not line.direct:
				line_pins, step = line.pins[address], line.step[address] if frame else 0
			if frame and stepped:
				if not frame.direct:
					kind, frame_pins = frame.kind[v], frame.pins[v]
				v = frame.after(v, v)

	def trace(self):
		source = self.cells()
		for _ in range(SETTLING_CELLS):
			next(source)
		kept = [next(source) for _ in range(KEPT_CELLS)]
		levels = {}
		for place, stage in enumerate((self.line, self.frame)):
			for bit, name in enumerate(stage.signals if stage else ()):
				levels[name] = bytes(pins[place] >> bit & 1 for pins in kept)
		return Trace(self.clock, levels)


class Findings:
	"""What was measured, line by line on standard output; what is wrong begins with FAILED."""

	def __init__(self):
		self.failed = 0

	def note(self, holds, text):
		self.failed += not holds
		print(text if holds else f"FAILED: {text}")

	def each(self, what, found, wanted):
		"""All of `found` are the wanted number, and there are some."""
		wrong = sorted(set(found) - {wanted})
		self.note(found and not wrong, f"{what}: {', '.join(map(str, wrong)) or len(found) and wanted or 'none'}"
			+ (f", wanted {wanted}" if wrong or not found else f" ({len(found)} times)"))

	def within(self, what, found, low, high, unit=" us"):
		"""All of `found` are within the limits, and there are some."""
		wrong = [value for value in found if not low <= value <= high]
		shown = " to ".join(f"{float(value):.3f}" for value in sorted({min(found), max(found)})) if found else "none"
		self.note(found and not wrong, f"{what}: {shown}{unit}, limits {float(low):.3f} to {float(high):.3f} ({len(found)} times)")
