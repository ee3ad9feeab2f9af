"""Where `stretch: auto` places its cells, against every way there is.

	stretch.py PROGRAM FOLDER FIRST_SEED COUNT

For each seed a colour plan whose lines need one to three stretched cells and mark two to six regions for them. Every way to place
them is written as a plan of its own with `stretch: N`, N cells from a region's first on; what its limits are worth is taken from
`check --json`. Of these the best by design page 2.5 is taken (most limits kept, then the largest smallest margin, then leftmost), and
the second best, and compared with what the program chose for `stretch: auto`. Prints a line for each seed: "ok SEED …" or "bad SEED …".

A limit has a say in the smallest margin only where some way moves what it measures. The program has it so for each line on its own. All
line types with horizontal sync are marked alike here, and lines of two types with picture do not follow each other, so that an item moves in
all its lines or in none, and that it moves can be seen in its lowest and highest value.
"""

import json
import os
import random
import subprocess
import sys
from concurrent.futures import ThreadPoolExecutor
from fractions import Fraction
from itertools import product

MOST_WAYS = 160
# Beside times, of lines: what stretched cells before 0H change too.
CYCLES = ("line rate", "subcarrier cycles per line", "burst start in cycles", "burst length in cycles")

STANDARDS = {
	# Master clock, and about how many ticks of it a line has.
	"composite-525": ("315/22 MHz", 910),
	"composite-625": ("17.734475 MHz", 1135),
}


class Plan:
	"""Line types are lists of [name, cells, signals, marked]."""

	def __init__(self, seed):
		self.chance = random.Random(f"stretch {seed}")
		self.name = f"stretch-{seed}"
		self.standard = self.chance.choice(sorted(STANDARDS))
		self.master, self.nominal = STANDARDS[self.standard]
		self.grade = self.chance.choice(["studio", "monitor"])
		self.accuracy = self.chance.choice([None, None, "50 ppm", "2000 ppm"])
		while not (self.make_clock() and self.make_lines()):
			pass
		self.own = self.make_limits()

	def make_clock(self):
		"""A phase of every line at a quarter of the clock: lengths must be multiples of 4 ticks."""
		self.cell = self.chance.randint(7, 11)
		self.stretch = self.chance.randint(1, 5)
		self.cells = round(self.nominal / self.cell) + self.chance.randint(-2, 1)
		self.needed = next((count for count in range(1, 4)
			if (self.cells * self.cell + count * self.stretch) % 4 == 0), 0)
		return self.cells * self.cell % 4 != 0 and self.needed > 0

	def cells_of(self, microseconds, off):
		ticks = Fraction(self.master.split()[0]) * Fraction(microseconds)
		return max(1, int(ticks / self.cell + Fraction(1, 2)) + self.chance.randint(-off, off))

	def make_lines(self):
		sync, breezeway, burst = self.cells_of("4.7", 1), self.cells_of("0.7", 0), self.cells_of("2.4", 0)
		porch, front = self.cells_of("1.6", 1), self.cells_of("1.5", 1)
		picture = self.cells - sync - breezeway - burst - porch - front
		split = self.chance.randint(1, picture - 1)
		regions = [["sync", sync, "sync blank"], ["breezeway", breezeway, "blank"], ["burst", burst, "blank burst"],
			["back porch", porch, "blank"], ["picture", split, ""], ["rest", picture - split, "load"], ["front porch", front, "blank"]]
		marked = self.chance.sample(range(7), self.chance.randint(2, 6))
		normal = [[*region, index in marked] for index, region in enumerate(regions)]
		self.lines = {"broad": self.vertical(), "border": [[*region] for region in normal], "picture": normal}
		for region in self.lines["border"][4:6]:
			region[2] = "blank"
		if self.chance.random() < 0.4:
			self.lines["late"] = [[*region] for region in normal]
			self.lines["late"][3][1] += 1
			self.lines["late"][6][1] += 1
			self.lines["late"][5][1] -= 2
		return all(cells > 0 for line in self.lines.values() for _, cells, _, _ in line) and 2 <= self.count_ways() <= MOST_WAYS

	def vertical(self):
		"""Broad sync in one pulse or two, all marked alike; of as many cells as the others."""
		half, serration = self.cells // 2, self.cells_of("4.7", 1)
		lengths = [half - serration, serration, self.cells - half - serration, serration]
		if self.chance.random() < 0.5:
			lengths = [self.cells - serration, serration]
		marked = self.chance.choice([(0,), (1,), (0, 1), (0, 1)])
		return [[f"{name} {index // 2}", length, name, index % 2 in marked]
			for index, (length, name) in enumerate(zip(lengths, ["sync blank", "blank"] * 2))]

	def segments(self):
		"""(line type, indexes of marked regions between two edges of sync, blanking or burst), in order."""
		found = []
		for name, regions in self.lines.items():
			levels = None
			for index, (_, _, signals, marked) in enumerate(regions):
				seen = {signal for signal in signals.split() if signal != "load"}
				opens, levels = seen != levels, seen
				if opens:
					current = None
				if marked and current is None:
					current = (name, [])
					found.append(current)
				if marked:
					current[1].append(index)
		return found

	def ways(self):
		"""How many cells each segment gets; the leftmost way first, and so on to the right."""
		segments = self.segments()
		rooms = [sum(self.lines[name][index][1] for index in indexes) for name, indexes in segments]
		for counts in product(*(range(min(room, self.needed), -1, -1) for room in rooms)):
			sums = {name: 0 for name, _ in segments}
			for (name, _), count in zip(segments, counts):
				sums[name] += count
			if all(total == self.needed for total in sums.values()):
				yield counts

	def count_ways(self):
		# The product is tried only where it is small.
		return sum(1 for _ in self.ways()) if (self.needed + 1) ** len(self.segments()) < 70000 else MOST_WAYS + 1

	def make_limits(self):
		"""Limits of the plan's own near what is measured, so that some ways keep them and some do not."""
		own = {}
		ticks = lambda cells, stretched: Fraction(cells * self.cell + stretched * self.stretch)
		master = Fraction(self.master.split()[0])
		line = {name: cells for name, cells, _, _ in self.lines["picture"]}
		widths = {"horizontal sync width": line["sync"], "breezeway": line["breezeway"], "burst length": line["burst"],
			"back porch": line["breezeway"] + line["burst"] + line["back porch"], "front porch": line["front porch"],
			"broad pulse width": self.lines["broad"][0][1], "serration width": self.lines["broad"][1][1]}
		for item in self.chance.sample(sorted(widths), self.chance.randint(2, 6)):
			low = ticks(widths[item], self.chance.choice([-1, 0, 0, 1, 1, 2])) - self.chance.choice([0, 1, 2])
			high = low + self.chance.randint(1, 3 * self.stretch + 2)
			low, high = (f"{value / master} us" for value in (low, high))
			own[item] = self.chance.choice([f"{low} to {high}", f"{low} to {high}", f"at least {low}", f"at most {high}"])
		# Leftmost is in sync: mostly it is not to be the best.
		for item in ("horizontal sync width", "broad pulse width"):
			if self.chance.random() < 0.7:
				own[item] = f"{ticks(widths[item], 0) / master} us (at most {(ticks(widths[item], 1) + self.chance.randint(-1, 1)) / master} us)"
		if self.chance.random() < 0.5:
			cycles = ticks(line["burst"], self.chance.randint(0, 2)) / 4
			own["burst length in cycles"] = f"{cycles - Fraction(1, 2)} cycles to {cycles + self.chance.randint(0, 3)} cycles"
		return own

	def text(self, counts):
		"""The plan with stretched cells as counted; of counts None, with `stretch: auto`."""
		stretched = {}
		for (name, indexes), count in zip(self.segments(), counts or ()):
			for index in indexes:
				stretched[name, index] = min(count, self.lines[name][index][1])
				count -= stretched[name, index]
		clock = f"master: {self.master}, cell: {self.cell} ticks, stretch: {self.stretch} ticks, subcarrier: master / 4, phase: every line"
		if self.accuracy:
			clock += f", accuracy: {self.accuracy}"
		own = ", ".join(f"{item}: {limit}" for item, limit in self.own.items())
		text = [f"scanlatch: 1\nname: {self.name}\ngrade: {self.grade}\nstandard: {{ base: {self.standard}, limits: {{ {own} }} }}\nclock: {{ {clock} }}",
			"signals:\n  sync: { role: composite sync, active: low }\n  blank: { role: blanking, active: high }",
			"  burst: { role: burst gate, active: high }\n  late: { role: stretch, active: high }\n  load: { role: plain, active: low }",
			"lines:"]
		for name, regions in self.lines.items():
			text.append(f"  {name}:\n    regions:")
			for index, (region, cells, signals, marked) in enumerate(regions):
				how = "auto" if counts is None and marked else stretched.get((name, index), 0)
				text.append(f"      - {{ region: {region}, cells: {cells}, assert: [{', '.join(signals.split())}], stretch: {how} }}")
		text.append("frame:")
		for name in self.lines:
			text += [f"  - {{ repeat: {3 if name == 'broad' else 9}, line: {name} }}", "  - { repeat: 1, line: border }"]
		return "\n".join(text) + "\nmachine: { form: loop, state: 13 bits }\nchips: { part: 28C64 }\n"


class Checker:
	def __init__(self, program, folder):
		self.program = program
		self.folder = folder

	def check(self, plan, counts):
		path = os.path.join(self.folder, f"{plan.name}-{'auto' if counts is None else ''.join(map(str, counts))}.yaml")
		with open(path, "w", encoding="utf-8") as file:
			file.write(plan.text(counts))
		run = subprocess.run([self.program, "check", "--json", path], capture_output=True, check=False)
		if run.returncode not in (0, 1):
			raise RuntimeError(f"{path}: {run.stderr.decode()}")
		os.unlink(path)
		return json.loads(run.stdout)


def items_of_lines(document, grade):
	"""What was measured of lines, in whole ticks or cycles, and its limit's verdict at the grade."""
	for item in document["proofs"]["limits"]["items"]:
		if (item["unit"] == "us" or item["item"] in CYCLES) and "kept" in item.get(grade, {}):
			yield item["item"], (item["low"], item["high"]), item[grade]


class Way:
	def __init__(self, counts, document, grade):
		self.counts = counts
		self.limits = document["proofs"]["limits"]
		self.items = {name: (values, verdict) for name, values, verdict in items_of_lines(document, grade)}

	def rank(self, moving):
		"""The greater the better, but for leftmost."""
		self.kept = sum(verdict["kept"] for _, verdict in self.items.values())
		shares = [Fraction(verdict["share"]) for name, (_, verdict) in self.items.items()
			if verdict["kept"] and name in moving and "share" in verdict]
		self.share = min(shares) if shares else None
		return self.kept, self.share is not None, self.share or 0


def same(plan, told, way):
	"""Whether a placement as the program tells it is that way."""
	if told["kept"] != way.kept or (Fraction(told["share"]) if "share" in told else None) != way.share:
		return False
	stretched = {}
	for place in told["stretched"]:
		stretched[place["line"], place["region"]] = place["cells"]
	for (name, indexes), count in zip(plan.segments(), way.counts):
		if stretched.pop((name, plan.lines[name][indexes[0]][0]), 0) != count:
			return False
	return not stretched


def judge(checker, seed):
	plan = Plan(seed)
	document = checker.check(plan, None)
	ways = [Way(counts, checker.check(plan, counts), plan.grade) for counts in plan.ways()]
	chosen = document.get("stretch_auto")
	if chosen is None:
		return f"bad {seed}: limits decided nothing, of {len(ways)} ways"
	moving = {name for name in ways[0].items if len({way.items[name][0] for way in ways}) > 1}
	ranks = {way.counts: way.rank(moving) for way in ways}
	ordered = sorted(ways, key=lambda way: ranks[way.counts], reverse=True) # stable: of equals the leftmost stays first
	best, second = ordered[0], ordered[1]
	told = f"{len(ways)} ways, best {best.counts} {best.kept} {best.share}, second {second.counts} {second.kept} {second.share}"
	if not same(plan, chosen["best"], best) or not same(plan, chosen["second"], second):
		return f"bad {seed}: {told}; told {json.dumps(chosen)}"
	if chosen["limits"] != len(best.items) or not chosen["exhausted"]:
		return f"bad {seed}: {len(best.items)} limits; told {json.dumps(chosen)}"
	if document["proofs"]["limits"] != best.limits:
		return f"bad {seed}: the best way alone is measured otherwise"
	words = ["leftmost" if best is ways[0] else "elsewhere", "tie" if ranks[best.counts] == ranks[second.counts] else "alone",
		plan.grade, "accuracy" if plan.accuracy else "exact", f"by-{'limits' if best.kept > ways[0].kept else 'margin'}"]
	return f"ok {seed}: {' '.join(words)}; {plan.needed} cells, {told}"


def main():
	program, folder, first, count = sys.argv[1], sys.argv[2], int(sys.argv[3]), int(sys.argv[4])
	checker = Checker(program, folder)
	with ThreadPoolExecutor(2) as pool:
		for line in pool.map(lambda seed: judge(checker, seed), range(first, first + count)):
			print(line)


main()
