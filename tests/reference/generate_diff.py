"""Random plans as Python values, and how they are written: plainly, or in other words that mean the same.

A plan is a dictionary: name, note, standard, limits, grade; clock (master_hz and all else in ticks, seconds or hertz as Fractions);
signals: [{name, role, active, lead}]; lines: [{name, regions: [{name, cells, asserts, stretch, holds}]}]; frame: [[repeat, name]];
machine; chips; timing; sweeps. Everything is in cells and ticks, so that what an edit comes to can be counted here.
"""
from fractions import Fraction


def region(name, cells, *asserts, stretch=0, holds=None):
	return {"name": name, "cells": cells, "asserts": list(asserts), "stretch": stretch, "holds": dict(holds or {})}


def cells_of(line):
	return sum(each["cells"] for each in line["regions"])


class Maker:
	"""A random plan. In a line-frame machine every line begins with sync, so that any may follow any."""

	def __init__(self, chance, form):
		self.chance = chance
		self.form = form
		width = chance.randint(16, 40)
		blank = "blank"
		sync, porch, back = chance.randint(4, 7), chance.randint(2, 4), chance.randint(5, 9)
		stretch = chance.choice([0, 0, 1, 2])
		holds = {"page": "0", "at": f"{width + 4}*row + col"} if form == "loop" else {"column": "col"}
		front = [region("sync", sync, blank, "sync", stretch=stretch), region("breezeway", chance.randint(2, 3), blank),
			region("burst", chance.randint(3, 5), blank, "burst"), region("back porch", back, blank)]
		picture = front + [region("picture", width, "load", holds=holds), region("front porch", porch, blank)]
		border = [dict(each, holds={}, asserts=list(each["asserts"])) for each in picture]
		border[4]["asserts"] = [blank]
		total = sum(each["cells"] for each in picture)
		vertical = [region("broad sync", total - sync - 2, blank, "sync", stretch=stretch), region("serration", sync, blank),
			region("rest", 2, blank)]
		self.plan = {
			"name": f"quay-{chance.randint(1, 999)}", "note": chance.choice(["", "Lamps at a quay", "Ferry times: two screens"]),
			"standard": None, "limits": {}, "grade": "monitor",
			"clock": {"master": Fraction(315000000, 22), "accuracy": Fraction(50), "dot": 1, "cell": chance.randint(7, 10), "stretch": 3,
				"subcarrier": Fraction(315000000, 88), "phase": "free"},
			"signals": [{"name": "sync", "role": "composite sync", "active": "low", "lead": 0},
				{"name": "blank", "role": "blanking", "active": "high", "lead": 0},
				{"name": "burst", "role": "burst gate", "active": "high", "lead": 0},
				{"name": "long", "role": "stretch", "active": "low", "lead": 0},
				{"name": "load", "role": "plain", "active": "low", "lead": 0},
				{"name": "lamp", "role": "plain", "active": "high", "lead": 0}],
			"lines": [{"name": "picture", "regions": picture}, {"name": "border", "regions": border},
				{"name": "vertical", "regions": vertical}],
			"frame": [[3, "vertical"], [chance.randint(4, 9), "border"], [chance.randint(12, 24), "picture"],
				[chance.randint(4, 9), "border"]],
			"timing": {"latch": "74HC574", "share": Fraction(1), "margin": Fraction(20)}, "sweeps": [],
		}
		if chance.random() < 0.5:
			self.plan["standard"] = "composite-525"
		self.make_machine()

	def make_machine(self):
		if self.form == "loop":
			self.plan["machine"] = {"form": "loop", "state": 14, "outputs": "registered", "advance": "table",
				"fields": {"page": (13, 13), "at": (12, 0)}, "start": 0x2000}
			self.plan["chips"] = {"form": "short", "part": "28C256", "speed": 150}
			if self.chance.random() < 0.4:
				self.wire()
		else:
			self.plan["machine"] = {"form": "line-frame", "line": 7, "frame": 7, "fields": {"column": (6, 0)}, "start": 127}
			self.plan["chips"] = {"form": "stages", "part": "28C64", "speed": 150}

	def wire(self):
		"""The long form: two chips, pins in any order."""
		word = [f"next.{bit}" for bit in range(14)] + [signal["name"] for signal in self.plan["signals"]]
		self.chance.shuffle(word)
		chips = []
		for number in range(3):
			address = [f"state.{bit}" for bit in range(14)] + ["-"]
			self.chance.shuffle(address)
			data = word[number * 8:number * 8 + 8]
			chips.append({"label": f"U{number + 1}", "part": "28C256", "speed": 150, "address": address,
				"data": data + ["-"] * (8 - len(data))})
		self.plan["chips"] = {"form": "long", "chips": chips}


def wiring_of(plan):
	"""{label: {"part", "speed", "stage", "A0": wire, …}}, as page 2.8 has it."""
	chips, machine = plan["chips"], plan["machine"]
	if chips["form"] == "long":
		return {chip["label"]: dict({"part": chip["part"], "speed": chip["speed"], "stage": None},
			**{f"A{pin}": wire for pin, wire in enumerate(chip["address"])}, **{f"D{pin}": wire for pin, wire in enumerate(chip["data"])})
			for chip in chips["chips"]}
	names = [signal["name"] for signal in plan["signals"]]
	if chips["form"] == "short":
		bits = machine["state"]
		word = ([] if machine["advance"] == "count" else [f"next.{bit}" for bit in range(bits)]) + \
			(["clear"] if machine["advance"] == "count" else []) + names
		return number_chips([(None, [f"state.{bit}" for bit in range(bits)], word)], chips)
	kinds = max(1, (len(plan["lines"]) - 1).bit_length())
	kind = [f"kind.{bit}" for bit in range(kinds)]
	line = [f"next.{bit}" for bit in range(machine["line"])] + ["step"] + names
	frame = [f"next.{bit}" for bit in range(machine["frame"])] + kind
	return number_chips([("line", [f"state.{bit}" for bit in range(machine["line"])] + kind, line),
		("frame", [f"state.{bit}" for bit in range(machine["frame"])], frame)], chips)


def number_chips(stages, chips):
	wiring = {}
	for stage, address, word in stages:
		for first in range(0, len(word), 8):
			pins = {f"A{pin}": wire for pin, wire in enumerate(address)}
			pins.update({f"D{pin}": wire for pin, wire in enumerate(word[first:first + 8])})
			wiring[f"rom{len(wiring)}"] = dict({"part": chips["part"], "speed": chips["speed"], "stage": stage}, **pins)
	return wiring


# How plans are written. Style 0 is plain; others use other units, keys in another order, `like`, blocks cut and joined, comments.

def fraction(value):
	value = Fraction(value)
	return str(value.numerator) if value.denominator == 1 else f"{value.numerator}/{value.denominator}"


class Writer:
	def __init__(self, plan, chance=None, cuts=True):
		self.plan = plan
		self.chance = chance
		self.cuts = cuts
		self.lines = []

	def other(self):
		return self.chance is not None and self.chance.random() < 0.5

	def mapping(self, pairs):
		pairs = list(pairs)
		if self.chance is not None:
			self.chance.shuffle(pairs)
		return "{ " + ", ".join(f"{key}: {value}" for key, value in pairs) + " }"

	def quoted(self, words):
		return f'"{words}"' if self.other() else words

	def ticks(self, count):
		dot = self.plan["clock"]["dot"]
		return f"{count // dot} dots" if self.other() and count % dot == 0 else f"{count} ticks"

	def hertz(self, value):
		return f"{fraction(value / 1000)} kHz" if self.other() else f"{fraction(value / 1000000)} MHz"

	def expression(self, text):
		if not self.other() or "+" not in text:
			return f"({text}) + 0x0" if self.other() else text
		left, right = text.split(" + ", 1)
		factor, _, name = left.partition("*")
		return f"{right} + {name}*{hex(int(factor))}"

	def length(self, cells):
		clock = self.plan["clock"]
		if not self.other():
			return ("cells", cells)
		return ("time", f"{fraction(Fraction(cells * clock['cell'] * 1000000) / clock['master'])} us")

	def region(self, each, fill):
		pairs = [("region", self.quoted(each["name"])), ("fill", "true") if fill else self.length(each["cells"])]
		if each["asserts"] or self.other():
			names = list(each["asserts"])
			if self.chance is not None:
				self.chance.shuffle(names)
			pairs.append(("assert", "[" + ", ".join(names) + "]"))
		if each["stretch"]:
			pairs.append(("stretch", each["stretch"]))
		if each["holds"]:
			pairs.append(("hold", self.mapping((name, self.expression(text)) for name, text in each["holds"].items())))
		return self.mapping(pairs)

	def line(self, line, before):
		# Times are measured back from the end after a fill, and forward before it: whole cells either way.
		fill = self.chance.randrange(len(line["regions"])) if self.other() else -1
		total = f"cells: {cells_of(line)}"
		same = [each["name"] for each in line["regions"]]
		if self.other() and before is not None and [each["name"] for each in before["regions"]] == same and \
				len(set(same)) == len(same) and cells_of(before) == cells_of(line):
			self.lines.append(f"  {line['name']}:\n    like: {before['name']}\n    change:")
			for each in line["regions"]:
				keys = [("region", each["name"]), ("cells", each["cells"]), ("assert", "[" + ", ".join(each["asserts"]) + "]"),
					("stretch", each["stretch"]), ("hold", self.mapping(each["holds"].items()))]
				self.lines.append("      - " + self.mapping(keys))
			return
		self.lines.append(f"  {line['name']}:")
		if fill >= 0 or self.other():
			self.lines.append(f"    {total}")
		self.lines.append("    regions:")
		for index, each in enumerate(line["regions"]):
			self.lines.append("      - " + self.region(each, index == fill) + ("  # as it was" if self.other() else ""))

	def cut_blocks(self):
		"""Blocks of lines that count no rows may be cut; not where changes name blocks by number."""
		counting = {line["name"] for line in self.plan["lines"] for each in line["regions"] if "row" in str(each["holds"])}
		for repeat, name in self.plan["frame"]:
			if self.cuts and self.other() and repeat > 1 and name not in counting:
				first = self.chance.randrange(1, repeat)
				yield first, name
				repeat -= first
			yield repeat, name

	def clock(self):
		clock = self.plan["clock"]
		pairs = [("master", self.hertz(clock["master"])), ("accuracy", f"{clock['accuracy']} ppm"), ("dot", f"{clock['dot']} ticks"),
			("cell", self.ticks(clock["cell"])), ("stretch", self.ticks(clock["stretch"])), ("phase", clock["phase"])]
		ratio = clock["master"] / clock["subcarrier"]
		pairs.append(("subcarrier", f"master / {ratio}" if self.other() and ratio.denominator == 1 else self.hertz(clock["subcarrier"])))
		return self.mapping(pairs)

	def machine(self):
		machine = self.plan["machine"]
		pairs = [("form", machine["form"])]
		if machine["form"] == "loop":
			pairs += [("state", f"{machine['state']} bits"), ("outputs", machine["outputs"]), ("advance", machine["advance"])]
		else:
			pairs += [("line", self.mapping([("state", f"{machine['line']} bits")])),
				("frame", self.mapping([("state", f"{machine['frame']} bits")]))]
		if machine["fields"]:
			pairs.append(("fields", self.mapping((name, f"{high}..{low}" if high != low or self.other() else high)
				for name, (high, low) in machine["fields"].items())))
		if machine["start"] is not None:
			pairs.append(("start", hex(machine["start"]) if self.other() else machine["start"]))
		return self.mapping(pairs)

	def chips(self):
		chips = self.plan["chips"]
		pairs = [("part", chips.get("part")), ("speed", f"{chips.get('speed')} ns")]
		if chips["form"] == "stages":
			return " " + self.mapping([("line", self.mapping(pairs)), ("frame", self.mapping(pairs))])
		short = chips["form"] == "short"
		if short and not self.other():
			return " " + self.mapping(pairs)
		listed = [dict(chip, label=label) for label, chip in wiring_of(self.plan).items()]
		if self.chance is not None:
			self.chance.shuffle(listed)
		text = ""
		for chip in listed:
			address = [chip[f"A{pin}"] for pin in range(15) if f"A{pin}" in chip]
			data = [chip[f"D{pin}"] for pin in range(8) if f"D{pin}" in chip]
			text += "\n  - " + self.mapping([("label", chip["label"]), ("part", chip["part"]), ("speed", f"{chip['speed']} ns"),
				("address", "[" + ", ".join(address) + "]"), ("data", "[" + ", ".join(data) + "]")])
		return text

	def standard(self):
		plan = self.plan
		if plan["limits"]:
			return self.mapping([("base", plan["standard"]), ("limits", self.mapping(plan["limits"].items()))])
		return plan["standard"]

	def text(self):
		plan = self.plan
		self.lines = []
		before = None
		for line in plan["lines"]:
			self.line(line, before)
			before = line
		parts = [f"name: {self.quoted(plan['name'])}", f"clock: {self.clock()}",
			"signals:\n" + "\n".join(f"  {each['name']}: " + self.mapping([("role", each["role"]), ("active", each["active"]),
				("lead", f"{each['lead']} cells")]) for each in plan["signals"]),
			"lines:\n" + "\n".join(self.lines),
			"frame:\n" + "\n".join("  - " + self.mapping([("repeat", repeat), ("line", name)]) for repeat, name in self.cut_blocks()),
			f"machine: {self.machine()}", f"chips:{self.chips()}",
			"timing: " + self.mapping([("latch", plan["timing"]["latch"]), ("share", f"{plan['timing']['share'].numerator}/"
				f"{plan['timing']['share'].denominator}"), ("margin", f"{plan['timing']['margin']} ns")])]
		if plan["note"]:
			parts.append(f"note: \"{plan['note']}\"")
		if plan["standard"]:
			parts += [f"standard: {self.standard()}", f"grade: {plan['grade']}"]
		if plan["sweeps"]:
			parts.append("sweep: [" + ", ".join(self.mapping([("bits", f"state.{high}..{low}"), ("within", f"{within} ms")])
				for high, low, within in plan["sweeps"]) + "]")
		if self.chance is not None:
			self.chance.shuffle(parts)
		return "\n".join(["scanlatch: 1"] + parts) + "\n"
