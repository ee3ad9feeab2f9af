"""Measures a timeline for the items of src/catalogue/limit_items.c, from their definitions there and in standards.h alone.

All is exact: ticks are whole, values fractions in seconds, hertz, lines, cycles and pulses. What the definitions leave open is
decided here as follows:

* Of the pulses of composite sync, a broad one is longer than a quarter of a line, an equalising one shorter than three quarters
  of the usual sync, and any other is a line's sync. A line is the distance of two pulses that takes the most of the time.
* A normal line begins with a line's sync, and a pulse of any kind comes a line after it.
* Equalising pulses go with broad ones, next to them or to others that do. A narrow pulse elsewhere, and the second sync of a line,
  are strays: nothing is measured by them.
* Lines are counted by pulses, half by half: a distance of two pulses is a whole number of half lines, the nearest.

Where a definition can be read in more than one way, all readings are measured, and any of them will do:

* What is measured beside a line's sync (porches, burst, picture): in every line that begins with a line's sync, but what has to do
  with picture only where picture is in the line's first half; or in normal lines alone, and only if both halves have picture.
* The picture's height: lines that have picture; or all from the first to the last that has. Vertical blanking: lines without
  picture from one 0V to the next; or all between the last picture before 0V and the first after it.
* The second half of a line begins amid it; or half a usual line after its 0H, and what is within 1/16 of a line of there counts for
  neither half. Lines may be longer than usual.
* A line without burst far from 0V: of the field that it is in; or of the nearest 0V.
"""

from bisect import bisect_left, bisect_right
from collections import Counter
from fractions import Fraction


class Runs:
	"""Runs of a timeline that goes round, numbered without end in both directions."""

	def __init__(self, runs, ticks):
		self.runs, self.ticks = runs, ticks
		self.starts = [start for start, _ in runs]

	def __len__(self):
		return len(self.runs)

	def shifted(self, number):
		lap, place = divmod(number, len(self.runs))
		return lap * self.ticks, self.runs[place]

	def start(self, number):
		laps, (start, _) = self.shifted(number)
		return laps + start

	def end(self, number):
		laps, (_, end) = self.shifted(number)
		return laps + end

	def width(self, number):
		return self.end(number) - self.start(number)

	def last_from(self, tick):
		"""The number of the last run that starts at the tick or before."""
		lap, tick = divmod(tick, self.ticks)
		return lap * len(self.runs) + bisect_right(self.starts, tick) - 1

	def first_from(self, tick):
		"""The number of the first run that starts at the tick or after."""
		lap, tick = divmod(tick, self.ticks)
		return lap * len(self.runs) + bisect_left(self.starts, tick)

	def covers(self, tick):
		return bool(self.runs) and tick < self.end(self.last_from(tick))


def complement(runs):
	"""The runs between the runs."""
	if not len(runs):
		return Runs([(0, runs.ticks)], runs.ticks)
	between = [(runs.end(number), runs.start(number + 1)) for number in range(len(runs))]
	return Runs(sorted((start % runs.ticks, start % runs.ticks + end - start) for start, end in between if end > start), runs.ticks)


SYNC, EQUALISING, BROAD = "sync", "equalising", "broad"


class Measurement:
	def __init__(self, board, fields):
		"""fields: of a frame, as the standard has it."""
		timeline = board.timeline()
		self.board, self.fields, self.ticks = board, fields, timeline.ticks
		runs = {name: Runs(timeline.runs[name], timeline.ticks) for name in timeline.runs}
		self.composite = "sync" in runs
		self.pulses = runs["sync" if self.composite else "hsync"]
		self.vertical = runs.get("vsync")
		self.blank, self.burst = runs.get("blank"), runs.get("burst")
		self.picture = complement(self.blank) if self.blank else None
		self.classify()
		self.find_fields()
		self.values = {}    # item to (lowest, highest)
		self.readings = {}  # item to other such pairs
		self.begins = {}    # item to a map from its values to the ticks at which they begin

	# ---- pulses, lines and fields

	def classify(self):
		pulses = self.pulses
		distances = [pulses.start(number + 1) - pulses.start(number) for number in range(len(pulses))]
		self.line = max(set(distances), key=lambda distance: distance * distances.count(distance))
		kinds = self.kinds_of_widths()
		narrow = {number for number in range(len(pulses)) if kinds[number] == EQUALISING and self.is_alone(number, kinds)}
		strays = narrow | self.second_syncs(kinds, narrow)
		kept = [number for number in range(len(pulses)) if number not in strays]
		self.stray_ticks = [pulses.start(number) for number in sorted(strays)]
		self.kinds = [kinds[number] for number in kept]
		self.pulses = pulses = Runs([pulses.runs[number] for number in kept], self.ticks)
		self.distances = [pulses.start(number + 1) - pulses.start(number) for number in range(len(pulses))]
		self.halves = [max(1, round(Fraction(2 * distance, self.line))) for distance in self.distances]
		self.half_at = [0]
		for halves in self.halves:
			self.half_at.append(self.half_at[-1] + halves)

	def kinds_of_widths(self):
		widths = [self.pulses.width(number) for number in range(len(self.pulses))]
		if not self.composite:
			return [SYNC] * len(widths)
		usual = Counter(width for width in widths if 4 * width <= self.line).most_common(1)[0][0]
		return [BROAD if 4 * width > self.line else EQUALISING if 4 * width < 3 * usual else SYNC for width in widths]

	@staticmethod
	def is_alone(number, kinds):
		"""Whether narrow pulses, from this one on in both directions, lead to no broad one."""
		for step in (1, -1):
			other = number
			while kinds[other % len(kinds)] == EQUALISING:
				other += step
			if kinds[other % len(kinds)] == BROAD:
				return False
		return True

	def second_syncs(self, kinds, narrow):
		"""Syncs that come too early after a line's."""
		count, last, found = len(kinds), None, set()
		for number in range(2 * count):
			if number % count in narrow:
				continue
			is_sync = kinds[number % count] == SYNC
			if is_sync and last is not None and 4 * (self.pulses.start(number) - last) < 3 * self.line:
				# The first lap finds out what the frame's last pulse is to its first.
				found |= {number - count} if number >= count else set()
			else:
				last = self.pulses.start(number) if is_sync else None
		return found

	def kind(self, number):
		return self.kinds[number % len(self.pulses)]

	def half(self, number):
		"""The place of a pulse in half lines."""
		lap, place = divmod(number, len(self.pulses))
		return lap * self.half_at[-1] + self.half_at[place]

	def place(self, tick):
		"""The place of a tick in half lines, exactly."""
		number = self.pulses.last_from(tick)
		since = Fraction(tick - self.pulses.start(number), self.pulses.start(number + 1) - self.pulses.start(number))
		return self.half(number) + since * (self.half(number + 1) - self.half(number))

	def find_fields(self):
		"""0V of each field in a frame of the plan: ticks, and with composite sync the numbers of the first broad pulses."""
		self.broad_first = [number for number in range(len(self.pulses))
			if self.kind(number) == BROAD and self.kind(number - 1) != BROAD]
		starts = [self.pulses.start(number) for number in self.broad_first] if self.composite else \
			self.vertical.starts if self.vertical else []
		self.zero = Runs([(start, start) for start in starts], self.ticks)

	def whole_lines(self):
		"""Numbers of the pulses at which normal lines begin."""
		return [number for number in range(len(self.pulses)) if self.kind(number) == SYNC and self.line_after(number) is not None]

	def line_after(self, number):
		"""The number of the pulse a line after one; None if there is none."""
		first = self.halves[number % len(self.halves)]
		if first == 2 or self.kind(number + 1) == SYNC:
			return number + 1
		return number + 2 if first == self.halves[(number + 1) % len(self.halves)] == 1 else None

	# ---- items

	def note(self, item, values):
		values = list(values)
		if values:
			self.values[item] = (Fraction(min(values)), Fraction(max(values)))

	def note_other(self, item, values):
		values = list(values)
		pair = (Fraction(min(values)), Fraction(max(values))) if values else None
		if pair != self.values.get(item) and pair not in self.readings.get(item, []):
			self.readings.setdefault(item, []).append(pair)

	def note_times(self, item, ticks):
		self.note(item, [value / self.board.master for value in ticks])

	def note_cycles(self, item, ticks):
		if self.board.subcarrier:
			self.note(item, [value * self.board.subcarrier / self.board.master for value in ticks])

	def measure(self):
		self.rates()
		self.syncs()
		self.bursts()
		self.pictures()
		self.vertical_pulses()
		self.vertical_pictures()
		self.lines_without_burst()
		self.polarities()
		return self.values

	def rates(self):
		board, pulses, zero = self.board, self.pulses, self.zero
		lengths = {pulses.start(number): pulses.start(self.line_after(number)) - pulses.start(number)
			for number in self.whole_lines()}
		self.note("line rate", [board.master / length for length in lengths.values()])
		self.note_begins("line rate", [(board.master / length, start) for start, length in lengths.items()])
		self.note_cycles("subcarrier cycles per line", lengths.values())
		self.note("pixel clock", [board.master / board.dot])
		if board.subcarrier:
			self.note("subcarrier", [board.subcarrier])
		fields = range(len(zero))
		self.note("field rate", [board.master / (zero.start(field + 1) - zero.start(field)) for field in fields])
		self.note("frame rate", [board.master / (zero.start(field + self.fields) - zero.start(field)) for field in fields])
		self.note("lines per field",
			[(self.place(zero.start(field + 1)) - self.place(zero.start(field))) / 2 for field in fields])

	def syncs(self):
		self.note_widths("horizontal sync width", [number for number in range(len(self.pulses)) if self.kind(number) == SYNC])

	def note_widths(self, item, numbers):
		widths = {self.pulses.start(number): self.pulses.width(number) for number in numbers}
		self.note_times(item, widths.values())
		self.note_begins(item, [(width / self.board.master, start) for start, width in widths.items()])

	def has_whole_picture(self, number):
		"""Whether a normal line begins with that pulse, and has picture in both halves."""
		if self.kind(number) != SYNC or self.line_after(number) is None or not self.blank:
			return False
		start, end = self.pulses.start(number), self.pulses.start(self.line_after(number))
		return self.has_picture(start, start + Fraction(7 * self.line, 16)) and \
			self.has_picture(start + Fraction(9 * self.line, 16), end)

	def note_both(self, item, ticks, others, begins):
		"""ticks, begins: by the pulse at which the line begins; others: the pulses that the second reading leaves."""
		self.note_times(item, ticks.values())
		self.note_other(item, [ticks[number] / self.board.master for number in ticks if number in others])
		self.note_begins(item, [(value / self.board.master, begins[number]) for number, value in ticks.items()])

	def note_cycles_of_both(self, item, ticks, others):
		if self.board.subcarrier:
			self.note_cycles(item, ticks.values())
			self.note_other(item,
				[ticks[number] * self.board.subcarrier / self.board.master for number in ticks if number in others])

	def note_begins(self, item, pairs):
		for value, tick in pairs:
			self.begins.setdefault(item, {}).setdefault(value, set()).add(tick % self.ticks)

	def bursts(self):
		"""Of the bursts in lines that begin with a line's sync: one in each."""
		if not self.burst:
			return
		pulses, burst = self.pulses, self.burst
		found = {}
		for number in range(len(burst)):
			line = pulses.last_from(burst.start(number))
			if self.kind(line) == SYNC:
				found[line % len(pulses)] = (line, number)
		starts = {key: burst.start(number) - pulses.start(line) for key, (line, number) in found.items()}
		lengths = {key: burst.width(number) for key, (_, number) in found.items()}
		normal = set(self.whole_lines())
		sync_starts, sync_ends = self.edges()
		burst_starts = {key: burst.start(number) for key, (_, number) in found.items()}
		self.note_both("breezeway", {key: burst.start(number) - pulses.end(line) for key, (line, number) in found.items()}, normal,
			sync_ends)
		self.note_both("burst start", starts, normal, sync_starts)
		self.note_cycles_of_both("burst start in cycles", starts, normal)
		self.note_both("burst length", lengths, normal, burst_starts)
		self.note_cycles_of_both("burst length in cycles", lengths, normal)
		pictures = dict(self.picture_starts()) if self.blank else {}
		self.note_both("burst end to picture",
			{key: pictures[key] - pulses.start(key) - starts[key] - lengths[key] for key in found if key in pictures},
			{key for key in normal if self.has_whole_picture(key)},
			{key: burst_starts[key] + lengths[key] for key in found})

	def edges(self):
		"""Of each pulse, by its number: where it begins and ends."""
		numbers = range(len(self.pulses))
		return {number: self.pulses.start(number) for number in numbers}, {number: self.pulses.end(number) for number in numbers}

	def picture_starts(self):
		"""(number, tick) of each line's sync and the end of its blanking, where it is in the first half of the line."""
		for number in range(len(self.pulses)):
			start = self.pulses.start(number)
			if self.kind(number) == SYNC and self.blank.covers(start):
				end = self.blank.end(self.blank.last_from(start))
				if end < self.pulses.start(number + 1) and 2 * (end - start) < self.line:
					yield number, end

	def front_porches(self):
		"""By the pulse that ends the porch and a normal line, where picture comes before it."""
		ends = {self.line_after(number) % len(self.pulses) for number in self.whole_lines()}
		for number in sorted(ends):
			start = self.pulses.start(number)
			if self.blank.covers(start):
				begin = self.blank.start(self.blank.last_from(start))
				if begin > self.pulses.start(number - 1):
					yield number, start - begin

	def pictures(self):
		if not self.blank:
			return
		pulses, blank = self.pulses, self.blank
		starts, porches = dict(self.picture_starts()), dict(self.front_porches())
		whole = {number for number in range(len(pulses)) if self.has_whole_picture(number)}
		after_whole = {self.line_after(number) % len(pulses) for number in whole}
		sync_starts, sync_ends = self.edges()
		blank_starts = {number: sync_starts[number] - porch for number, porch in porches.items()}
		self.note_both("picture start", {number: end - pulses.start(number) for number, end in starts.items()}, whole, sync_starts)
		self.note_both("back porch", {number: end - pulses.end(number) for number, end in starts.items()}, whole, sync_ends)
		self.note_both("front porch", porches, after_whole, blank_starts)
		self.note_both("horizontal blanking", {number: starts[number] - blank_starts[number]
			for number in starts if number in porches}, whole & after_whole, blank_starts)
		# Pictures of whole lines.
		ends = {number: end for number, end in starts.items() if self.halves[number] == 2}
		widths = {number: blank.start(blank.first_from(end)) - end for number, end in ends.items()}
		self.note_both("picture width", widths, whole, ends)
		self.note_both("horizontal centre",
			{number: end - pulses.start(number) + Fraction(widths[number], 2) for number, end in ends.items()}, whole, sync_starts)

	def vertical_pulses(self):
		pulses = self.pulses
		count = range(len(pulses))
		if not self.composite:
			if self.vertical:
				self.note("vertical sync length", [self.lines_of_vertical(number) for number in range(len(self.vertical))])
			return
		self.note_widths("equalising pulse width", [number for number in count if self.kind(number) == EQUALISING])
		broad = [number for number in count if self.kind(number) == BROAD]
		self.note_widths("broad pulse width", broad)
		self.note_begins("serration width",
			[((pulses.start(number + 1) - pulses.end(number)) / self.board.master, pulses.end(number)) for number in broad])
		self.note_times("serration width", [pulses.start(number + 1) - pulses.end(number) for number in broad])
		blocks = [self.block(first) for first in self.broad_first]
		self.note("pre-equalising pulses", [zero - first for first, zero, _, _ in blocks])
		self.note("pre-equalising lines", [Fraction(self.half(zero) - self.half(first), 2) for first, zero, _, _ in blocks])
		self.note("broad pulses", [after - zero for _, zero, after, _ in blocks])
		self.note("vertical sync length", [Fraction(self.half(after) - self.half(zero), 2) for _, zero, after, _ in blocks])
		self.note("post-equalising pulses", [end - after for _, _, after, end in blocks])
		self.note("post-equalising lines", [
			Fraction(self.half(end - 1) + 1 - self.half(after), 2) if end > after else 0 for _, _, after, end in blocks])

	def lines_of_vertical(self, number):
		return (self.place(self.vertical.end(number)) - self.place(self.vertical.start(number))) / 2

	def block(self, zero):
		"""Numbers of the first equalising, the first broad, the next equalising pulse, and the one after the last of these."""
		first, after = zero, zero
		while self.kind(first - 1) == EQUALISING:
			first -= 1
		while self.kind(after) == BROAD:
			after += 1
		end = after
		while self.kind(end) == EQUALISING:
			end += 1
		return first, zero, after, end

	def half_lines(self, nominal=False):
		"""(start, end) of each half line of the frame, from its first pulse on: a distance of pulses is parted evenly; or what of
		half a line of the usual length is not near the line's middle."""
		for number, count in enumerate(self.halves):
			start, distance = self.pulses.start(number), self.distances[number]
			part = Fraction(self.line, 2) if nominal else Fraction(distance, count)
			edges = [start + part * index for index in range(count)] + [start + distance]
			for index, (begin, end) in enumerate(zip(edges, edges[1:])):
				if not nominal:
					yield begin, end
				elif (self.half(number) + index) % 2 == self.line_parity():
					yield begin, begin + Fraction(7 * self.line, 16)
				else:
					yield begin + Fraction(self.line, 16), end

	def has_picture(self, start, end):
		number = self.picture.last_from(start)
		return self.picture.end(number) > start or self.picture.start(number + 1) < end

	def vertical_pictures(self):
		if not self.blank or not len(self.zero) or not len(self.picture):
			return
		for nominal in (False, True):
			shown = [self.has_picture(*half) for half in self.half_lines(nominal)]
			found = self.extents(shown)
			note = self.note_other if nominal else self.note
			for name, item in (("front", "vertical front porch"), ("back", "vertical back porch"), ("top", "picture top"),
					("blanking", "vertical blanking"), ("height", "picture height"), ("centre", "vertical centre")):
				note(item, found[name])
			self.note_other("picture height", found["extent"])
			# The front porch of a field is before the next one's 0V.
			porches = found["front"][-1:] + found["front"][:-1]
			self.note_other("vertical blanking", [top + porch for top, porch in zip(found["top"], porches)])

	def extents(self, shown):
		"""By field, in lines; shown: of each half line whether it has picture."""
		found = {name: [] for name in ("front", "back", "blanking", "top", "height", "centre", "extent")}
		for field in range(len(self.zero)):
			here, there = self.place(self.zero.start(field)), self.place(self.zero.start(field + 1))
			inside = [half for half in range(int(here), int(there)) if shown[half % len(shown)]]
			first, end = inside[0], inside[-1] + 1
			found["top"].append((first - here) / 2)
			found["height"].append(Fraction(len(inside), 2))
			found["extent"].append(Fraction(end - first, 2))
			found["blanking"].append((there - here - len(inside)) / 2)
			found["centre"].append((Fraction(first + end, 2) - here) / 2)
			found["front"].append((there - end) / 2)
			found["back"].append((first - self.sync_end(field, here)) / 2)
		return found

	def sync_end(self, field, here):
		if not self.composite:
			return here + 2 * self.lines_of_vertical(field)
		zero = self.broad_first[field]
		return self.half(self.block(zero)[2])

	# ---- burst in the lines around 0V

	def line_parity(self):
		"""0 or 1: which half lines, from the frame's first pulse on, begin lines: those at which line syncs are."""
		syncs = Counter(self.half(number) % 2 for number in range(len(self.pulses)) if self.kind(number) == SYNC)
		return int(syncs[1] > syncs[0])

	def lines_without_burst(self):
		"""Of the lines that surround a field's 0V without burst, and of further ones in the field."""
		if not self.burst or not self.composite or not self.broad_first:
			return
		first = self.line_parity()
		edges = [start for start, _ in self.half_lines()][first::2]
		edges.append(edges[0] + self.ticks)
		quiet = [not self.has_burst(*pair) for pair in zip(edges, edges[1:])]
		counts, nearest = (Counter({field: 0 for field in range(len(self.zero))}) for _ in range(2))
		for line, is_quiet in enumerate(quiet):
			if is_quiet:
				counts[self.field_of(line, edges, quiet)] += 1
				nearest[self.nearest_field(2 * line + first + 1)] += 1
		self.note("lines without burst", counts.values())
		self.note_other("lines without burst", nearest.values())

	def has_burst(self, start, end):
		number = self.burst.last_from(start)
		return self.burst.end(number) > start or self.burst.start(number + 1) < end

	def field_of(self, line, edges, quiet):
		"""The field whose 0V is in the same run of lines without burst, or else the one that the line is in."""
		count = len(quiet)
		last = line
		while quiet[(last + 1) % count] and last - line < count:
			last += 1
		lap, place = divmod(last, count)
		end = lap * self.ticks + edges[place + 1]
		return (self.zero.first_from(end) - 1) % len(self.zero)

	def nearest_field(self, half):
		zero, lap = [self.half(number) for number in self.broad_first], self.half_at[-1]
		return min(range(len(zero)), key=lambda field: min((half - zero[field]) % lap, (zero[field] - half) % lap))

	def begins_at_a_line(self):
		"""Whether the 0V of some field is where a line begins."""
		return any(self.half(number) % 2 == self.line_parity() for number in self.broad_first)

	def polarities(self):
		for item, names in (("horizontal sync polarity", ("hsync", "sync")), ("vertical sync polarity", ("vsync", "sync"))):
			for name in names:
				if name in self.board.signals:
					self.values[item] = (Fraction(1 if self.board.signals[name][0] == "high" else -1),) * 2
					break
