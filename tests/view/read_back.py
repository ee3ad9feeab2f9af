"""Reads pictures back: every edge, width and cell in the SVG against the timeline, to the tick.

	read_back.py SCANLATCH PLAN…

The timeline is that of the second implementation of the plan language (tests/reference/oracle_plan.py); widths of regions are also
those of `check --json`. Prints a line for each picture that differs, and how many were read; fails if one differs or none was read.
"""

import json
import os
import re
import subprocess
import sys
import xml.etree.ElementTree as ElementTree
from fractions import Fraction

sys.path.insert(0, os.path.join(os.path.dirname(__file__), "..", "reference"))
import oracle_plan  # noqa: E402

SVG = "{http://www.w3.org/2000/svg}"
KINDS = ["sync", "vertical", "burst", "blanking", "picture", "stretch", "other"]


class Differs(Exception):
	pass


def same(what, wanted, found):
	if wanted != found:
		raise Differs(f"{what}: wanted {wanted}, found {found}")


def run(program, *arguments):
	return subprocess.run([program, *arguments], check=True, capture_output=True, text=True).stdout


def draw(program, *arguments):
	return ElementTree.fromstring(run(program, "draw", *arguments))


def classes(element):
	return element.get("class", "").split()


def of_class(root, name):
	return [element for element in root.iter() if name in classes(element)]


def number(text):
	return Fraction(text)


def whole(what, value):
	if value.denominator != 1:
		raise Differs(f"{what}: {float(value)} is no whole number")
	return int(value)


def pairs(values, lengths):
	"""Runs of one value as (value, length)."""
	runs = []
	for value, length in zip(values, lengths):
		if runs and runs[-1][0] == value:
			runs[-1] = (value, runs[-1][1] + length)
		else:
			runs.append((value, length))
	return runs


class Line:
	"""The picture of a line beside the timeline's."""

	def __init__(self, program, path, plan, report, name):
		self.root = draw(program, "line", path, "--line", name)
		title = self.root.find(SVG + "title").text
		self.number = int(re.search(r', line (\d+), "', title).group(1))
		self.plan = plan
		self.type, _, self.first = plan.lines[self.number]
		same("line type", name, self.type.name)
		self.ticks = plan.cell_ticks[self.first:self.first + self.type.cells]
		self.report = next(line for line in report["lines"] if line["name"] == name)
		plot = of_class(self.root, "plot")[0]
		same("ticks of the plot", sum(self.ticks), int(plot.get("data-ticks")))
		same("ticks of the report", sum(self.ticks), int(self.report["ticks"]))
		self.left = number(plot.get("data-left"))
		self.scale = sum(self.ticks) / number(plot.get("data-width"))

	def tick(self, what, x):
		return whole(what, (number(x) - self.left) * self.scale)

	def check_run(self, what, rectangle, cell):
		"""A rectangle's place against what it says; the cell after it."""
		cells, start = int(rectangle.get("data-cells")), sum(self.ticks[:cell])
		same(what + " cell", cell, int(rectangle.get("data-cell")))
		ticks = sum(self.ticks[cell:cell + cells])
		same(what + " tick", start, int(rectangle.get("data-tick")))
		same(what + " ticks", ticks, int(rectangle.get("data-ticks")))
		same(what + " x", start, self.tick(what, rectangle.get("x")))
		same(what + " width", Fraction(ticks), number(rectangle.get("width")) * self.scale)
		microseconds = Fraction(ticks) / self.plan.clock.master * 10**6
		if abs(Fraction(rectangle.get("data-us")) - microseconds) > Fraction(1, 2 * 10**6):
			raise Differs(f"{what}: {rectangle.get('data-us')} us are not {float(microseconds)}")
		return cell + cells

	def trace_runs(self, what, data):
		"""A path M x y, then H to the end of a level and V to the next, as (height, ticks)."""
		moves = re.findall(r"([MHV])(-?[\d.]+)(?: (-?[\d.]+))?", data)
		same(what + " begins", ("M", 0), (moves[0][0], self.tick(what, moves[0][1])))
		height, at, runs = number(moves[0][2]), 0, []
		for move, value, _ in moves[1:]:
			if move == "V":
				height = number(value)
				continue
			end = self.tick(what, value)
			runs.append((height, end - at))
			at = end
		return runs

	def check_traces(self):
		for trace in of_class(self.root, "trace"):
			name = trace.get("data-trace")
			signal = next(signal for signal in self.plan.signals if signal.name == name)
			pins = self.plan.pins[name][self.first:self.first + self.type.cells]
			levels = [(not pin if signal.active_low else bool(pin)) for pin in pins]
			runs = self.trace_runs(name, of_class(trace, "trace-line")[0].get("d"))
			heights = {height for height, _ in runs}
			top = min(heights)
			same(name + " ticks", [ticks for _, ticks in pairs(levels, self.ticks)], [ticks for _, ticks in runs])
			if len(heights) == 2:
				same(name + " levels", [level for level, _ in pairs(levels, self.ticks)], [height == top for height, _ in runs])
			cell = 0
			for rectangle, (level, _) in zip(of_class(trace, "run"), pairs(levels, self.ticks)):
				same(name + " data-level", str(int(level)), rectangle.get("data-level"))
				cell = self.check_run(name, rectangle, cell)
			same(name + " runs", self.type.cells, cell)
		same("traces", [signal.name for signal in self.plan.signals], [trace.get("data-trace") for trace in of_class(self.root, "trace")])

	def check_regions(self):
		cell = 0
		for rectangle, region in zip(of_class(self.root, "region"), self.report["regions"]):
			same("region", region["name"], rectangle.get("data-region"))
			same("region's us", Fraction(str(region["us"])), Fraction(rectangle.get("data-us")))
			same("region's start", Fraction(str(region["start_us"])), Fraction(rectangle.get("data-start-us")))
			same("region's ticks", region["ticks"], rectangle.get("data-ticks"))
			cell = self.check_run("region " + region["name"], rectangle, cell)
		same("regions", self.type.cells, cell)

	def check_stretched(self):
		found = set()
		for rectangle in of_class(self.root, "stretched"):
			cell = int(rectangle.get("data-cell"))
			end = self.check_run("stretched", rectangle, cell)
			found.update(range(cell, end))
		same("stretched cells", set(self.type.stretched), found)

	def check_composite(self):
		composite = of_class(self.root, "composite")
		same("composite", any(signal.role == "composite sync" for signal in self.plan.signals), len(composite) == 1)
		if not composite:
			return
		kinds = [kind_of(self.plan, self.plan.asserted, self.first + cell) for cell in range(self.type.cells)]
		cell = 0
		for rectangle, (kind, _) in zip(of_class(composite[0], "run"), pairs(kinds, self.ticks)):
			same("composite kind", kind, rectangle.get("data-kind"))
			cell = self.check_run("composite", rectangle, cell)
		same("composite runs", self.type.cells, cell)

	def check(self):
		self.check_traces()
		self.check_regions()
		self.check_stretched()
		self.check_composite()


def asserts(plan, levels, role, cell):
	return any(signal.role == role and levels[signal.name][cell] for signal in plan.signals)


def kind_of(plan, levels, cell):
	"""What a cell shows: stretch apart."""
	if asserts(plan, levels, "composite sync", cell) or asserts(plan, levels, "horizontal sync", cell):
		return "sync"
	if asserts(plan, levels, "vertical sync", cell):
		return "vertical"
	if asserts(plan, levels, "burst gate", cell):
		return "burst"
	if not any(signal.role == "blanking" for signal in plan.signals):
		return "other"
	return "blanking" if asserts(plan, levels, "blanking", cell) else "picture"


def frame_kind(plan, cell):
	return "stretch" if asserts(plan, plan.pins, "stretch", cell) else kind_of(plan, plan.pins, cell)


def rectangles_of(data):
	"""Rectangles M x y H x2 V y2 H x z, as fractions."""
	for part in re.findall(r"M([\d.]+) ([\d.]+)H([\d.]+)V([\d.]+)H([\d.]+)z", data):
		left, top, right, bottom, back = map(Fraction, part)
		same("rectangle closes", left, back)
		yield left, top, right, bottom


class Frame:
	"""Rows of the picture: lines of the plan, or two of half the longest's cells."""

	def __init__(self, plan):
		self.plan = plan
		self.widest = max(line.cells for line, _, _ in plan.lines)
		self.rows, self.pictures, number = [], [], 0
		while number < len(plan.lines):
			line, _, first = plan.lines[number]
			cells = line.cells
			if 2 * cells == self.widest and number + 1 < len(plan.lines) and 2 * plan.lines[number + 1][0].cells == self.widest:
				cells, number = self.widest, number + 1
			self.rows.append([frame_kind(plan, first + cell) for cell in range(cells)])
			self.pictures.append([cell for cell in range(cells) if kind_of(plan, plan.pins, first + cell) == "picture"])
			number += 1

	def cells_of(self, field):
		"""The picture of a field as a mapping of places to kinds; the corner of the plot, a cell's width, the rows' edges."""
		found, edges = {}, set()
		for kind in KINDS:
			for group in of_class(field, "hue-" + kind):
				for rectangle in rectangles_of(group.find(SVG + "path").get("d")):
					found.setdefault(kind, []).append(rectangle)
					edges.update((rectangle[1], rectangle[3]))
		return found, edges

	def check_field(self, field, rows):
		"""Every cell of the rows is drawn once, in its kind: rows of equal height from top to bottom."""
		found, edges = self.cells_of(field)
		left = min(rectangle[0] for rectangles in found.values() for rectangle in rectangles)
		right = max(rectangle[2] for rectangles in found.values() for rectangle in rectangles)
		width, height = (right - left) / self.widest, (max(edges) - min(edges)) / len(rows)
		drawn = [[None] * len(row) for row in rows]
		for kind, rectangles in found.items():
			for x1, y1, x2, y2 in rectangles:
				for row in range(self.index("row", y1 - min(edges), height), self.index("row", y2 - min(edges), height)):
					for cell in range(self.index("cell", x1 - left, width), self.index("cell", x2 - left, width)):
						same(f"row {row} cell {cell}", None, drawn[row][cell])
						drawn[row][cell] = kind
		for index, (wanted, seen) in enumerate(zip(rows, drawn)):
			same(f"row {index}", wanted, seen)

	@staticmethod
	def index(what, distance, size):
		"""A place to the nearest; lengths are rounded to thousandths of a pixel."""
		index = round(distance / size)
		if abs(distance - index * size) > Fraction(1, 500):
			raise Differs(f"{what}: {float(distance)} is no multiple of {float(size)}")
		return index

	@staticmethod
	def check_box(field, rows):
		"""Where the picture is, stretched cells in it included."""
		boxes = of_class(field, "box")
		columns = [cell for row in rows for cell in row]
		same("boxes", int(bool(columns)), len(boxes))
		if boxes:
			same("box", (min(columns), max(columns) + 1 - min(columns), sum(bool(row) for row in rows)),
				tuple(int(boxes[0].get(name)) for name in ("data-cell", "data-cells", "data-rows")))

	def check(self, root):
		fields = of_class(root, "field")
		starts = [0]
		if len(fields) == 2:
			# The second field begins with the rows without picture around the second vertical interval.
			starts.append(next(row for row in range(len(self.rows) // 3, len(self.rows)) if not self.pictures[row]))
		for field, start, end in zip(fields, starts, starts[1:] + [len(self.rows)]):
			self.check_field(field, self.rows[start:end])
			self.check_box(field, self.pictures[start:end])


def check_plan(program, path):
	plan = oracle_plan.plan_of_file(path)
	report = json.loads(run(program, "check", "--json", path))
	names = {line.name for line, _, _ in plan.lines}
	pictures = 0
	for name in sorted(names):
		Line(program, path, plan, report, name).check()
		pictures += 1
	Frame(plan).check(draw(program, "frame", path))
	return pictures + 1


def main(program, paths):
	pictures = failures = 0
	for path in paths:
		try:
			pictures += check_plan(program, path)
		except Differs as difference:
			failures += 1
			print(f"{path}: {difference}")
	print(f"{pictures} pictures read back")
	return 1 if failures or not pictures else 0


if __name__ == "__main__":
	sys.exit(main(sys.argv[1], sys.argv[2:]))
