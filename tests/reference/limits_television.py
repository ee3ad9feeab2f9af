"""Frames of composite sync, half line by half line, with the counts and places that standards of television have."""

from limits_plan import painted


class Geometry:
	"""Widths and places in cells. Places are counted from 0H; `half` is where the second half of a line begins."""

	def __init__(self, line, half, sync, equalising, broad, picture, front_porch, burst=None):
		"""broad: width, or None if a serration of `sync` cells is to be left; picture: where it starts; burst: (start, length)"""
		self.line, self.half, self.sync, self.equalising, self.broad = line, half, sync, equalising, broad
		self.picture, self.front_porch, self.burst = picture, front_porch, burst


class System:
	"""Which half lines have which pulses, and which lines have picture and burst. Lines are numbered from 1, half lines from 0."""

	def __init__(self, lines, blocks, counts, whole, early, late):
		"""blocks: half lines of the first pre-equalising pulses; counts: of pulses in a block; whole: ranges of lines with
		picture; early, late: lines with picture in their first, second half."""
		self.lines, self.early, self.late = lines, early, late
		self.whole = {line for first, last in whole for line in range(first, last + 1)}
		self.pulses = {}
		for first in blocks:
			half = first
			for kind, count in zip(("equalising", "broad", "equalising"), counts):
				for _ in range(count):
					self.pulses[half % (2 * lines)] = kind
					half += 1

	def pulse(self, half):
		return self.pulses.get(half) or (None if half % 2 else "sync")


# SMPTE 170M-2004 figure 7: lines 1-3, 4-6, 7-9 and from the middle of 263; picture 21-262, half of 263, half of 283, 284-525.
SYSTEM_525 = System(525, (0, 525), (6, 6, 6), ((21, 262), (284, 525)), {263}, {283})
BURST_525 = [line for line in range(1, 526) if not (1 <= line <= 9 or 264 <= line <= 272)]

# BT.1700 part B figure 3 and BT.470-6 table 1-2 l, m, n: field 1's first broad pulse at line 1's 0H, field 2's amid line 313, five
# pulses of each kind; picture from half of line 23 and from 336.
SYSTEM_625 = System(625, (1245, 620), (5, 5, 5), ((24, 310), (336, 622)), {623}, {23})


def without(lines, *pauses):
	"""Lines 1 to `lines` but for those from `first` to `last` of each pause, which may go beyond the frame's last line."""
	quiet = {(line - 1) % lines + 1 for first, last in pauses for line in range(first, last + (lines if last < first else 0) + 1)}
	return [line for line in range(1, lines + 1) if line not in quiet]


def whole_line(system, geometry, number, with_burst, blanked=()):
	"""The cells of a line from its 0H, and whether a pulse is in its middle."""
	width = {"sync": geometry.sync, "equalising": geometry.equalising}
	cells = (frozenset(("blank",)),) * geometry.line
	ends = (geometry.half, geometry.line)
	for half, (first, end) in enumerate(zip((0, geometry.half), ends)):
		kind = system.pulse(2 * (number - 1) + half)
		if kind:
			pulse = width.get(kind) or geometry.broad or end - first - geometry.sync
			cells = painted(cells, "sync", first, first + pulse)
	if with_burst:
		cells = painted(cells, "burst", geometry.burst[0], sum(geometry.burst))
	if number in system.whole:
		cells = painted(cells, "blank", geometry.picture, geometry.line - geometry.front_porch, False)
	elif number in system.early:
		cells = painted(cells, "blank", geometry.picture, geometry.half - geometry.front_porch, False)
	elif number in system.late:
		cells = painted(cells, "blank", geometry.half, geometry.line - geometry.front_porch, False)
	return cells, system.pulse(2 * number - 1) is not None


def frame_of(system, geometry, burst_lines=(), other=None):
	"""Plan lines: whole ones, and half ones wherever a pulse begins amid a line. other: geometries of single lines."""
	bursts, kept, lines = set(burst_lines), {}, []
	for number in range(1, system.lines + 1):
		shape = (other or {}).get(number, geometry)
		picture = [number in lines for lines in (system.whole, system.early, system.late)]
		key = (shape, *(system.pulse(2 * number - 2 + half) for half in (0, 1)), number in bursts, *picture)
		if key not in kept:
			cells, is_cut = whole_line(system, shape, number, number in bursts)
			kept[key] = [cells[:shape.half], cells[shape.half:]] if is_cut else [cells]
		lines += kept[key]
	return lines
