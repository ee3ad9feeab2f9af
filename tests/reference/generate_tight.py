"""Plans with hardly a state to spare, made from a solution that is then hidden: feasible, though not by greedy picking.

Every cell is a region of its own, so that each can hold what it likes. In some plans one hold is changed afterwards; whether
states are left is then for the program and the oracle to find out.
"""

FIELDS = ["f", "g", "h"]


class Tight:
	def __init__(self, chance, name):
		self.chance = chance
		self.bits = chance.randint(2, 6)
		self.cells = chance.randint(max(2, (1 << self.bits) * 2 // 3), 1 << self.bits)
		if chance.random() < 0.4:
			self.cells = 1 << self.bits
		self.states = chance.sample(range(1 << self.bits), self.cells)
		self.fields = {}
		for field in FIELDS:
			low = chance.randrange(self.bits)
			high = min(self.bits - 1, low + chance.randint(0, 2))
			self.fields[field] = (low, high - low + 1)
		self.tree = {"scanlatch": "1", "name": name, "clock": {"master": "8 MHz", "dot": "1 tick", "cell": "8 dots"}}

	def code(self, cell, field):
		low, width = self.fields[field]
		return self.states[cell] >> low & ((1 << width) - 1)

	def make_signals(self):
		"""mark is stored; the others are decoded, with codes of the solution."""
		self.asserted = [[name] if self.chance.random() < 0.5 else [] for name in ["mark"] * self.cells]
		self.tree["signals"] = {"mark": {"role": "plain", "active": "high"}}
		for number in range(self.chance.choice([0, 1, 1, 2, 3])):
			field = self.chance.choice(FIELDS)
			codes = range(1 << self.fields[field][1])
			chosen = set(self.chance.sample(codes, self.chance.randint(1, max(1, len(codes) - 1))))
			lead = self.chance.choice([0, 0, 1, -1])
			listed = [str(code) for code in sorted(chosen)]
			self.tree["signals"][f"d{number}"] = {"role": "plain", "active": self.chance.choice(["high", "low"]),
				"lead": f"{lead} cells", "from": {"field": field, "codes": "auto" if self.chance.random() < 0.5 else listed}}
			for cell in range(self.cells):
				if self.code(cell, field) in chosen:
					self.asserted[(cell + lead) % self.cells].append(f"d{number}")

	def make_lines(self):
		share = self.chance.choice([0.1, 0.3, 0.6])
		lines = {}
		first = 0
		while first < self.cells:
			end = min(self.cells, first + self.chance.randint(1, 9))
			regions = []
			for cell in range(first, end):
				hold = {field: str(self.code(cell, field)) for field in FIELDS if self.chance.random() < share}
				regions.append({"region": f"cell {cell}", "cells": "1", "assert": self.asserted[cell], "hold": hold})
			lines[f"line {len(lines)}"] = {"regions": regions}
			first = end
		self.tree["lines"] = lines
		self.tree["frame"] = [{"repeat": "1", "line": name} for name in lines]

	def spoil(self):
		"""Changes one hold to another value of its field."""
		regions = [region for line in self.tree["lines"].values() for region in line["regions"]]
		held = [(region["hold"], field) for region in regions for field in region["hold"]]
		if held:
			hold, field = self.chance.choice(held)
			hold[field] = str(self.chance.randrange(1 << self.fields[field][1]))

	def plan(self):
		self.make_signals()
		self.make_lines()
		fields = {name: f"{low + width - 1}..{low}" for name, (low, width) in self.fields.items()}
		self.tree["machine"] = {"form": "loop", "state": f"{self.bits} bits", "fields": fields,
			"outputs": self.chance.choice(["registered", "direct"])}
		if self.chance.random() < 0.5:
			self.tree["machine"]["start"] = str(self.states[0])
		if self.chance.random() < 0.4:
			self.spoil()
		self.tree["chips"] = {"part": "28C16", "speed": "150 ns"}
		return self.tree
