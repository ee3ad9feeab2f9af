#!/usr/bin/python3
"""Has the program measure signals whose figures are published, and holds what it finds against them.

	limits_published.py FOLDER          plans and images are written there
	limits_published.py FOLDER wrong    one line of the SMPTE signal has a sync of 68 samples: must be seen in three items

	S170   SMPTE 170M-2004, clauses 11 to 13, tables 2 and 3, figure 7
	S244   SMPTE 244M-2003, 4.1, tables 4 and 5
	B1700  Rec. ITU-R BT.1700 (2005) part B
	B470   Rec. ITU-R BT.470-6 (1998) annex 1
	E3280  EBU Tech. 3280-E (April 1995), 1.2, figure 5
	B601   Rec. ITU-R BT.601-5 (1995) part A table 2, appendix 1
	DMT    VESA DMT 1.0 rev. 13 (a table extracted by machine; polarities from a table that a kernel generated from it)
"""

import os
import sys
from fractions import Fraction

from limits_catalogue import read_standards
from limits_judge import Broken, Judge, checked, proved, written
from limits_measure import Measurement
from limits_plan import Board, painted
from limits_television import BURST_525, SYSTEM_525, SYSTEM_625, Geometry, frame_of, without

TELEVISION = {"sync": ("low", 0), "blank": ("high", 0), "burst": ("high", 0)}
COMPONENT = {"sync": ("low", 0), "blank": ("high", 0)}
FOUR_FSC_525 = Fraction(315_000_000, 22)  # S170 11.1: 4 x 5 MHz x 63/88
SAMPLING = Fraction(13_500_000)  # B601
FSC_625 = Fraction("4433618.75")  # B470 2.11, B1700 5


def pulses_525(clock, sync, equalising, broad, serration):
	"""S170 figure 7 and table 3; widths in samples."""
	return {
		"field rate": Fraction(60000, 1001), "lines per field": Fraction(525, 2),  # S170 11.3
		"line rate": Fraction(4_500_000, 286),  # S170 11.2
		"pre-equalising pulses": 6, "pre-equalising lines": 3, "broad pulses": 6, "vertical sync length": 3,
		"post-equalising pulses": 6, "post-equalising lines": 3,
		"horizontal sync width": sync / clock, "equalising pulse width": equalising / clock,
		"broad pulse width": broad / clock, "serration width": serration / clock,
		"vertical blanking": 20, "picture top": 17, "picture height": Fraction(485, 2), "vertical centre": 17 + Fraction(485, 4),
	}


def pulses_625(clock, sync, equalising, broad, serration):
	"""B1700 figure 3, B470 table 1-2; widths in samples."""
	return {
		"line rate": 15625, "field rate": 50, "lines per field": Fraction(625, 2),  # B470 table 1
		"pre-equalising pulses": 5, "pre-equalising lines": Fraction(5, 2), "broad pulses": 5,
		"vertical sync length": Fraction(5, 2), "post-equalising pulses": 5, "post-equalising lines": Fraction(5, 2),
		"horizontal sync width": sync / clock, "equalising pulse width": equalising / clock,
		"broad pulse width": broad / clock, "serration width": serration / clock,
		"vertical blanking": 25, "picture top": Fraction(45, 2), "picture height": Fraction(575, 2),
		"vertical centre": Fraction(45, 2) + Fraction(575, 4),
	}


def along_the_line(clock, line, sync, front_porch, picture):
	width = line - front_porch - picture
	return {
		"front porch": front_porch / clock, "picture start": picture / clock,
		"horizontal blanking": (front_porch + picture) / clock, "back porch": (picture - sync) / clock, "picture width": width / clock,
		"horizontal centre": (picture + Fraction(width, 2)) / clock,
	}


def burst_of(clock, subcarrier, sync, start, length, picture):
	return {
		"subcarrier": subcarrier, "breezeway": (start - sync) / clock, "burst start": start / clock, "burst length": length / clock,
		"burst start in cycles": start * subcarrier / clock, "burst length in cycles": length * subcarrier / clock,
		"burst end to picture": (picture - start - length) / clock, "lines without burst": 9,
	}


# S244 tables 4 and 5, at mid level 080h: sync from sample 784.375 to 851.375, equalising pulses 33 samples wide, broad ones 388
# with 67 between, the second pulse of a line 455 samples after the first, 910 x 525 samples. Burst from 19 cycles after 0H on, for
# 9 (S170 table 2), four samples each. 1.5 us of front porch are 21.48 samples, 9.2 us to the end of blanking 131.73 (S170
# table 2): to the nearest sample.
SMPTE = {
	**pulses_525(FOUR_FSC_525, 67, 33, 388, 67), **along_the_line(FOUR_FSC_525, 910, 67, 21, 132),
	**burst_of(FOUR_FSC_525, Fraction(315_000_000, 88), 67, 19 * 4, 9 * 4, 132),
	"subcarrier cycles per line": Fraction(455, 2), "burst start in cycles": 19, "burst length in cycles": 9,
}
SMPTE_GEOMETRY = Geometry(910, 455, 67, 33, 388, 132, 21, (76, 36))

# 13.5 MHz has 864 ticks in 64 us. Nearest samples of B470 tables 1-1 and 1-2: sync 63.45, equalising pulse 31.725, broad pulse
# 368.55, burst after 75.6 samples for 30.375, front porch 20.25 to 24.3, blanking 157.95 to 162.
EBU = {
	**pulses_625(SAMPLING, 63, 32, 369, 63), **along_the_line(SAMPLING, 864, 63, 21, 141),
	**burst_of(SAMPLING, FSC_625, 63, 76, 30, 141), "subcarrier cycles per line": Fraction(1135, 4) + Fraction(1, 625),  # B1700 6
}
EBU_GEOMETRY = Geometry(864, 432, 63, 32, 369, 141, 21, (76, 30))

# B601 table 2 item 7 and appendix 1: 16 and 12 samples from the end of active to 0H, 122 and 132 from there to the next; pulses
# to the nearest sample of S170 table 3 and B470 table 1-2.
COMPONENT_525 = {**pulses_525(SAMPLING, 63, 31, 366, 63), **along_the_line(SAMPLING, 858, 63, 16, 122), "pixel clock": SAMPLING}
COMPONENT_625 = {**pulses_625(SAMPLING, 63, 32, 369, 63), **along_the_line(SAMPLING, 864, 63, 12, 132), "pixel clock": SAMPLING}


class Cases:
	def __init__(self, folder):
		self.folder = folder
		self.standards = read_standards()
		self.judge = Judge(self.standards)

	def answer(self, board, build):
		path = written(board, self.folder)
		return proved(path, os.path.join(self.folder, board.name)) if build else checked(path)

	def hold(self, board, published, missed=(), build=False, pauses=True):
		"""The program finds the published values, so does the measurement of limits_measure.py, and the studio's limits that are
		missed are these, the monitor's none. pauses: whether lines without burst are the standard's."""
		try:
			answer = self.answer(board, build)
		except (Broken, KeyError) as reason:
			self.judge.verdict(False, board.name, "an answer", repr(reason))
			return None
		pairs = {item: value if isinstance(value, tuple) else (Fraction(value),) * 2 for item, value in published.items()}
		predicted = Measurement(board, self.standards[board.standard].fields).measure()
		for item in self.standards[board.standard].limits:
			self.judge.same(f"{board.name}: {item} by the other measurement", pairs.get(item), predicted.get(item))
		self.judge.judge(board.name, board, answer, pairs, pauses=pauses)
		self.judge.missed(board.name, answer, "studio", missed)
		self.judge.missed(board.name, answer, "monitor", [])
		return answer

	def pauses(self, name, answer, at_a_line, amid_a_line, sequence=True):
		"""The standard's numbers of the lines without burst, of the fields that begin at a line and amid one; in either order."""
		wanted = [("at a line", [list(pause)]) for pause in at_a_line]
		wanted += [("half way through a line", [list(pause)]) for pause in amid_a_line]
		found = [(field["begins"], field["lines_without_burst"]) for field in answer.limits["fields"]] if answer else []
		self.judge.same(f"{name}: lines without burst by number", sorted(wanted), sorted(found))
		self.judge.same(f"{name}: pauses of the burst", sequence, answer and answer.limits["burst_pauses_kept"])


def rotated(frame, line, cells):
	"""The same frame begun at another line and cell."""
	return [part for part in [frame[line][cells:], *frame[line + 1:], *frame[:line], frame[line][:cells]] if part]


def smpte(cases):
	frame = frame_of(SYSTEM_525, SMPTE_GEOMETRY, BURST_525)
	common = {"subcarrier": "master / 4", "standard": "composite-525", "grade": "studio"}
	leads = {"sync": ("high", 3), "blank": ("low", -2), "burst": ("low", 40)}

	def board(name, signals=TELEVISION, lines=frame, **more):
		return Board(f"smpte-{name}", "315/22 MHz", signals, lines, **{**common, **more})

	for each, build in ((board("line-frame", form="line-frame"), True), (board("loop"), True),
			(board("line-frame-leads", leads, form="line-frame"), True), (board("loop-leads", leads), False),
			(board("from-picture", lines=rotated(frame, 100, 132)), False),
			(board("from-field-2", lines=rotated(frame, 272, 455 // 2)), False)):
		answer = cases.hold(each, SMPTE, build=build)
		cases.pauses(each.name, answer, [(1, 9)], [(264, 272)])
		if answer and not build:
			cases.judge.same(f"{each.name}: ticks of a frame", str(477_750), answer.frame["ticks"])
	# 0.044 Hz of 15,734.266 are 2.7964 ppm (47 CFR 73.682(a)(6)), 10 Hz of the subcarrier 2.7937 (S170 11.1).
	for ppm, missed in (("2.79", []), ("2.795", ["subcarrier"]), ("2.8", ["subcarrier", "line rate", "field rate"])):
		cases.hold(board(f"accuracy-{ppm.replace('.', '-')}", accuracy=f"{ppm} ppm"), SMPTE, missed)


def ebu(cases):
	common = {"subcarrier": "4433618.75 Hz", "standard": "composite-625", "grade": "studio"}

	def frame(*pauses, geometry=EBU_GEOMETRY):
		return frame_of(SYSTEM_625, geometry, without(625, *pauses))

	def board(name, lines, **more):
		return Board(f"ebu-{name}", "13.5 MHz", TELEVISION, lines, **{**common, **more})

	# B1700 figure 8: bursts are left out in 9 lines, other ones in each of four fields. A frame of two fields has the right number
	# of them but not the sequence, wherever it begins.
	one_two, lines = frame((623, 6), (310, 318)), "lines without burst"
	four = frame((622, 625), (1, 6), (310, 318)) + frame((623, 625), (1, 5), (311, 319))
	for name, each, at_a_line, amid_a_line, sequence in (
			("fields-1-2", one_two, [(623, 6)], [(310, 318)], False),
			("from-field-2", rotated(one_two, 325, 200), [(623, 6)], [(310, 318)], False),
			("fields-3-4", frame((622, 5), (311, 319)), [(622, 5)], [(311, 319)], False),
			("four-fields", four, [(623, 6), (622, 5)], [(310, 318), (311, 319)], True),
			("four-from-field-2", rotated(four, 325, 200), [(623, 6), (622, 5)], [(310, 318), (311, 319)], True),
			("four-from-field-3", rotated(four, 700, 0), [(623, 6), (622, 5)], [(310, 318), (311, 319)], True)):
		form = "line-frame" if name in ("fields-1-2", "four-fields") else "loop"
		answer = cases.hold(board(name, each, form=form), EBU, [] if sequence else [lines], form != "loop", sequence)
		cases.pauses(f"ebu-{name}", answer, at_a_line, amid_a_line, sequence)
	# Blanking of 12 us is at its limit, so that no inaccuracy is left; a sample less leaves 1 ppm, that of the line rate.
	narrow = {**EBU, **along_the_line(SAMPLING, 864, 63, 21, 140), **burst_of(SAMPLING, FSC_625, 63, 76, 30, 140)}
	shape = Geometry(864, 432, 63, 32, 369, 140, 21, (76, 30))
	narrow_frame = frame((622, 625), (1, 6), (310, 318), geometry=shape) + frame((623, 625), (1, 5), (311, 319), geometry=shape)
	for name, each, figures, ppm, missed in (("accuracy-1", narrow_frame, narrow, "1 ppm", []),
			("accuracy-1-01", narrow_frame, narrow, "1.01 ppm", ["line rate", "field rate"]),
			("accuracy-0-1", four, EBU, "0.1 ppm", ["horizontal blanking", "picture width"])):
		cases.hold(board(name, each, accuracy=ppm), figures, missed)


def four_fsc_625(cases):
	"""E3280 1.2: 1135 samples of four times the subcarrier, but 1137 in lines 313 and 625: 709,379 in a frame. Half a line is no
	whole number of cells of a sample, but of two cells. No line has the standard's 1135.0064 samples, on which rate and cycles
	depend; and two fields of whole samples are not alike."""
	bursts = without(625, (623, 6), (310, 318))
	common = {"subcarrier": "4433618.75 Hz", "standard": "composite-625", "grade": "studio"}
	for scale, geometry, long_line, serrations, ticks_of_fields, more in (
			(1, Geometry(1135, 568, 83, 42, 484, 184, 28, (99, 40)), Geometry(1137, 569, 83, 42, 484, 184, 28, (99, 40)), (83, 84),
				(354_689, 354_690), ["field rate"]),
			(2, Geometry(2270, 1135, 167, 83, 968, 370, 55, (199, 80)), Geometry(2274, 1139, 167, 83, 968, 370, 55, (199, 80)),
				(167, 167), (709_379, 709_379), [])):
		clock, shape = 4 * scale * FSC_625, geometry
		figures = {
			**pulses_625(clock, shape.sync, shape.equalising, shape.broad, 0),
			**along_the_line(clock, shape.line, shape.sync, shape.front_porch, shape.picture),
			**burst_of(clock, FSC_625, shape.sync, *shape.burst, shape.picture),
			"line rate": 4 * FSC_625 / 1135, "subcarrier cycles per line": Fraction(1135, 4),
			"serration width": tuple(width / clock for width in serrations),
			"field rate": tuple(clock / ticks for ticks in reversed(ticks_of_fields)),
		}
		frame = frame_of(SYSTEM_625, geometry, bursts, {313: long_line, 625: long_line})
		board = Board(f"ebu-{4 * scale}-fsc", f"{float(clock) / 10**6} MHz", TELEVISION, frame, **common)
		answer = cases.hold(board, figures, ["line rate", "subcarrier cycles per line", "lines without burst", *more], pauses=False)
		if answer:
			cases.judge.same(f"{board.name}: ticks of a frame", str(709_379 * scale), answer.frame["ticks"])


def component(cases):
	for name, system, geometry, published in (
			("component-525", SYSTEM_525, Geometry(858, 429, 63, 31, 366, 122, 16), COMPONENT_525),
			("component-625", SYSTEM_625, Geometry(864, 432, 63, 32, 369, 132, 12), COMPONENT_625)):
		for form, build in (("line-frame", True), ("loop", False)):
			cases.hold(Board(f"{name}-{form}", "13.5 MHz", COMPONENT, frame_of(system, geometry), form=form, standard=name,
				grade="studio"), published, build=build)


# DMT: MHz, dots and lines as active, front porch, sync, back porch; polarities; kHz and Hz as printed.
MODES = {
	"640x350-85": ("31.5", (640, 32, 64, 96), (350, 32, 3, 60), "+-", "37.861", "85.080"),
	"640x400-85": ("31.5", (640, 32, 64, 96), (400, 1, 3, 41), "-+", "37.861", "85.080"),
	"720x400-85": ("35.5", (720, 36, 72, 108), (400, 1, 3, 42), "-+", "37.927", "85.039"),
	"640x480-60": ("25.175", (640, 16, 96, 48), (480, 10, 2, 33), "--", "31.469", "59.940"),
	"640x480-72": ("31.5", (640, 24, 40, 128), (480, 9, 3, 28), "--", "37.861", "72.809"),
	"640x480-75": ("31.5", (640, 16, 64, 120), (480, 1, 3, 16), "--", "37.500", "75.000"),
	"640x480-85": ("36", (640, 56, 56, 80), (480, 1, 3, 25), "--", "43.269", "85.008"),
	"800x600-56": ("36", (800, 24, 72, 128), (600, 1, 2, 22), "++", "35.156", "56.250"),
	"800x600-60": ("40", (800, 40, 128, 88), (600, 1, 4, 23), "++", "37.879", "60.317"),
	"1024x768-60": ("65", (1024, 24, 136, 160), (768, 3, 6, 29), "--", "48.363", "60.004"),
}


def mode_frame(dots, lines, dots_of_a_cell):
	"""Lines and frame begin with their syncs."""
	active, before, sync, after = (count // dots_of_a_cell for count in dots)
	height, lines_before, lines_sync, lines_after = lines
	empty = painted((frozenset(("blank",)),) * (active + before + sync + after), "hsync", 0, sync)
	full = painted(empty, "blank", sync + after, sync + after + active, False)
	vertical = painted(empty, "vsync", 0, len(empty))
	return [vertical] * lines_sync + [empty] * lines_after + [full] * height + [empty] * lines_before


def mode_figures(clock, dots, lines, signs):
	width, height = sum(dots), sum(lines)
	return {
		"line rate": clock / width, "frame rate": clock / width / height, "lines per field": height, "pixel clock": clock,
		**along_the_line(clock, width, dots[2], dots[1], dots[2] + dots[3]),
		"horizontal sync width": dots[2] / clock, "vertical sync length": lines[2], "vertical front porch": lines[1],
		"vertical back porch": lines[3], "vertical blanking": height - lines[0], "picture top": lines[2] + lines[3],
		"picture height": lines[0], "vertical centre": lines[2] + lines[3] + Fraction(lines[0], 2),
		"horizontal sync polarity": int(signs[0] + "1"), "vertical sync polarity": int(signs[1] + "1"),
	}


def modes(cases):
	levels = {"+": "high", "-": "low"}
	for name, (megahertz, dots, lines, signs, kilohertz, hertz) in MODES.items():
		wide = 1 if name == "640x480-60" else 4
		signals = {"hsync": (levels[signs[0]], 0), "vsync": (levels[signs[1]], 0), "blank": ("high", 0)}
		figures = mode_figures(Fraction(megahertz) * 10**6, dots, lines, signs)
		for rate, printed, unit in (("line rate", kilohertz, 1000), ("frame rate", hertz, 1)):
			cases.judge.verdict(abs(figures[rate] / unit - Fraction(printed)) <= Fraction(1, 2000), f"{name}: {rate} as printed",
				printed, float(figures[rate]))
		frame = mode_frame(dots, lines, wide)
		common = {"cell": wide, "standard": f"dmt-{name}", "grade": "studio"}
		cases.hold(Board(f"dmt-{name}", f"{megahertz} MHz", signals, frame, form="line-frame", of_frame=("vsync",), **common),
			figures, build=name == "640x350-85")
		from_picture = rotated(frame, lines[2] + lines[3] + 7, (dots[2] + dots[3]) // wide)
		cases.hold(Board(f"dmt-{name}-from-picture", f"{megahertz} MHz", signals, from_picture, **common), figures)


def progressive(lines, geometry, bursts=True):
	"""Common practice: one field without half lines, burst in every line but those of vertical sync; picture from line 30 on."""
	empty = (frozenset(("blank",)),) * geometry.line
	vertical = painted(empty, "sync", 0, geometry.line - geometry.sync)
	border = painted(empty, "sync", 0, geometry.sync)
	if bursts:
		border = painted(border, "burst", geometry.burst[0], sum(geometry.burst))
	picture = painted(border, "blank", geometry.picture, geometry.line - geometry.front_porch, False)
	return [vertical] * 3 + [border] * 30 + [picture] * 200 + [border] * (lines - 233)


def common_practice(cases):
	"""No standard: from memory, counts derived. 910 and 912 samples of four times the subcarrier."""
	for samples, cycles, lines in ((910, Fraction(455, 2), 262), (912, Fraction(228), 262), (912, Fraction(228), 263)):
		clock, width = FOUR_FSC_525, samples - 50 - 220
		board = Board(f"common-{samples}-{lines}", "315/22 MHz", TELEVISION,
			progressive(lines, Geometry(samples, None, 67, None, None, 220, 50, (76, 36))), subcarrier="master / 4",
			standard="composite-525")
		figures = {
			"line rate": clock / samples, "field rate": clock / samples / lines, "lines per field": lines,
			"subcarrier cycles per line": cycles, **along_the_line(clock, samples, 67, 50, 220),
			**burst_of(clock, Fraction(315_000_000, 88), 67, 76, 36, 220), "lines without burst": 3,
			"horizontal sync width": 67 / clock, "broad pulse width": (samples - 67) / clock, "serration width": 67 / clock,
			"pre-equalising pulses": 0, "pre-equalising lines": 0, "broad pulses": 3, "vertical sync length": 3,
			"post-equalising pulses": 0, "post-equalising lines": 0,
			"vertical blanking": lines - 200, "picture top": 33, "picture height": 200, "vertical centre": 133,
		}
		figures["picture width"] = width / clock
		missed = ["lines per field", "front porch", "picture start", "horizontal blanking", "back porch", "picture width",
			"horizontal centre", "burst end to picture", "pre-equalising pulses", "pre-equalising lines", "broad pulses",
			"post-equalising pulses", "post-equalising lines", "broad pulse width", "vertical blanking", "picture top",
			"picture height", "vertical centre", "lines without burst", "field rate"]
		if samples == 912:
			missed += ["line rate", "subcarrier cycles per line"]
		answer = cases.hold(board, figures, missed, pauses=False)
		if answer and samples == 912:
			found = f"{answer.items['line rate']['low_rounded']:.2f}"
			cases.judge.same(f"{board.name}: line rate to two places", "15699.76", found)


def wrong(cases):
	frame = frame_of(SYSTEM_525, SMPTE_GEOMETRY, BURST_525)
	frame[100] = painted(frame[100], "sync", 67, 68)
	cases.hold(Board("wrong", "315/22 MHz", TELEVISION, frame, subcarrier="master / 4", standard="composite-525"), SMPTE)


def main(folder, *only):
	cases = Cases(folder)
	for part in [wrong] if only else [smpte, ebu, four_fsc_625, component, modes, common_practice]:
		part(cases)


if __name__ == "__main__":
	main(*sys.argv[1:])
