#!/usr/bin/python3
"""Gives plans made by generate.py subcarriers of all kinds, whether lines suit them or not.

	generate_colour.py SEED PLAN…     rewrites each PLAN, but for those that stretch lines to suit a phase
"""

import random
import sys

import yaml

from generate_text import written
from oracle_plan import Clock


def subcarrier_of(chance, master):
	"""Of few phases, of some, and of so many that they hardly ever repeat."""
	kind = chance.random()
	if kind < 0.6:
		return f"master / {chance.randint(2, 13)}"
	if kind < 0.8:
		return f"master / {chance.choice(['2.5', '3.5', '4.25', '6.4', '12.1'])}"
	if kind < 0.9:
		return f"{master / chance.choice([101, 997, 6007])} Hz"
	return f"{chance.randint(1_000_000, 9_000_000)} Hz"


def phase_of(chance):
	kind = chance.random()
	if kind < 0.15:
		return "free"
	unit = "line" if kind < 0.6 else "frame"
	count = chance.choice([1, 2, 3, 4, 5, 6, 8, 12, 24, 60, 100])
	return f"every {unit}" if count == 1 else f"every {count} {unit}s"


def main(seed, paths):
	for path in paths:
		chance = random.Random(f"{seed} {path.rpartition('/')[2]}")
		with open(path, encoding="utf-8") as file:
			tree = yaml.load(file, Loader=yaml.BaseLoader)
		if "'auto'" in repr(tree["lines"]):
			continue
		tree["clock"]["subcarrier"] = subcarrier_of(chance, Clock(tree["clock"]).master)
		tree["clock"]["phase"] = phase_of(chance)
		with open(path, "w", encoding="utf-8") as file:
			file.write(written(chance, tree))


if __name__ == "__main__":
	main(sys.argv[1], sys.argv[2:])
