#!/usr/bin/python3
"""Writes random loop plans that obey the plan language, the same ones for the same seed.

	generate.py FOLDER FIRST_SEED COUNT

FOLDER/plan-SEED.yaml for each seed. Every key that a loop machine has comes up. A plan may happen to be infeasible (too few
states, contradicting holds, a phase out of reach): then it is one that the program must refuse.
"""

import os
import random
import sys
from fractions import Fraction

from generate_chips import chips_for
from generate_text import decimal_of, written
from generate_tight import Tight
from oracle_plan import Clock, LineType, Refused, line_tree, rounded

MASTERS = ["315/22 MHz", "17.734475 MHz", "12.096 MHz", "7560 kHz", "10 MHz", "28636363/2 Hz", "0.9 MHz", "3.579545 MHz"]
FIELD_NAMES = ["code", "at", "scan", "page", "col_2", "f0", "upper", "x"]
SIGNAL_NAMES = ["sync", "blank", "burst", "load", "vs", "hs", "mark_1", "z", "strobe", "next_row"]
ROLES = ["composite sync", "horizontal sync", "vertical sync", "blanking", "burst gate", "plain"]
REGION_NAMES = ["front porch", "sync", "breezeway", "burst", "back porch", "picture", "Rand rechts", "café 3/4", "true", "12",
	"a: b", "#5", "- dash", "[x]", "{y}", "*star", "&and", "!bang", "%", "comma, too", "null", "quay ↔ pier"]
STANDARDS = ["composite-525", "composite-625", "mono-525", "component-525", "component-625", "dmt-640x480-60"]
LIMITED_ITEMS = ["horizontal sync width", "front porch", "breezeway", "burst start", "burst length", "back porch",
	"horizontal blanking", "picture start", "picture width"]
RASTER_PARTS = [("front porch", ["blank"], 3), ("sync", ["blank", "sync"], 8), ("breezeway", ["blank"], 2),
	("burst", ["blank", "burst"], 4), ("back porch", ["blank"], 8)]
MOST_CELLS = 5000


class Generator:
	def __init__(self, chance, name):
		self.chance = chance
		self.tree = {"scanlatch": "1", "name": name}
		if self.maybe(0.3):
			self.tree["note"] = self.pick(["Ferry times", "Tide: high, low", "Ebbe & Flut – 1½ m"])

	def maybe(self, share):
		return self.chance.random() < share

	def pick(self, choices):
		return self.chance.choice(choices)

	def number(self, low, high):
		return self.chance.randint(low, high)

	def integer(self, value):
		return hex(value) if self.maybe(0.3) else str(value)

	# ---- clock

	def make_clock(self):
		clock = {"master": self.pick(MASTERS)}
		if self.maybe(0.3):
			clock["accuracy"] = self.pick(["50 ppm", "0.5 ppm", "100 ppm"])
		dot = self.number(1, 3)
		clock["dot"] = f"{dot} tick" + ("s" if dot > 1 or self.maybe(0.2) else "")
		clock["cell"] = self.length_in_dots(self.number(2, 12), dot)
		self.stretching = self.maybe(0.45)
		if self.stretching:
			clock["stretch"] = self.length_in_dots(self.number(1, 4), dot)
		self.tree["clock"] = clock
		self.clock = Clock(clock)

	def length_in_dots(self, dots, dot):
		return self.pick([f"{dots} dots", f"{dots * dot} ticks", f"{2 * dots}/2 dots"])

	def make_phase(self, line_ticks):
		"""A subcarrier under which a line of that many ticks mostly meets what is asked."""
		if not self.colour:
			return
		clock = self.tree["clock"]
		count = self.number(1, 4)
		unit = "line" if self.automatic or self.maybe(0.6) else "frame"
		clock["phase"] = f"every {unit}" if count == 1 else f"every {count} {unit}s"
		whole = line_ticks * count * (self.frame_lines if unit == "frame" else 1)
		dividers = [divider for divider in range(2, 13) if whole % divider == 0]
		if dividers and self.maybe(0.6):
			clock["subcarrier"] = f"master / {self.pick(dividers)}"
		else:
			frequency = self.clock.master * self.number(1, max(1, whole // 3)) / whole
			clock["subcarrier"] = self.pick([f"{frequency} Hz", f"{frequency / 10**6} MHz", f"{frequency / 1000} kHz"])
		if not self.automatic and self.maybe(0.15):
			clock["phase"] = "free"

	# ---- signals and fields

	def make_signals(self):
		names = self.chance.sample(SIGNAL_NAMES, self.number(1, 5))
		roles = self.chance.sample(ROLES, len(ROLES))
		signals = {}
		for name in names:
			role = roles.pop() if self.maybe(0.7) else "plain"
			signals[name] = {"role": role, "active": self.pick(["high", "low"])}
			if self.maybe(0.35):
				lead = self.pick([1, 1, 2, 3, -1, -2, -5, 17, 0])
				signals[name]["lead"] = f"{lead} cell" + ("" if abs(lead) == 1 else "s")
		if self.stretching:
			signals["wide"] = {"role": "stretch", "active": self.pick(["high", "low"])}
			if self.maybe(0.4):
				signals["wide"]["lead"] = self.pick(["1 cell", "-1 cell", "2 cells"])
		items = list(signals.items())
		self.chance.shuffle(items)
		self.tree["signals"] = dict(items)
		self.plain_signals = [name for name in signals if name != "wide"]

	# ---- lines

	def time_of(self, cells):
		"""About that many cells, written in some unit, now and then exactly on a half."""
		off = Fraction(self.number(-30, 30), 100)
		seconds = (cells + (Fraction(1, 2) if self.maybe(0.12) else off)) * self.clock.cell / self.clock.master
		unit, scale = self.pick([("us", 10**6), ("ns", 10**9), ("ms", 10**3), ("s", 1)])
		exact = seconds * scale
		return f"{exact if self.maybe(0.4) else decimal_of(exact, unit)} {unit}"

	def length(self, cells):
		return ("time", self.time_of(cells)) if self.maybe(0.35) else ("cells", str(cells))

	def some_signals(self, share=0.35):
		return [name for name in self.plain_signals if self.maybe(share)]

	def make_line(self, cells):
		"""Regions that fill a line of about that many cells."""
		count = self.number(1, min(6, cells // 2))
		cuts = sorted(self.chance.sample(range(1, cells), count - 1))
		widths = [end - begin for begin, end in zip([0] + cuts, cuts + [cells])]
		fill = self.number(0, count - 1) if self.maybe(0.6) else None
		names = self.chance.sample(REGION_NAMES, count)
		regions = []
		for index, (name, width) in enumerate(zip(names, widths)):
			key, value = ("fill", "true") if index == fill else self.length(width)
			regions.append({"region": name, key: value, "assert": self.some_signals()})
		line = {"regions": regions}
		if fill is not None:
			line = {"cells": str(cells), "regions": regions}
		elif self.maybe(0.5):
			total = sum(self.clock.cells_in(region["time"]) if "time" in region else int(region["cells"]) for region in regions)
			line = {"cells": str(rounded(total)), "regions": regions}
		return line

	def add_stretch(self, line):
		for region in line["regions"]:
			if self.automatic and self.maybe(0.4):
				region["stretch"] = "auto"
			elif self.maybe(0.3):
				region["stretch"] = self.pick(["1", "1", "2"])

	def derived(self, base, regions):
		changes = []
		for region in self.chance.sample(regions, self.number(0, len(regions))):
			change = {"region": region["region"]}
			if self.maybe(0.7):
				change["assert"] = self.some_signals()
			if self.maybe(0.3):
				change["hold"] = {}
			if self.stretching and not self.automatic and self.maybe(0.3):
				change["stretch"] = self.pick(["0", "1"])
			if "fill" not in region and self.maybe(0.25):
				key, value = self.length(self.number(1, 3))
				change[key] = value
			if len(change) > 1:
				changes.append(change)
		return {"like": base, "change": changes} if changes else {"like": base}

	def make_lines(self):
		self.colour = self.maybe(0.5)
		self.automatic = self.stretching and self.colour and self.maybe(0.5)
		cells = self.number(6, 40)
		names = self.chance.sample(["picture", "border", "vertical", "half line", "Zeile ß", "blank/2", "7"], self.number(1, 4))
		lines = {}
		regions_of = {}
		for name in names:
			if lines and self.maybe(0.55):
				base = self.pick(list(lines))
				lines[name] = self.derived(base, regions_of[base])
				regions_of[name] = regions_of[base]
			else:
				lines[name] = self.make_line(cells if self.maybe(0.8) else max(4, cells // 2))
				if self.stretching:
					self.add_stretch(lines[name])
				regions_of[name] = lines[name]["regions"]
		self.tree["lines"] = lines
		self.names = names
		self.regions_of = regions_of

	def make_frame(self):
		blocks = [(name, self.number(1, 12)) for name in self.names]
		blocks += [(self.pick(self.names), self.number(1, 5)) for _ in range(self.number(0, 3))]
		self.chance.shuffle(blocks)
		if self.maybe(0.15):
			blocks *= 2
		if self.maybe(0.08):
			blocks = [(name, 12 * repeat) for name, repeat in blocks]
		self.tree["frame"] = [{"repeat": str(repeat), "line": name} for name, repeat in blocks]
		self.frame_lines = sum(repeat for _, repeat in blocks)
		self.blocks = blocks

	def measure(self):
		"""Cells of each line type as laid out; None for a line that is an error."""
		self.widths = {}
		for name in self.names:
			self.widths[name] = LineType(name, *line_tree(self.tree["lines"], name), self.clock)
		self.cells = sum(self.widths[name].cells * repeat for name, repeat in self.blocks)
		if self.cells > MOST_CELLS:
			raise Refused("more than we have time for")

	# ---- states

	def make_machine(self):
		tight = (self.cells - 1).bit_length() or 1
		self.bits = max(1, tight + self.pick([0, 0, 1, 1, 2, -1] if self.maybe(0.6) else [1, 2]))
		machine = {"form": "loop", "state": f"{self.bits} bit" + ("" if self.bits == 1 else "s")}
		self.fields = {}
		for name in self.chance.sample(FIELD_NAMES, self.number(0, 3)):
			low = self.number(0, self.bits - 1)
			high = self.number(low, min(self.bits - 1, low + self.pick([0, 1, 2, 6])))
			self.fields[name] = (low, high - low + 1)
		if self.fields:
			machine["fields"] = {name: f"{low + width - 1}..{low}" if width > 1 or self.maybe(0.2) else str(low)
				for name, (low, width) in self.fields.items()}
		self.counted = self.maybe(0.25)
		if self.counted:
			machine["advance"] = "count"
			machine["clear"] = self.pick(["sync", "async"])
		elif self.maybe(0.3):
			machine["advance"] = "table"
		if self.maybe(0.6):
			machine["outputs"] = self.pick(["registered", "direct"])
		if self.maybe(0.5):
			machine["start"] = self.integer(0 if self.counted else self.chance.randrange(1 << self.bits))
		self.tree["machine"] = machine

	def make_field_signals(self):
		"""Turns some signals into decoded ones."""
		narrow = [name for name, (_, width) in self.fields.items() if width <= 3]
		if self.counted or not narrow or self.maybe(0.4):
			return
		for name in self.tree["signals"]:
			if not self.maybe(0.4):
				continue
			field = self.pick(narrow)
			codes = range(1 << self.fields[field][1])
			listed = sorted(self.chance.sample(codes, self.number(1, max(1, len(codes) - 1))))
			chosen = "auto" if self.maybe(0.4) else [self.integer(code) for code in listed]
			self.tree["signals"][name]["from"] = {"field": field, "codes": chosen}
			if self.maybe(0.5) and "start" in self.tree["machine"]:
				del self.tree["machine"]["start"]

	def expression(self, width, layout):
		"""Fits the field whatever the cell; never negative, never divides by zero."""
		limit = 1 << width
		inner = self.pick([
			f"{self.number(1, 40)}*row + col", f"line * {self.number(1, 9)} + cell", "col", "cell", "row / 3 * 5 + col % 4",
			f"(line + row)*(cell + {self.number(0, 9)})", f"{layout.cells} - cell", f"{hex(self.number(0, 300))}",
			f"({self.number(300, 500)} + col) / (1 + row)",
			f"row%{self.number(1, 9)} + {self.number(0, 3)}*(col/{self.number(1, 5)})",
			"((((line))))", f"2 * 3 - {self.number(0, 6)}"])
		return f"({inner}) % {limit if self.maybe(0.7) else self.integer(self.number(1, limit))}"

	def make_holds(self):
		if not self.fields or self.counted or self.maybe(0.4):
			return
		for name in self.names:
			for region in self.tree["lines"][name].get("regions", ()):
				if self.maybe(0.3):
					chosen = [field for field in self.fields if self.maybe(0.6)]
					region["hold"] = {field: self.expression(self.fields[field][1], self.widths[name]) for field in chosen}

	def make_aligned_count(self):
		"""A counted frame whose holds and decoded signals agree with the count: lines of sixteen cells, regions of four."""
		self.names = ["picture", "border"]
		self.plain_signals = ["sync", "blank"]
		self.tree["signals"] = {
			"sync": {"role": "composite sync", "active": "low",
				"from": {"field": "quarter", "codes": self.pick(["auto", ["1"]])}},
			"blank": {"role": "blanking", "active": "high", "lead": self.pick(["0 cells", "1 cell", "-2 cells"])}}
		quarters = [{"region": name, "cells": "4", "assert": ["sync"] if index == 1 else []}
			for index, name in enumerate(["front porch", "sync", "back porch", "picture"])]
		place = self.pick(["16*line + cell", "12 + 16*line + col", "line*0x10 + 12 + col"])
		quarters[3]["hold"] = {"column": "cell", "place": place}
		picture = {"cells": "16", "regions": quarters}
		border = {"like": "picture", "change": [{"region": "picture", "assert": ["blank"], "hold": {}}]}
		self.tree["lines"] = {"picture": picture, "border": border}
		self.blocks = [("picture", self.number(1, 9)), ("border", self.number(1, 9))]
		self.tree["frame"] = [{"repeat": str(repeat), "line": name} for name, repeat in self.blocks]
		self.frame_lines = sum(repeat for _, repeat in self.blocks)
		self.cells = 16 * self.frame_lines
		self.bits = self.cells.bit_length()
		self.counted = True
		self.fields = {"quarter": (2, 2), "column": (0, 4), "place": (0, self.bits)}
		self.tree["machine"] = {"form": "loop", "state": f"{self.bits} bits", "advance": "count",
			"clear": self.pick(["sync", "async"]),
			"fields": {"quarter": "3..2", "column": "3..0", "place": f"{self.bits - 1}..0"},
			"outputs": self.pick(["registered", "direct"])}

	# ---- the rest

	def make_timing(self):
		timing = {}
		holder = "counter" if self.counted else "latch"
		if self.maybe(0.2):
			counters = ["74HC161", "74AC161"] if self.tree["machine"].get("clear") == "async" else ["74HC163", "74AC163"]
			timing[holder] = self.pick(counters if self.counted else ["74HC574", "74AC574", "74HCT574"])
		if self.maybe(0.2):
			timing["decoder"] = self.pick(["74HC138", "74AC138"])
		for key in (f"{holder} delay", f"{holder} setup", "decoder delay"):
			if self.maybe(0.15):
				timing[key] = self.pick(["12 ns", "7.5 ns", "0.03 us"])
		if self.maybe(0.3):
			timing["share"] = self.pick(["1/2", "1/1", "2/3", "3/4"])
		if self.maybe(0.3):
			timing["margin"] = self.pick(["20 ns", "5 ns", "1.5 ns"])
		if timing:
			self.tree["timing"] = timing

	def make_sweep(self):
		if not self.maybe(0.25):
			return
		sweeps = []
		frame = self.cells * (self.clock.cell + self.clock.stretch) / self.clock.master
		for _ in range(self.number(1, 2)):
			low = self.number(0, self.bits - 1)
			bits = f"state.{min(self.bits - 1, low + self.number(0, 2))}..{low}"
			if self.fields and self.maybe(0.5):
				name, (_, width) = self.pick(sorted(self.fields.items()))
				bits = f"{name}.{self.number(0, width - 1)}"
			within = frame * 10**6 * self.pick([Fraction(11, 10), 2, Fraction(3, 4)])
			sweeps.append({"bits": bits, "within": f"{decimal_of(within, 'us')} us"})
		self.tree["sweep"] = sweeps

	def make_chips(self):
		bits = ["clear"] if self.counted else [f"next.{bit}" for bit in range(self.bits)]
		bits += [name for name, signal in self.tree["signals"].items() if "from" not in signal or signal["from"] == "data"]
		self.tree.update(chips_for(self.chance, self.bits, bits))

	def make_standard(self):
		"""What the plan is measured against: advice, but where `stretch: auto` has a choice."""
		if not self.maybe(0.9 if self.automatic else 0.15):
			return
		limits = {}
		cell = self.clock.cell / self.clock.master * 10**6
		for item in self.chance.sample(LIMITED_ITEMS, self.number(0, 5)):
			low, high = sorted(cell * Fraction(self.number(1, 120), 10) for _ in range(2))
			limits[item] = self.pick([f"at least {low} us", f"at most {high} us", f"{low} us to {high} us", f"{high} us +- {low} us",
				f"{low} us ({low / 2} us to {high} us)", f"{low} us", f"exactly {high} us"])
		base = self.pick(STANDARDS)
		own = {"base": base, "limits": limits} if self.maybe(0.5) else {"limits": limits}
		self.tree["standard"] = own if limits else base
		if self.maybe(0.6):
			self.tree["grade"] = self.pick(["studio", "monitor"])

	def some_defaults(self):
		for signal in self.tree["signals"].values():
			if "from" not in signal and self.maybe(0.1):
				signal["from"] = "data"

	def plan(self):
		self.make_clock()
		if self.maybe(0.06):
			self.stretching = self.colour = self.automatic = False
			self.tree["clock"].pop("stretch", None)
			self.clock = Clock(self.tree["clock"])
			self.make_aligned_count()
		else:
			self.make_signals()
			self.make_lines()
			self.make_frame()
			self.measure()
			self.make_machine()
			self.make_holds()
			self.make_field_signals()
			self.make_phase(self.widths[self.names[0]].ticks(self.clock))
		self.make_chips()
		self.make_timing()
		self.make_sweep()
		self.some_defaults()
		self.make_standard()
		return self.tree


class Raster(Generator):
	"""Lines that a monitor would know, with cells to stretch that the limits of a standard may place; three lines of vertical sync."""

	def make_clock(self):
		super().make_clock()
		clock = self.tree["clock"]
		clock.setdefault("stretch", self.length_in_dots(self.number(1, 4), self.clock.dot))
		self.clock = Clock(clock)
		self.stretching = True

	def make_signals(self):
		self.tree["signals"] = {
			"sync": {"role": "composite sync", "active": "low"}, "blank": {"role": "blanking", "active": "high"},
			"burst": {"role": "burst gate", "active": self.pick(["high", "low"])}, "wide": {"role": "stretch", "active": "high"}}
		for name in ("sync", "wide"):
			self.tree["signals"][name]["lead"] = self.pick(["0 cells", "1 cell", "-2 cells"])
		self.plain_signals = ["sync", "blank", "burst"]

	def marked(self, region):
		return {**region, "stretch": "auto"} if self.maybe(0.5) else region

	def make_lines(self):
		self.colour = self.automatic = True
		parts = [(name, asserted, self.number(1, most)) for name, asserted, most in RASTER_PARTS]
		picture = self.number(30, 60)
		cells = sum(width for _, _, width in parts) + picture
		regions = [self.marked({"region": name, "cells": str(width), "assert": asserted}) for name, asserted, width in parts]
		regions[1]["stretch"] = "auto"
		regions.append(self.marked({"region": "picture", "fill": "true", "assert": []}))
		porch = str(parts[0][2])
		vertical = [{"region": "front porch", "cells": porch, "assert": ["blank"]},
			{"region": "broad sync", "fill": "true", "assert": ["blank", "sync"], "stretch": "auto"},
			self.marked({"region": "serration", "cells": str(self.number(2, 8)), "assert": ["blank"]})]
		border = {"like": "picture", "change": [{"region": "picture", "assert": ["blank"]}]}
		self.tree["lines"] = {"picture": {"cells": str(cells), "regions": regions}, "border": border,
			"vertical": {"cells": str(cells), "regions": vertical}}
		self.names = list(self.tree["lines"])

	def make_frame(self):
		self.blocks = [("picture", self.number(4, 20)), ("border", self.number(1, 6)), ("vertical", 3)]
		self.tree["frame"] = [{"repeat": str(repeat), "line": name} for name, repeat in self.blocks]
		self.frame_lines = sum(repeat for _, repeat in self.blocks)

	def make_phase(self, line_ticks):
		super().make_phase(line_ticks + self.number(1, 4) * self.clock.stretch)

	def make_field_signals(self):
		"""None: what they need of the states is seen to elsewhere."""


def generator_of(chance, name, seed):
	kind = Tight if seed % 4 == 0 else Raster if seed % 4 == 3 else Generator
	return kind(chance, name)


def write_plan(folder, seed):
	"""The plan of a seed; line layouts that are errors are passed over by trying again."""
	name = f"plan-{seed}"
	for attempt in range(100):
		chance = random.Random(f"{seed} {attempt}")
		try:
			tree = generator_of(chance, name, seed).plan()
		except Refused:
			continue
		with open(os.path.join(folder, f"{name}.yaml"), "w", encoding="utf-8") as file:
			file.write(written(chance, tree))
		return


def main(arguments):
	if len(arguments) != 3:
		print(__doc__, file=sys.stderr)
		return 2
	for seed in range(int(arguments[1]), int(arguments[1]) + int(arguments[2])):
		write_plan(arguments[0], seed)
	return 0


if __name__ == "__main__":
	sys.exit(main(sys.argv[1:]))
