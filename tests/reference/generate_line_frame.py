#!/usr/bin/python3
"""Writes line-frame plans: one for each combination of stages, and random ones, the same for the same seed.

	generate_line_frame.py combinations FOLDER         FOLDER/LINE-OUTPUTS-FRAME-OUTPUTS.yaml, 36 of them
	generate_line_frame.py random FOLDER FIRST COUNT   FOLDER/lines-SEED.yaml for each seed

All can be built but some random ones: in those of each eighth seed something is spoiled, which may make them ones that the
program must refuse.
"""

import itertools
import os
import random
import sys

import yaml

from generate import Generator
from generate_chips import chips_for_stages
from generate_text import decimal_of, written
from oracle_chips import stages_of
from oracle_line_frame import check_agreements
from oracle_line_states import feasible_lines
from oracle_plan import LineType, Plan, Refused, line_tree

ADVANCES = ["table", "sync", "async"]
OUTPUTS = ["registered", "direct"]


def stage_tree(bits, advance, outputs):
	tree = {"state": f"{bits} bits", "outputs": outputs, "advance": "table" if advance == "table" else "count"}
	return tree if advance == "table" else {**tree, "clear": advance}


def can_be_built(tree):
	"""Whether there are states for all cells; None where the oracle can not tell. Refused where nothing could help."""
	plan = Plan(yaml.dump(tree))
	check_agreements(plan)
	return feasible_lines(plan)


# ---- combinations


class Combination:
	"""A small harbour's board with half lines where the line stage allows them. A table's states are the fewest that do."""

	def __init__(self, number, line, line_outputs, frame, frame_outputs):
		self.chance = random.Random(number)
		self.number = number
		self.line, self.frame = line, frame
		self.name = f"{line}-{line_outputs}-{frame}-{frame_outputs}"
		self.width = {"table": 26, "sync": 32, "async": 31}[line]
		self.half = self.width if line == "async" else self.width // 2
		self.machine = {"form": "line-frame", "line": stage_tree(5, line, line_outputs),
			"frame": stage_tree(5, frame, frame_outputs)}

	def signals(self):
		"""A table decodes burst, a counter the end of the line."""
		decoded = {"field": "code", "codes": "auto" if self.line == "table" and self.number % 2 else ["3"]}
		lead = self.width if self.line == "async" else 0
		return {
			"sync": {"role": "composite sync", "active": "low"},
			"night": {"role": "plain", "active": "high", "stage": "frame", "lead": f"{lead} cells"},
			"blank": {"role": "blanking", "active": "high", "stage": "line"},
			"burst": {"role": "burst gate", "active": "low", **({"from": decoded} if self.line == "table" else {})},
			"vsync": {"role": "vertical sync", "active": "low", "stage": "frame"},
			"wide": {"role": "stretch", "active": "low", "lead": "1 cell"},
			"load": {"role": "plain", "active": "low", "lead": "1 cell"},
			"late": {"role": "plain", "active": "high", **({} if self.line == "table" else {"from": decoded})},
			"gate": {"role": "plain", "active": "high", "lead": "-1 cell"},
		}

	def tail(self, cells):
		"""A counter's last eight cells or so have code 3, in lines that reach so far."""
		if self.line == "table" or cells < self.width:
			return {"region": "tail", "cells": "2", "assert": ["blank"]}
		return {"region": "tail", "cells": str(cells - 24), "assert": ["blank", "late"]}

	def full_line(self, picture, frame_signals, hold):
		regions = [
			{"region": "front porch", "cells": "3", "assert": ["blank"]},
			{"region": "sync", "cells": "4", "assert": ["blank", "sync"], "stretch": "1"},
			{"region": "burst", "cells": "2", "assert": ["blank", "burst"]},
			{"region": "back porch", "cells": "2", "assert": ["blank"]},
			{"region": "picture", "fill": "true", "assert": picture, **({"hold": hold} if hold else {})},
			self.tail(self.width)]
		return self.with_frame_signals({"cells": str(self.width), "regions": regions}, frame_signals)

	def half_line(self):
		regions = [
			{"region": "front porch", "cells": "3", "assert": ["blank"]},
			{"region": "broad sync", "fill": "true", "assert": ["blank", "sync"]},
			{"region": "serration", "cells": "3", "assert": ["blank"], "stretch": "2"},
			self.tail(self.half)]
		return self.with_frame_signals({"cells": str(self.half), "regions": regions}, ["vsync"])

	@staticmethod
	def with_frame_signals(line, names):
		for region in line["regions"]:
			region["assert"] = region["assert"] + names
		return line

	def tree(self):
		hold = {"at": "col"} if self.line == "table" else {"place": "cell"}
		lines = {"picture": self.full_line(["load", "gate"], [], hold), "half line": self.half_line(),
			"border": self.full_line(["blank"], ["night"], None)}
		last = {"table": 9 - self.number % 4, "sync": 7, "async": 8}[self.frame]
		frame = [("border", 3), ("picture", 12), ("half line", 5), ("picture", 3), ("border", last)]
		fields = {"code": "4..3", "at": "3..0"} if self.line == "table" else {"code": "4..3", "place": "4..0"}
		tree = {"scanlatch": "1", "name": self.name, "clock": {"master": "8 MHz", "cell": "8 ticks", "stretch": "3 ticks"},
			"signals": self.signals(), "lines": lines,
			"frame": [{"repeat": str(repeat), "line": name} for name, repeat in frame],
			"machine": {**self.machine, "fields": fields}}
		if self.number % 3 == 2:
			tree["machine"]["kind"] = "3 bits"
		if self.line == "table" and self.number % 4 == 2:
			tree["machine"]["start"] = "0x17"
		tree.update(chips_for_stages(self.chance, stage_wires(tree), self.number % 3 != 0))
		return tree


def stage_wires(tree):
	return {stage: (address, word) for stage, address, word in stages_of(Plan(yaml.dump(tree)))}


def write_combinations(folder):
	choices = itertools.product(ADVANCES, OUTPUTS, ADVANCES, OUTPUTS)
	for number, choice in enumerate(choices):
		combination = Combination(number, *choice)
		write(folder, combination.name, combination.chance, combination.tree())


def write(folder, name, chance, tree):
	with open(os.path.join(folder, f"{name}.yaml"), "w", encoding="utf-8") as file:
		file.write(written(chance, tree))


# ---- random plans


class LineFrame(Generator):
	"""All line types share the cells that rows of other lines look at: a head as long as leads reach on, and a tail."""

	def make_wishes(self, wishes):
		"""What is to come true in spite of trying again: else hard plans would be rare."""
		self.advance = {"line": wishes.choice(ADVANCES), "frame": wishes.choice(ADVANCES)}
		self.outputs = {"line": wishes.choice(OUTPUTS), "frame": wishes.choice(OUTPUTS)}
		self.counted = self.advance["line"] != "table"
		self.several = wishes.random() < 0.85
		self.decoding = wishes.random() < (0.3 if self.counted else 0.6)
		self.holding = wishes.random() < 0.5
		self.unequal = self.several and self.advance["line"] != "async" and wishes.random() < 0.6

	def check_wishes(self):
		widths = {self.widths[name].cells for name, _ in self.blocks}
		decoded = any("from" in signal for signal in self.tree["signals"].values())
		if self.several and len(self.names) < 2 or self.unequal and len(widths) < 2:
			raise Refused("too plain")
		if self.decoding != decoded or self.holding != self.holds_something():
			raise Refused("not as wished")

	def holds_something(self):
		return any(region.get("hold") for line in self.tree["lines"].values() for region in line.get("regions", ()))

	def make_signals(self):
		super().make_signals()
		signals = self.tree["signals"]
		for signal in signals.values():
			if "lead" in signal:
				signal["lead"] = self.pick(["1 cell", "2 cells", "3 cells", "-1 cell", "-2 cells", "0 cells"])
		self.frame_signals = [name for name in self.plain_signals if self.maybe(0.3)]
		for name in self.frame_signals:
			signals[name]["stage"] = "frame"
			signals[name].pop("lead", None)
		self.plain_signals = [name for name in self.plain_signals if name not in self.frame_signals]

	def make_lines(self):
		super().make_lines()
		if self.advance["line"] == "async":
			self.make_equal()
		leads = [int(signal.get("lead", "0").split()[0]) for signal in self.tree["signals"].values()]
		head = {"region": "head", "cells": str(1 + max(leads + [0]) + self.number(0, 2)), "assert": self.some_signals()}
		tail = {"region": "tail", "cells": str(max([-lead for lead in leads] + [1])), "assert": self.some_signals()}
		for line in self.tree["lines"].values():
			if "regions" in line:
				line["regions"].insert(0, dict(head))
				line["regions"].append(dict(tail))
				if "cells" in line:
					line["cells"] = str(int(line["cells"]) + int(head["cells"]) + int(tail["cells"]))
		self.assert_frame_signals()

	def make_equal(self):
		"""All lines of the same length: each has a fill."""
		cells = str(self.number(8, 40))
		for line in self.tree["lines"].values():
			if "regions" in line:
				line["cells"] = cells
				if not any("fill" in region for region in line["regions"]):
					region = self.pick(line["regions"])
					region.pop("time", None)
					region.pop("cells", None)
					region["fill"] = "true"

	def assert_frame_signals(self):
		"""In every region of a line or in none; a line that is like another has them where that has."""
		chosen = {}
		for name, line in self.tree["lines"].items():
			base = line.get("like")
			chosen[name] = chosen[base] if base else [signal for signal in self.frame_signals if self.maybe(0.4)]
			for region in line.get("regions", []) + line.get("change", []):
				if "assert" in region:
					region["assert"] = region["assert"] + chosen[name]

	def make_frame(self):
		super().make_frame()
		if len(self.names) > 1 and self.maybe(0.1):
			unused = self.pick(self.names)
			self.tree["frame"] = [block for block in self.tree["frame"] if block["line"] != unused]
			self.blocks = [block for block in self.blocks if block[0] != unused]
			self.frame_lines = sum(repeat for _, repeat in self.blocks)

	def measure(self):
		super().measure()
		widths = {layout.cells for layout in self.widths.values()}
		lead = self.pick(sorted(widths)) * self.pick([1, -1])
		for name in self.frame_signals:
			if len(widths) == 1 and self.maybe(0.3):
				self.tree["signals"][name]["lead"] = f"{lead} cells"

	def bits_for(self, stage, count):
		needed = count if self.advance[stage] == "async" else count - 1
		return max(1, needed.bit_length()) + self.pick([0, 0, 0, 1, 2])

	def make_machine(self):
		self.bits = self.bits_for("line", max(layout.cells for layout in self.widths.values()))
		self.bits += self.decoding and not self.counted and self.pick([0, 1])
		bits = {"line": self.bits, "frame": self.bits_for("frame", self.frame_lines)}
		machine = {"form": "line-frame"}
		for stage in ("line", "frame"):
			machine[stage] = stage_tree(bits[stage], self.advance[stage], self.outputs[stage])
			for key, default in (("outputs", "registered"), ("advance", "table"), ("clear", "sync")):
				if machine[stage].get(key) == default and self.maybe(0.2):
					del machine[stage][key]
		if self.maybe(0.3):
			machine["kind"] = f"{(len(self.names) - 1).bit_length() + self.pick([1, 1, 2])} bits"
		self.fields = {}
		for name, width in (("code", self.pick([1, 2, 3])), ("at", self.bits - self.pick([1, 2])), ("f0", 1)):
			if self.maybe(0.6) and 0 < width <= self.bits:
				low = self.number(0, self.bits - width)
				self.fields[name] = (low, width)
		if self.fields:
			machine["fields"] = {name: f"{low + width - 1}..{low}" for name, (low, width) in self.fields.items()}
		self.tree["machine"] = machine

	def make_holds(self):
		"""Some cells hold a number; under a counter it is that of the cell."""
		for name in self.names if self.holding else ():
			for region in self.tree["lines"][name].get("regions", ()):
				for field, (low, width) in self.fields.items():
					if self.maybe(0.2):
						region.setdefault("hold", {})[field] = self.held(low, 1 << width)

	def held(self, low, values):
		if self.counted or self.maybe(0.2):
			return f"cell / {1 << low} % {values}"
		inner = self.pick(["col", "cell", f"{self.number(0, 99)} + 3*col", f"(cell + {self.number(0, 9)}) / 2", "5"])
		return f"({inner}) % {values}"

	def make_field_signals(self):
		if self.counted and self.decoding:
			return self.make_counted_signal()
		super().make_field_signals()
		for name in self.frame_signals:
			self.tree["signals"][name].pop("from", None)

	def make_counted_signal(self):
		"""A signal more, asserted in the cells whose numbers have some codes; for that each cell is a region."""
		if "code" not in self.fields:
			return
		low, width = self.fields["code"]
		codes = set(self.chance.sample(range(1 << width), self.number(1, (1 << width) - 1)))
		self.tree["signals"]["counted"] = {"role": "plain", "active": self.pick(["high", "low"]),
			"from": {"field": "code", "codes": "auto" if self.maybe(0.3) else [str(code) for code in sorted(codes)]}}
		layouts = {name: LineType(name, *line_tree(self.tree["lines"], name), self.clock) for name in self.names}
		for name, layout in layouts.items():
			self.tree["lines"][name] = self.cut(layout, lambda cell: cell >> low & ((1 << width) - 1) in codes)

	@staticmethod
	def cut(layout, asserted):
		"""The line again, cell by cell, with the signal `counted` in those for which asserted(cell) is true."""
		regions = []
		for region in layout.regions:
			for cell in range(region.first, region.first + region.width):
				cut = {"region": f"{region.name} {cell}", "cells": "1",
					"assert": sorted(region.asserted) + (["counted"] if asserted(cell) else [])}
				if region.stretch == "auto" or cell - region.first < int(region.stretch):
					cut["stretch"] = "auto" if region.stretch == "auto" else "1"
				if region.hold:
					cut["hold"] = {field: f"({expression.text.replace('col', str(cell - region.first))})"
						for field, expression in region.hold.items()}
				regions.append(cut)
		return {"regions": regions}

	def make_start(self):
		if self.maybe(0.4):
			free = (self.decoding or self.holding) and not self.counted
			self.tree["machine"]["start"] = self.integer(self.number(0, (1 << self.bits) - 1) if free else 0)

	def make_chips(self):
		self.tree.update(chips_for_stages(self.chance, stage_wires(self.tree), self.maybe(0.5)))

	def make_timing(self):
		timing = {}
		if self.maybe(0.3):
			timing["share"] = self.pick(["1/2", "1/1", "2/3", "3/4"])
		if self.maybe(0.3):
			timing["margin"] = self.pick(["20 ns", "5 ns", "1.5 ns"])
		if timing:
			self.tree["timing"] = timing

	def make_sweep(self):
		"""Within two lines, or more, every value of a bit has come up, if it ever does."""
		if not self.fields or not self.maybe(0.25):
			return
		name, (_, width) = self.pick(sorted(self.fields.items()))
		line = max(layout.cells for layout in self.widths.values()) * (self.clock.cell + self.clock.stretch) / self.clock.master
		within = decimal_of(line * 10**6 * self.pick([2, 20, self.frame_lines]), "us")
		self.tree["sweep"] = [{"bits": f"{name}.{self.number(0, width - 1)}", "within": f"{within} us"}]

	def spoil(self):
		"""Something that may be one too many or one too few."""
		machine, lines = self.tree["machine"], self.tree["lines"]
		whole = [line["regions"] for line in lines.values() if "regions" in line]
		spoiler = self.number(0, 4)
		if spoiler == 0:
			stage = machine[self.pick(["line", "frame"])]
			stage["state"] = f"{max(1, int(stage['state'].split()[0]) - 1)} bits"
		elif spoiler == 1 and len(lines) > 2:
			machine["kind"] = "1 bit"
		elif spoiler == 2:
			self.pick(whole)[0]["assert"] = self.some_signals()
		elif spoiler == 3:
			self.pick(self.pick(whole))["assert"] = self.some_signals() + [name for name in self.frame_signals if self.maybe(0.5)]
		else:
			machine["line"].update({"advance": "count", "clear": "async"})
			machine.pop("start", None)

	def plan(self, wishes, spoiled):
		self.make_wishes(wishes)
		self.make_clock()
		self.make_signals()
		self.make_lines()
		self.make_frame()
		self.measure()
		self.make_machine()
		self.make_holds()
		self.make_field_signals()
		self.check_wishes()
		self.make_start()
		self.make_phase(self.widths[self.names[0]].ticks(self.clock))
		if not can_be_built(self.tree):
			raise Refused("not to be built")
		if spoiled:
			self.spoil()
		self.make_chips()
		self.make_timing()
		self.make_sweep()
		self.some_defaults()
		return self.tree


def write_random(folder, seed):
	"""The plan of a seed; what can not be built is passed over by trying again."""
	name = f"lines-{seed}"
	for attempt in range(5000):
		chance = random.Random(f"{name} {attempt}")
		try:
			tree = LineFrame(chance, name).plan(random.Random(name), seed % 8 == 0)
		except Refused:
			continue
		write(folder, name, chance, tree)
		return
	raise Refused(f"no plan for seed {seed}")


def main(arguments):
	if arguments[:1] == ["combinations"] and len(arguments) == 2:
		write_combinations(arguments[1])
	elif arguments[:1] == ["random"] and len(arguments) == 4:
		for seed in range(int(arguments[2]), int(arguments[2]) + int(arguments[3])):
			write_random(arguments[1], seed)
	else:
		print(__doc__, file=sys.stderr)
		return 2
	return 0


if __name__ == "__main__":
	sys.exit(main(sys.argv[1:]))
