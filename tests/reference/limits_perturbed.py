#!/usr/bin/python3
"""Has the program measure random boards with single edits, and holds every value against limits_measure.py.

	limits_perturbed.py FOLDER FIRST COUNT      one board for each seed; plans are written to FOLDER

Boards differ in all that a plan can say: one or two fields, one or two syncs, cells of some ticks, stretched cells, leads, levels.
"""

import os
import random
import sys

from limits_catalogue import read_standards
from limits_judge import Broken, Judge, checked, proved, written
from limits_measure import Measurement
from limits_plan import Board, painted
from limits_television import Geometry, System, frame_of

MASTERS = ("315/22 MHz", "13.5 MHz", "12.096 MHz", "25.175 MHz", "8867237.5 Hz", "16 MHz")
# One in BUILT is built, and its images are measured.
BUILT = 12


def first_pulse(line):
	"""Cells of sync at the line's begin."""
	width = 0
	while width < len(line) and "sync" in line[width]:
		width += 1
	return width


def has(line, name):
	return any(name in signals for signals in line)


def extent(line, name, wanted=True):
	"""The first cell that has the signal, or not, and the one after the last."""
	cells = [place for place, signals in enumerate(line) if (name in signals) == wanted]
	return cells[0], cells[-1] + 1


class Shape:
	"""A random board before the edit."""

	def __init__(self, chance):
		self.chance = chance
		self.half = chance.randint(60, 110)
		self.line = 2 * self.half
		self.sync = chance.randint(round(0.067 * self.line), round(0.08 * self.line))
		self.interlaced = chance.random() < 0.6
		self.lines = chance.randrange(61, 121, 2) if self.interlaced else chance.randint(50, 90)
		self.composite = chance.random() < 0.75
		self.has_burst = self.composite and chance.random() < 0.7
		front, start = chance.randint(3, 6), self.sync + chance.randint(2, 4)
		burst = (start, chance.randint(6, 9)) if self.has_burst else None
		picture = start + chance.randint(12, 18)
		equalising = chance.randint(round(0.45 * self.sync), round(0.55 * self.sync))
		serration = self.sync + chance.randint(-1, 1)
		self.geometry = Geometry(self.line, self.half, self.sync, equalising, self.half - serration, picture, front, burst)
		self.frame = self.composite_frame() if self.composite else self.separate_frame()

	def composite_frame(self):
		chance = self.chance
		counts = chance.choice(((6, 6, 6), (5, 5, 5), (4, 6, 6), (6, 5, 4)))
		self.counts = counts
		if not self.interlaced and chance.random() < 0.3:
			return self.plain_frame()
		blanked = sum(counts) // 2 + chance.randint(2, 6)
		first = chance.choice((0, 2 * self.lines - counts[0]))
		blocks = (first, (first + self.lines) % (2 * self.lines)) if self.interlaced else (first,)
		system = System(self.lines, blocks, counts, (), {}, {})
		self.place_pictures(system, blocks, blanked)
		bursts = [line for line in range(1, self.lines + 1) if self.has_burst and system.pulse(2 * line - 2) == "sync"]
		return frame_of(system, self.geometry, bursts)

	def place_pictures(self, system, blocks, blanked):
		lines = self.lines
		system.whole, system.early, system.late = set(range(1, lines + 1)), set(), set()
		for first in blocks:
			begin = first // 2 + 1
			system.whole -= {(line - 1) % lines + 1 for line in range(begin, begin + blanked + first % 2)}
			if first % 2:
				system.early.add(begin)
				system.late.add((begin + blanked - 1) % lines + 1)

	def plain_frame(self):
		"""No half lines: three lines of sync with serrations at line rate."""
		shape, frame = self.geometry, []
		empty = (frozenset(("blank",)),) * self.line
		border = painted(empty, "sync", 0, self.sync)
		if self.has_burst:
			border = painted(border, "burst", shape.burst[0], sum(shape.burst))
		full = painted(border, "blank", shape.picture, self.line - shape.front_porch, False)
		vertical = painted(empty, "sync", 0, self.line - self.sync)
		frame += [vertical] * 3 + [border] * self.chance.randint(3, 8)
		below = self.chance.randint(2, 6)
		return frame + [full] * (self.lines - len(frame) - below) + [border] * below

	def separate_frame(self):
		shape = self.geometry
		empty = painted((frozenset(("blank",)),) * self.line, "hsync", 0, self.sync)
		full = painted(empty, "blank", shape.picture, self.line - shape.front_porch, False)
		self.width = self.chance.randint(1, 4)
		above, below = self.width + self.chance.randint(2, 8), self.chance.randint(1, 5)
		if self.interlaced:
			# Field 2's vertical sync begins and ends amid lines.
			early, late = painted(empty, "vsync", 0, self.half), painted(empty, "vsync", self.half, self.line)
			between = [full] * ((self.lines - 1) // 2 - above - below) + [empty] * below
			first = [painted(empty, "vsync", 0, self.line)] * self.width
			second = [late, *first[1:], early]
			return first + [empty] * (above - self.width) + between + second + [empty] * (above - self.width) + between
		frame = [painted(empty, "vsync", 0, self.line)] * self.width + [empty] * (above - self.width)
		return frame + [full] * (self.lines - above - below) + [empty] * below


# ---- edits: each takes a shape and its frame, changes the frame, and says what it did, or nothing if there is no place for it


def places(frame, wanted):
	return [number for number, line in enumerate(frame) if wanted(line)]


def one_or_all(shape, frame, wanted, change):
	"""Changes one of the lines, or all of them; says which."""
	numbers = places(frame, wanted)
	if not numbers:
		return None
	if shape.chance.random() < 0.3:
		kept = {}
		for number in numbers:
			line = frame[number]
			frame[number] = kept.setdefault(line, change(line))
		return "all"
	number = shape.chance.choice(numbers)
	frame[number] = change(frame[number])
	return str(number)


def sync_name(shape):
	return "sync" if shape.composite else "hsync"


def is_full(shape):
	"""Lines with picture in both halves, that begin with sync."""
	def wanted(line):
		picture = sum("blank" not in signals for signals in line)
		return len(line) == shape.line and not has(line, "vsync") and picture > shape.half
	return wanted


def sync_wider(shape, frame):
	return one_or_all(shape, frame, is_full(shape), lambda line: painted(line, sync_name(shape), shape.sync, shape.sync + 1))


def sync_narrower(shape, frame):
	return one_or_all(shape, frame, is_full(shape), lambda line: painted(line, sync_name(shape), shape.sync - 1, shape.sync, False))


def moved_burst(begin, end):
	def edit(shape, frame):
		def change(line):
			first, after = extent(line, "burst")
			return painted(painted(line, "burst", first, after, False), "burst", first + begin, after + end)
		return one_or_all(shape, frame, lambda line: is_full(shape)(line) and has(line, "burst"), change)
	return edit


def burst_missing(shape, frame):
	return one_or_all(shape, frame, lambda line: is_full(shape)(line) and has(line, "burst"),
		lambda line: painted(line, "burst", 0, len(line), False))


def burst_too_many(shape, frame):
	"""In a line that should have none."""
	numbers = places(frame, lambda line: has(line, "sync") and not has(line, "burst")) if shape.has_burst else []
	if not numbers:
		return None
	number = shape.chance.choice(numbers)
	first, length = shape.geometry.burst
	frame[number] = painted(frame[number], "burst", first, first + length)
	return str(number)


def blocks_of(shape, frame):
	"""Numbers of the lines that begin with an equalising pulse, and of those that begin with a broad one."""
	widths = [first_pulse(line) for line in frame]
	return [number for number, width in enumerate(widths) if 0 < width < 0.75 * shape.sync], [
		number for number, width in enumerate(widths) if width > shape.half // 2]


def pulse_missing(shape, frame):
	numbers, _ = blocks_of(shape, frame)
	if not numbers:
		return None
	number = shape.chance.choice(numbers)
	frame[number] = painted(frame[number], "sync", 0, len(frame[number]), False)
	return str(number)


def pulse_wider(shape, frame):
	numbers, _ = blocks_of(shape, frame)
	if not numbers:
		return None
	number = shape.chance.choice(numbers)
	width = first_pulse(frame[number])
	frame[number] = painted(frame[number], "sync", width - 1, width, False) if shape.chance.random() < 0.5 else \
		painted(frame[number], "sync", width, width + 1)
	return str(number)


def serration_other(shape, frame):
	_, numbers = blocks_of(shape, frame)
	if not numbers:
		return None
	number = shape.chance.choice(numbers)
	width = first_pulse(frame[number])
	frame[number] = painted(frame[number], "sync", width, width + 1) if shape.chance.random() < 0.5 else \
		painted(frame[number], "sync", width - 1, width, False)
	return str(number)


def broad_fewer(shape, frame):
	"""The first or the last of a block becomes an equalising pulse."""
	_, numbers = blocks_of(shape, frame)
	ends = [number for number in numbers if (number - 1 in numbers) != (number + 1 in numbers)]
	if not ends or shape.geometry.equalising is None:
		return None
	number = shape.chance.choice(ends)
	frame[number] = painted(frame[number], "sync", shape.geometry.equalising, len(frame[number]), False)
	return str(number)


def front_porch(cells):
	def edit(shape, frame):
		def change(line):
			end = extent(line, "blank", False)[1]
			return painted(line, "blank", min(end, end - cells), max(end, end - cells), cells > 0)
		return one_or_all(shape, frame, is_full(shape), change)
	return edit


def picture_start(cells):
	def edit(shape, frame):
		def change(line):
			start = extent(line, "blank", False)[0]
			return painted(line, "blank", min(start, start + cells), max(start, start + cells), cells > 0)
		return one_or_all(shape, frame, is_full(shape), change)
	return edit


def picture_missing(shape, frame):
	number = shape.chance.choice(places(frame, is_full(shape)))
	frame[number] = painted(frame[number], "blank", 0, shape.line)
	return str(number)


def line_added(shape, frame):
	numbers = places(frame, is_full(shape))
	number = shape.chance.choice(numbers)
	frame.insert(number, frame[number])
	return str(number)


def line_longer(shape, frame):
	return one_or_all(shape, frame, is_full(shape), lambda line: line + line[-1:])


def line_shorter(shape, frame):
	"""A cell of picture less."""
	return one_or_all(shape, frame, is_full(shape), lambda line: line[:shape.half + 5] + line[shape.half + 6:])


def vertical_longer(shape, frame):
	if shape.composite:
		return None
	frame[shape.width] = painted(frame[shape.width], "vsync", 0, shape.line)
	return str(shape.width)


def stray(narrow):
	"""In a line that has another after it, so that it is not next to equalising pulses."""
	def edit(shape, frame):
		numbers = places(frame, is_full(shape))
		number = shape.chance.choice([number for number in numbers if number + 1 in numbers])
		width = shape.sync // 2 if narrow else shape.sync
		first = shape.chance.randint(shape.geometry.picture + 2, int(1.3 * shape.half))
		frame[number] = painted(frame[number], sync_name(shape), first, first + width)
		return str(number)
	return edit


def nothing(shape, frame):
	return "nothing"


EDITS = {
	"nothing": nothing, "sync wider": sync_wider, "sync narrower": sync_narrower, "burst late": moved_burst(1, 1),
	"burst early": moved_burst(-1, -1), "burst longer": moved_burst(0, 1), "burst shorter": moved_burst(0, -1),
	"burst missing": burst_missing, "burst too many": burst_too_many, "equalising pulse missing": pulse_missing,
	"equalising pulse other": pulse_wider, "serration other": serration_other, "broad pulse fewer": broad_fewer,
	"front porch short": front_porch(-1), "front porch long": front_porch(1), "picture early": picture_start(-1),
	"picture late": picture_start(1), "picture missing": picture_missing, "line added": line_added, "line longer": line_longer,
	"line shorter": line_shorter, "vertical sync longer": vertical_longer,
	"stray narrow": stray(True), "stray like a sync": stray(False),
}


# ---- boards


def stretched(shape, frame):
	"""The same cells of each half line stretched."""
	first, count = shape.chance.randint(0, 20), shape.chance.randint(1, 6)
	kept = {}
	for number, line in enumerate(frame):
		if line not in kept:
			kept[line] = painted(line, "stretch", first, first + count)
			if len(line) > shape.half + 26:
				kept[line] = painted(kept[line], "stretch", shape.half + first, shape.half + first + count)
		frame[number] = kept[line]


def board_of(seed, standards):
	"""A board and what was done to it."""
	chance = random.Random(seed)
	shape = Shape(chance)
	frame = list(shape.frame)
	names = list(EDITS)
	done = None
	while done is None:
		what = names[seed % len(names)] if done is None and chance.random() < 0.7 else chance.choice(names)
		done = EDITS[what](shape, frame)
	more = {"cell": chance.randint(1, 9), "dot": 1}
	more["dot"] = chance.choice([dot for dot in range(1, 10) if more["cell"] % dot == 0])
	signals = ["sync"] if shape.composite else ["hsync", "vsync"]
	signals += ["blank"] + (["burst"] if shape.has_burst else [])
	if chance.random() < 0.3:
		stretched(shape, frame)
		more["stretch"] = chance.randint(1, more["cell"])
		signals.append("stretch")
	chance.shuffle(signals)
	if chance.random() < 0.6:
		more["subcarrier"] = chance.choice(("master / 4", "master / 3", "4433618.75 Hz", "3.58 MHz"))
	if chance.random() < 0.3:
		more["accuracy"] = chance.choice(("50 ppm", "0.5 ppm", "100 ppm", "7 ppm"))
	if chance.random() < 0.2:
		more["outputs"] = "direct"
	if chance.random() < 0.5:
		more["grade"] = chance.choice(("studio", "monitor"))
	modes = [name for name, standard in standards.items() if standard.fields == 1]
	others = [name for name, standard in standards.items() if standard.fields == 2]
	# A mode has no second field.
	if shape.composite == (chance.random() < 0.9) or shape.interlaced and not shape.composite:
		more["standard"] = chance.choice(others)
	else:
		more["standard"] = chance.choice(modes)
	levels = {name: (chance.choice(("high", "low")), chance.choice((0, 0, 1, -1, 5))) for name in signals}
	return Board(f"edit-{seed}", chance.choice(MASTERS), levels, frame, **more), f"{what} ({done})"


def measured(board, folder, seed):
	"""What the program measures; of images with two stages where lines begin alike."""
	if seed % BUILT:
		return checked(written(board, folder))
	if seed % (2 * BUILT) == 0:
		board.form = "line-frame"
		try:
			return proved(written(board, folder), os.path.join(folder, board.name))
		except Broken as reason:
			if "[look-ahead]" not in str(reason):
				raise
			board.form = "loop"
	return proved(written(board, folder), os.path.join(folder, board.name))


def main(folder, first, count):
	standards = read_standards()
	judge = Judge(standards)
	for seed in range(first, first + count):
		board, done = board_of(seed, standards)
		name = f"{seed}, {done}"
		try:
			answer = measured(board, folder, seed)
		except (Broken, KeyError) as reason:
			judge.verdict(False, name, "an answer", repr(reason))
			continue
		measurement = Measurement(board, standards[board.standard].fields)
		predicted = measurement.measure()
		# No board has so many lines that the pauses of two fields could be the standard's; only where lines are numbered does
		# that matter.
		pauses = None if len(measurement.broad_first) == 1 else not measurement.begins_at_a_line()
		judge.judge(name, board, answer, predicted, measurement.readings, pauses, *measurement.stray_ticks[:1])
		judge.judge_places(name, board, answer, measurement.begins)


if __name__ == "__main__":
	main(sys.argv[1], int(sys.argv[2]), int(sys.argv[3]))
