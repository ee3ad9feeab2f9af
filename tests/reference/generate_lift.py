#!/usr/bin/python3
"""Writes random plans whose images can be lifted, the same ones for the same seed.

	generate_lift.py FOLDER FIRST_SEED COUNT

Of each five seeds, three are loops whose lines begin with a pulse (FOLDER/loop-SEED.yaml), one has two stages
(lines-SEED.yaml), and one is tight and mostly no raster (tight-SEED.yaml). No decoder has codes: auto.
"""

import os
import random
import sys

from generate import Generator
from generate_line_frame import LineFrame
from generate_text import written
from generate_tight import Tight
from oracle_plan import Plan, Refused


def list_codes(chance, tree):
	"""Codes that cannot be read without a timeline become listed ones."""
	for signal in tree["signals"].values():
		source = signal.get("from", "data")
		if source != "data" and source["codes"] == "auto":
			high, _, low = tree["machine"]["fields"][source["field"]].partition("..")
			codes = range(1 << (int(high) - int(low or high) + 1))
			source["codes"] = [str(code) for code in sorted(chance.sample(codes, chance.randint(1, max(1, len(codes) - 1))))]


class Raster(Generator):
	"""A loop whose lines begin with a pulse of `cut`, which is composite sync or else plain."""

	def make_signals(self):
		super().make_signals()
		signals = self.tree["signals"]
		for signal in signals.values():
			if signal["role"] in ("composite sync", "horizontal sync"):
				signal["role"] = "plain"
		signals["cut"] = {"role": self.pick(["composite sync", "horizontal sync", "plain"]), "active": self.pick(["high", "low"])}
		if self.maybe(0.3):
			signals["cut"]["lead"] = self.pick(["1 cell", "-1 cell", "3 cells"])

	def make_lines(self):
		super().make_lines()
		for line in self.tree["lines"].values():
			if "regions" in line:
				line["regions"].insert(0, {"region": "pulse", "cells": "1", "assert": ["cut"]})
				if "cells" in line:
					line["cells"] = str(int(line["cells"]) + 1)

	def make_field_signals(self):
		super().make_field_signals()
		list_codes(self.chance, self.tree)

	def make_aligned_count(self):
		super().make_aligned_count()
		self.tree["signals"]["sync"]["from"]["codes"] = ["1"]


class ListedStages(LineFrame):
	def make_field_signals(self):
		super().make_field_signals()
		list_codes(self.chance, self.tree)


def make_raster(tree, text):
	"""Sync that never comes, or never goes, is none: lifting would refuse it."""
	plan = Plan(text)
	for name, signal in tree["signals"].items():
		if signal["role"].endswith(" sync") and len(set(plan.asserted[name])) == 1:
			signal["role"] = "plain"


def loop_tree(chance, name, _):
	return Raster(chance, name).plan()


def stages_tree(chance, name, wishes):
	return ListedStages(chance, name).plan(wishes, False)


def tight_tree(chance, name, _):
	tree = Tight(chance, name).plan()
	list_codes(chance, tree)
	return tree


KINDS = [("loop", loop_tree), ("loop", loop_tree), ("loop", loop_tree), ("lines", stages_tree), ("tight", tight_tree)]


def write_plan(folder, seed):
	kind, make = KINDS[seed % len(KINDS)]
	name = f"{kind}-{seed}"
	for attempt in range(5000):
		chance = random.Random(f"{name} {attempt}")
		try:
			tree = make(chance, name, random.Random(name))
		except Refused:
			continue
		if kind == "lines":
			make_raster(tree, written(random.Random(name), tree))
		with open(os.path.join(folder, f"{name}.yaml"), "w", encoding="utf-8") as file:
			file.write(written(chance, tree))
		return
	raise Refused(f"no plan for seed {seed}")


def main(arguments):
	if len(arguments) != 3:
		print(__doc__, file=sys.stderr)
		return 2
	for seed in range(int(arguments[1]), int(arguments[1]) + int(arguments[2])):
		write_plan(arguments[0], seed)
	return 0


if __name__ == "__main__":
	sys.exit(main(sys.argv[1:]))
