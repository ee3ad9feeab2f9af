"""Reads pictures of differences back: which line types are drawn, every edge of both sides, and every mark, to the tick.

	read_back_diff.py SCANLATCH OLD NEW [OLD NEW]…

What must be there comes from the second implementation of the plan language (tests/reference/oracle_plan.py). Prints a line for each
picture that differs, and how many line types and marks were read; fails if one differs or no mark was read.
"""

import subprocess
import sys
import xml.etree.ElementTree as ElementTree
from fractions import Fraction

import read_back
from read_back import Differs, of_class, same

MOST = 8
oracle_plan = read_back.oracle_plan


class Side:
	"""A line of one of the plans, and where its plot is."""

	def __init__(self, plan, number, left, width):
		self.plan = plan
		self.type, _, self.first = plan.lines[number]
		self.ticks = plan.cell_ticks[self.first:self.first + self.type.cells]
		self.left, self.width = left, width
		self.seconds = Fraction(sum(self.ticks)) / plan.clock.master

	def x(self, tick):
		return self.left + self.width * tick / sum(self.ticks)

	def levels(self, name):
		signal = next(signal for signal in self.plan.signals if signal.name == name)
		pins = self.plan.pins[name][self.first:self.first + self.type.cells]
		return [bool(pin) != signal.active_low for pin in pins]

	def edges(self, name):
		"""(begins, cell, tick) of each."""
		pins = self.plan.pins[name][self.first:self.first + self.type.cells]
		return [(bool(pins[cell]), cell, sum(self.ticks[:cell])) for cell in range(1, len(pins)) if bool(pins[cell]) != bool(pins[cell - 1])]


def near(what, wanted, found):
	"""Lengths are rounded to thousandths of a pixel."""
	if abs(wanted - found) > Fraction(1, 500):
		raise Differs(f"{what}: wanted {float(wanted)}, found {float(found)}")


def path_runs(side, name, group):
	data = of_class(group, "trace-line")[0].get("d")
	moves = read_back.re.findall(r"([MHV])(-?[\d.]+)(?: (-?[\d.]+))?", data)
	height, ends, heights = Fraction(moves[0][2]), [], []
	near(name + " begins", side.left, Fraction(moves[0][1]))
	for move, value, _ in moves[1:]:
		if move == "V":
			height = Fraction(value)
		else:
			ends.append(Fraction(value))
			heights.append(height)
	return ends, heights


def check_trace(side, name, group):
	runs = read_back.pairs(side.levels(name), side.ticks)
	ends, heights = path_runs(side, name, group)
	same(name + " runs", len(runs), len(ends))
	tick = 0
	for (_, ticks), end in zip(runs, ends):
		tick += ticks
		near(f"{name} edge at {tick}", side.x(tick), end)
	# The smaller height is the upper: the level 1.
	if len(set(heights)) == 2:
		same(name + " levels", [level for level, _ in runs], [height == min(heights) for height in heights])


def same_clock(old, now):
	return (old.clock.master, old.clock.cell) == (now.clock.master, now.clock.cell)


def end_of_mark(mark, what, place):
	found = mark.get(f"data-{place}cell"), mark.get(f"data-{place}tick")
	if found == (None, None):
		return None
	return what, int(found[0]), int(found[1])


def check_mark(old, now, mark, before, after):
	data = read_back.re.match(r"M([\d.]+) ([\d.]+)(?:L([\d.]+) ([\d.]+))?", mark.get("d"))
	if before and after:
		near("a mark's beginning", old.x(before[2]), Fraction(data.group(1)))
		near("a mark's end", now.x(after[2]), Fraction(data.group(3)))
		if same_clock(old.plan, now.plan):
			words = mark.find(read_back.SVG + "title").text.rsplit(": ", 1)[1]
			cells, ticks = after[1] - before[1], after[2] - before[2]
			count, what = (cells, "cell") if cells else (ticks, "tick")
			same("a mark's words", f"{count:+d} {what}{'s' if abs(count) != 1 else ''}", words)
	else:
		edge = side_x = old.x(before[2]) if before else now.x(after[2])
		near("a ring", edge - 7, Fraction(data.group(1)))
		same("a ring is of one edge", side_x, edge)


def check_marks(old, now, name, trace):
	before, after, count = old.edges(name), now.edges(name), 0
	alike = same_clock(old.plan, now.plan)
	for mark in of_class(trace, "moved"):
		what = mark.get("data-edge") == "begins"
		left, right = end_of_mark(mark, what, "old-"), end_of_mark(mark, what, "")
		if alike and left == right:
			raise Differs(f"{name}: {left} is marked, and is where it was")
		for edge, edges in ((left, before), (right, after)):
			if edge is not None and edge not in edges:
				raise Differs(f"{name}: there is no edge {edge}")
			if edge is not None:
				edges.remove(edge)
		check_mark(old, now, mark, left, right)
		count += 1
	if alike:
		same(name + " edges without a mark", before, after)
	return count


def check_plot(plans, plot):
	sides = []
	for plan, place in zip(plans, ("old", "new")):
		side = Side(plan, int(plot.get(f"data-{place}-line")), Fraction(plot.get("data-left")), Fraction(plot.get(f"data-{place}-width")))
		same("line type", side.type.name, plot.get(f"data-{place}"))
		same("ticks", sum(side.ticks), int(plot.get(f"data-{place}-ticks")))
		sides.append(side)
	old, now = sides
	near("widths are as times", old.width * now.seconds, now.width * old.seconds)
	marks = 0
	names = [[signal.name for signal in plan.signals] for plan in plans]
	same("traces", names[1] + [name for name in names[0] if name not in names[1]], [trace.get("data-trace") for trace in of_class(plot, "trace")])
	for trace in of_class(plot, "trace"):
		name = trace.get("data-trace")
		drawn = {group.get("data-side"): group for group in of_class(trace, "side")}
		for label, group in drawn.items():
			check_trace(old if label.startswith("old") else now, name, group)
		if set(drawn) == {"as before"}:
			same(name + " as before", *[read_back.pairs(side.levels(name), side.ticks) for side in (old, now)])
		if name in names[0] and name in names[1]:
			marks += check_marks(old, now, name, trace)
	return marks


def shown(plan, line):
	"""What a line type does, but for leads and polarity, which are signals'."""
	first = next(first for each, _, first in plan.lines if each.name == line)
	cells = next(each.cells for each, _, _ in plan.lines if each.name == line)
	asserted = [tuple(map(bool, plan.asserted[signal.name][first:first + cells])) for signal in plan.signals]
	return asserted, plan.cell_ticks[first:first + cells]


def differing(plans):
	"""Line types of one name that both frames have and that differ; but not what only took the name of another. Signals are the same in
	order, whatever their names."""
	names = [{line.name for line, _, _ in plan.lines} for plan in plans]
	signals = [[(signal.active_low, signal.lead) for signal in plan.signals] for plan in plans]
	everything = signals[0] != signals[1] or not same_clock(*plans)
	before = [(name, shown(plans[0], name)) for name in names[0]]
	renamed = {name for name in names[1] for other, lines in before if other != name and lines == shown(plans[1], name)}
	return {name for name in names[0] & names[1] if everything or shown(plans[0], name) != shown(plans[1], name)} - renamed


def check_pair(program, paths):
	result = subprocess.run([program, "diff", "--svg", *paths], capture_output=True, text=True)
	if result.returncode not in (0, 1):
		raise Differs(f"exit status {result.returncode}: {result.stderr}")
	root = ElementTree.fromstring(result.stdout)
	plans = [oracle_plan.plan_of_file(path) for path in paths]
	plots = of_class(root, "plot")
	wanted = differing(plans)
	found = {plot.get("data-new") for plot in plots if plot.get("data-old") == plot.get("data-new")}
	if len(wanted) <= MOST:
		same("line types", set(), wanted - found)
	return len(plots), sum(check_plot(plans, plot) for plot in plots)


def main(program, paths):
	plots = marks = failures = 0
	for pair in zip(paths[::2], paths[1::2]):
		try:
			read = check_pair(program, pair)
			plots, marks = plots + read[0], marks + read[1]
		except Differs as difference:
			failures += 1
			print(f"{' '.join(pair)}: {difference}")
	print(f"{plots} line types and {marks} marks read back")
	return 1 if failures or not marks else 0


if __name__ == "__main__":
	sys.exit(main(sys.argv[1], sys.argv[2:]))
