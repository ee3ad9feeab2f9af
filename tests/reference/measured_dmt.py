#!/usr/bin/python3
"""Measures the pins of a board that is meant to drive a 640 x 480 monitor at 60 Hz.

	measured_dmt.py PLAN IMAGES

Prints what was found, and fails when it is not as VESA DMT 1.0 rev. 13 has it for DMT ID 04h. That page counts 8 dots and 8 lines
of border on each side; here they are part of the porches, as is usual. Of vertical sync it has the number of lines; where in a
line its edges are is left open here, so vertical porches are measured in whole lines.
"""

import sys
from bisect import bisect

from measured_board import Board, Findings

DOTS_PER_LINE = 800
SYNC_DOTS, BACK_PORCH_DOTS, ACTIVE_DOTS, FRONT_PORCH_DOTS = 96, 48, 640, 16
LINES_PER_FRAME = 525
SYNC_LINES, BACK_PORCH_LINES, ACTIVE_LINES, FRONT_PORCH_LINES = 2, 33, 480, 10
LINE_KHZ, FRAME_HZ = 31.469, 59.940  # as printed, to three places
SYNC_LEVEL = 0  # both syncs are negative


def in_dots(trace, name, level):
	"""(first dot, dots) of each run at that level."""
	dot = trace.clock.dot
	return [(first // dot, ticks // dot) for first, ticks, found in trace.runs(name) if found == level]


def distances(places):
	return [after - before for before, after in zip(places, places[1:])]


def in_lines(dots):
	return round(dots / DOTS_PER_LINE)


def measure_lines(findings, syncs, visible):
	starts = [first for first, _ in syncs]
	findings.each("line, dots", distances(starts), DOTS_PER_LINE)
	findings.each("horizontal sync, dots", [dots for _, dots in syncs], SYNC_DOTS)
	findings.each("active, dots", [dots for _, dots in visible], ACTIVE_DOTS)
	# Each visible stretch with the sync before it and the one after it, if both were seen whole.
	inside = [(first, first + dots, bisect(starts, first)) for first, dots in visible if starts[:1] < [first] < starts[-1:]]
	findings.each("horizontal back porch, dots", [first - sum(syncs[after - 1]) for first, _, after in inside], BACK_PORCH_DOTS)
	findings.each("horizontal front porch, dots", [starts[after] - end for _, end, after in inside], FRONT_PORCH_DOTS)


def measure_frames(findings, syncs, visible):
	starts = [first for first, _ in syncs]
	findings.each("frame, dots", distances(starts), LINES_PER_FRAME * DOTS_PER_LINE)
	findings.each("vertical sync, dots", [dots for _, dots in syncs], SYNC_LINES * DOTS_PER_LINE)
	# The active lines between two syncs, and between which places.
	fields = [(first + dots, [place for place, _ in visible if first < place < after], after)
		for (first, dots), after in zip(syncs, starts[1:])]
	findings.each("active, lines", [len(shown) for _, shown, _ in fields], ACTIVE_LINES)
	fields = [field for field in fields if field[1]]
	findings.each("active lines, dots apart", [apart for _, shown, _ in fields for apart in distances(shown)], DOTS_PER_LINE)
	findings.each("vertical back porch, lines", [in_lines(shown[0] - end) for end, shown, _ in fields], BACK_PORCH_LINES)
	findings.each("vertical front porch, lines", [in_lines(after - shown[-1]) - 1 for _, shown, after in fields], FRONT_PORCH_LINES)


def measure_rates(findings, trace, line_syncs, frame_syncs):
	"""From the distances found, over all of the trace."""
	for what, syncs, unit, printed in (("line", line_syncs, 1000, LINE_KHZ), ("frame", frame_syncs, 1, FRAME_HZ)):
		apart = distances([first for first, _ in syncs])
		rate = trace.clock.master / trace.clock.dot * len(apart) / sum(apart) / unit if apart else 0
		findings.note(abs(float(rate) - printed) <= 0.0005, f"{what} rate: {float(rate):.4f}, printed {printed:.3f}")


def main(plan, images):
	findings = Findings()
	trace = Board(plan, images).trace()
	for name in ("hsync", "vsync"):
		findings.note(trace.rarer_level(name) == SYNC_LEVEL, f"{name} is {'high' if trace.rarer_level(name) else 'low'}")
	line_syncs = in_dots(trace, "hsync", trace.rarer_level("hsync"))
	frame_syncs = in_dots(trace, "vsync", trace.rarer_level("vsync"))
	visible = in_dots(trace, "blank", 1 - trace.rarer_level("blank"))
	measure_lines(findings, line_syncs, visible)
	measure_frames(findings, frame_syncs, visible)
	measure_rates(findings, trace, line_syncs, frame_syncs)
	return 1 if findings.failed else 0


if __name__ == "__main__":
	sys.exit(main(*sys.argv[1:]))
