#!/usr/bin/python3
"""Measures the pins of boards that are meant to drive monochrome televisions.

	measured_television.py interlaced PLAN IMAGES               a whole 525-line frame of two fields, at 15,750 Hz
	measured_television.py 525|625 PLAN IMAGES [SET BANK]       a board without half lines: its line only

Prints what was found, and fails when it is not as the standards have it:
    S170  SMPTE 170M-2004, table 3, figure 7 (also Rec. ITU-R BT.1700 (2005), annex 2)
    B470  Rec. ITU-R BT.470-6 (1998), annex 1, tables 1, 1-1 and 1-2: system M without colour, and B, G
    R170  EIA RS-170 (1957), in parts of a line H or a field V: from memory

Sync is low while asserted, as the video signal has it. The level that the blanking pin has for more of the time is picture.
"""

import sys
from bisect import bisect
from collections import Counter
from fractions import Fraction

from measured_board import Board, Findings

LINE_525 = 15750  # B470 table 1, 47 CFR 73.682(a)(6): for monochrome
LINE_525_COLOUR = Fraction(4_500_000, 286)  # S170 11.2
LINE_625 = 15625  # B470 table 1
LIMITS = {
	"equalising pulse": ("2.20", "2.40"),  # S170 table 3, B470 p: 2.30 +- 0.10
	"serration": ("4.60", "4.80"),  # S170 table 3, B470 r: 4.70 +- 0.10
	"broad pulse": ("27.05", "27.15"),  # B470 q: 27.1, nominal only: here to its last digit
	"sync 525": ("4.19", "5.71"),  # B470 d without colour
	"sync 625": ("4.5", "4.9"),  # B470 d: 4.7 +- 0.2
	"front porch 525": ("1.27", "2.54"),  # B470 c without colour
	"sync to picture 525": ("8.9", "10.3"),  # B470 b without colour
	"line blanking 525": ("10.2", "11.4"),  # B470 a without colour
}
# R170, from memory. Equalising pulses and the front porch are limited on one side.
FRACTIONS = {
	"line sync, H": ("0.070", "0.080"),
	"front porch, H": ("0.02", "1"),
	"line blanking, H": ("0.165", "0.180"),
	"equalising pulse, H": ("0", "0.04"),
	"serration, H": ("0.06", "0.08"),
	"field blanking, V": ("0.07", "0.08"),
}
FIELD_PULSES = 6  # equalising, broad, equalising: S170 13.3, table 3, figure 7
# Broad pulses, and nothing else, are low for longer than a quarter of a line.
BROAD_US = 16


def limits(what):
	return tuple(Fraction(limit) for limit in LIMITS[what])


class Pulses:
	"""Low runs of sync in microseconds: when each begins (from the first), how long it is, and whether it is broad."""

	def __init__(self, trace):
		runs = [(first, ticks) for first, ticks, level in trace.runs("sync") if level == 0]
		self.starts = [trace.microseconds(first) for first, _ in runs]
		self.widths = [trace.microseconds(ticks) for _, ticks in runs]
		self.broad = [width > BROAD_US for width in self.widths]

	def distances(self):
		return [after - before for before, after in zip(self.starts, self.starts[1:])]

	def usual_distance(self):
		"""The commonest distance of two pulses: a line, where most lines have one."""
		return next((distance for distance, _ in Counter(self.distances()).most_common(1)), None)

	def blocks(self):
		"""The places at which runs of broad pulses begin, the first of them seen whole."""
		return [place for place in range(1, len(self.broad)) if self.broad[place] and not self.broad[place - 1]]


def is_narrow(width):
	"""Nearer to an equalising pulse than to a line's sync."""
	return width < Fraction("3.5")


class Field:
	"""The pulses of a field from its first equalising pulse to the last line's sync."""

	def __init__(self, pulses, place, line):
		self.line = line
		self.first = place
		while self.first > 0 and is_narrow(pulses.widths[self.first - 1]):
			self.first -= 1
		self.broad_first = place
		self.before = place - self.first
		self.broad_end = self.run_end(pulses, place, lambda at: pulses.broad[at])
		self.after_end = self.run_end(pulses, self.broad_end, lambda at: is_narrow(pulses.widths[at]))
		self.end = self.run_end(pulses, self.after_end, lambda at: not is_narrow(pulses.widths[at]) and not pulses.broad[at])
		self.start = pulses.starts[self.first]
		self.gap = self.start - pulses.starts[self.first - 1] if self.first else None
		self.counts = (self.before, self.broad_end - place, self.after_end - self.broad_end)

	@staticmethod
	def run_end(pulses, place, belongs):
		while place < len(pulses.starts) and belongs(place):
			place += 1
		return place

	def in_lines(self, time):
		return (time - self.start) / self.line


def lines_apart(pulses, first, last, line):
	return [(after - before) / line for before, after in zip(pulses.starts[first:last], pulses.starts[first + 1:last + 1])]


def measure_block(findings, which, pulses, field, kept):
	findings.note(field.counts == (FIELD_PULSES,) * 3,
		f"{which}: {field.counts[0]} equalising, {field.counts[1]} broad, {field.counts[2]} equalising pulses")
	equalising = pulses.widths[field.first:field.broad_first] + pulses.widths[field.broad_end:field.after_end]
	broad = pulses.widths[field.broad_first:field.broad_end]
	findings.within(f"{which}: equalising pulse", equalising, *limits("equalising pulse"))
	findings.within(f"{which}: broad pulse", broad, *limits("broad pulse"))
	ends = [start + width for start, width in zip(pulses.starts, pulses.widths)]
	serrations = [pulses.starts[at + 1] - ends[at] for at in range(field.broad_first, field.broad_end)]
	findings.within(f"{which}: serration", serrations, *limits("serration"))
	kept["equalising pulse, H"] += equalising
	kept["serration, H"] += serrations
	findings.each(f"{which}: pulses, lines apart", lines_apart(pulses, field.first, field.after_end - 1, field.line), Fraction(1, 2))


def measure_syncs(findings, which, pulses, field, first_line, count):
	"""The line syncs that follow the block: the first one's place in lines from the first equalising pulse, and their number."""
	first = field.in_lines(pulses.starts[field.after_end])
	findings.each(f"{which}: first line sync, lines after the first pulse", [first], first_line)
	findings.each(f"{which}: line syncs", [field.end - field.after_end], count)
	findings.each(f"{which}: lines", lines_apart(pulses, field.after_end, field.end - 1, field.line), 1)
	findings.within(f"{which}: line sync", pulses.widths[field.after_end:field.end], *limits("sync 525"))


def visible_runs(trace):
	shown = 1 - trace.rarer_level("blank")
	return [(trace.microseconds(first), trace.microseconds(first + ticks))
		for first, ticks, level in trace.runs("blank") if level == shown]


def measure_blanking(findings, which, visible, field, picture, kept):
	"""Field blanking, from the picture's end before the field; `picture` are limits of where it ends, in us after line 20."""
	before = [end for _, end in visible if end <= field.start]
	begins = [first for first, _ in visible if first >= field.start]
	if not before or not begins:
		findings.note(False, f"{which}: no picture beside the field's blanking")
		return
	findings.within(f"{which}: blanking before the first pulse", [field.start - before[-1]], *limits("front porch 525"))
	findings.within(f"{which}: picture, after 20 lines", [begins[0] - field.start - 20 * field.line], *picture)
	low, high = limits("line blanking 525")
	findings.within(f"{which}: field blanking", [begins[0] - before[-1]], 19 * field.line + low, 21 * field.line + high)
	kept["field blanking, V"].append((begins[0] - before[-1]) * 2 / 525)


def measure_line_blanking(findings, pulses, visible, field, kept):
	"""Around the syncs of lines that surely have picture before and after them."""
	whole = pulses.starts[field.after_end + 20:field.end - 2] if visible else []
	begins = [first for first, _ in visible]
	ends = [end for _, end in visible]
	porches = [start - ends[bisect(ends, start) - 1] for start in whole]
	pictures = [begins[bisect(begins, start)] - start for start in whole]
	findings.within("front porch", porches, *limits("front porch 525"))
	findings.within("sync to picture", pictures, *limits("sync to picture 525"))
	blankings = [sum(both) for both in zip(porches, pictures)]
	findings.within("line blanking", blankings, *limits("line blanking 525"))
	kept["front porch, H"] += porches
	kept["line blanking, H"] += blankings
	kept["line sync, H"] += pulses.widths[field.after_end:field.end]


def measure_fractions(findings, line, kept):
	for what, (low, high) in FRACTIONS.items():
		findings.within(what, [value / line for value in kept[what]], Fraction(low), Fraction(high), "")


def measure_interlaced(findings, trace):
	pulses = Pulses(trace)
	line = pulses.usual_distance()
	findings.each("lines a second", [10**6 / line] if line else [], LINE_525)
	fields = [Field(pulses, place, line) for place in pulses.blocks()]
	# Field 1's block begins a whole line after a line sync, field 2's half a line after one.
	fields = [field for field in fields if field.first > 0 and field.end < len(pulses.starts)]
	first = next((number for number, field in enumerate(fields) if field.gap == line), None)
	findings.note(first is not None, "a field begins a line after the last line's sync")
	if first is None or len(fields) < first + 3:
		findings.note(False, "two fields and the beginning of a third")
		return
	one, two, three = fields[first:first + 3]
	visible = visible_runs(trace)
	kept = {what: [] for what in FRACTIONS}
	# Lines 1 to 9 are the block, 10 to 263 have line syncs; the second block begins amid 263, ends amid 272, and 273 to 525 have
	# line syncs (S170 figure 7).
	# Field 1's picture begins after line 21's blanking, field 2's in the middle of line 283.
	for which, field, first_line, count, picture in (
			("field 1", one, 9, 254, limits("sync to picture 525")), ("field 2", two, Fraction(19, 2), 253, (0, 0))):
		measure_block(findings, which, pulses, field, kept)
		measure_syncs(findings, which, pulses, field, first_line, count)
		measure_blanking(findings, which, visible, field, picture, kept)
	findings.each("field 2 after field 1, lines", [one.in_lines(two.start)], Fraction(525, 2))
	findings.each("field 2, lines after line 263's sync", [two.gap / line], Fraction(1, 2))
	findings.each("frame, lines", [one.in_lines(three.start)], 525)
	findings.each("frames a second", [10**6 / (three.start - one.start)], Fraction(LINE_525, 525))
	measure_line_blanking(findings, pulses, visible, one, kept)
	measure_fractions(findings, line, kept)


def measure_line(findings, trace, system):
	"""No standard has frames without a half line; rate and sync of their lines are those of the standards."""
	pulses = Pulses(trace)
	rate = LINE_525_COLOUR if system == "525" else Fraction(LINE_625)
	findings.each("lines a second", [10**6 / apart for apart in pulses.distances()], rate)
	blocks = pulses.blocks()
	findings.each("frame, lines", [after - before for before, after in zip(blocks, blocks[1:])], int(system) // 2)
	findings.within("line sync", [width for width in pulses.widths if width < BROAD_US], *limits(f"sync {system}"))


MEASURES = {
	"interlaced": measure_interlaced,
	"525": lambda findings, trace: measure_line(findings, trace, "525"),
	"625": lambda findings, trace: measure_line(findings, trace, "625"),
}


def main(what, plan, images, name=None, bank="0"):
	findings = Findings()
	trace = Board(plan, images, name, int(bank)).trace()
	findings.note(trace.rarer_level("sync") == 0, "sync is low while asserted")
	MEASURES[what](findings, trace)
	return 1 if findings.failed else 0


if __name__ == "__main__":
	sys.exit(main(*sys.argv[1:]))
