"""Edits of plans, each with what it must read as: written from page 3.3 of the design and src/view/diff.h, not from the program.

Each edit changes a copy of the plan and returns the changes that `diff` must name, as dictionaries of the keys that matter; None where
the plan has nothing to edit in that way. Keys are those of the JSON document; "what" is compared whole.
"""
import copy
from fractions import Fraction

from generate_diff import cells_of, region, wiring_of


def line_of(plan, name):
	return next(line for line in plan["lines"] if line["name"] == name)


def shift(plan, cells):
	return {"cells": cells, "ticks": str(cells * plan["clock"]["cell"])}


def change(kind, what, section="lines", **keys):
	return dict({"section": section, "kind": kind, "what": what}, **keys)


def pick_line(plan, chance, names=("picture", "border", "vertical")):
	return line_of(plan, chance.choice(names))


def edge_moved(plan, chance):
	line = pick_line(plan, chance)
	edges = [index for index in range(1, len(line["regions"])) if set(line["regions"][index - 1]["asserts"]) !=
		set(line["regions"][index]["asserts"]) and line["regions"][index]["cells"] > 2 + line["regions"][index]["stretch"]]
	if not edges:
		return None
	index = chance.choice(edges)
	before, after = line["regions"][index - 1:index + 1]
	cells = chance.choice([1, 2, -1])
	if before["cells"] + cells <= before["stretch"]:
		cells = 1
	before["cells"] += cells
	after["cells"] -= cells
	return [change("edge-moved", f'edge between "{before["name"]}" and "{after["name"]}"', lines=[line["name"]], **shift(plan, cells))]


def edge_moved_in_two(plan, chance):
	"""The same edge in two line types is one change."""
	cells = chance.choice([1, -1])
	for name in ("picture", "border"):
		before, after = line_of(plan, name)["regions"][2:4]
		before["cells"] += cells
		after["cells"] -= cells
	return [change("edge-moved", 'edge between "burst" and "back porch"', lines=["picture", "border"], **shift(plan, cells))]


def region_moved(plan, chance):
	line = pick_line(plan, chance, ("picture", "border"))
	cells = chance.choice([1, 2])
	line["regions"][1]["cells"] += cells
	line["regions"][3]["cells"] -= cells
	return [change("region-moved", '"burst", between "breezeway" and "back porch"', lines=[line["name"]], **shift(plan, cells))]


def regions_moved(plan, chance):
	line = pick_line(plan, chance, ("picture", "border"))
	line["regions"][0]["cells"] += 1
	line["regions"][3]["cells"] -= 1
	return [change("regions-moved", '"breezeway" to "burst", between "sync" and "back porch"', lines=[line["name"]], **shift(plan, 1))]


def widened_with_line(plan, chance):
	line = pick_line(plan, chance)
	each = chance.choice(line["regions"])
	cells = chance.choice([1, 2, 3])
	each["cells"] += cells
	return [change("length", f'"{each["name"]}"', lines=[line["name"]],
		also=f"the line is {cells} cell{'s' if cells > 1 else ''} longer", **shift(plan, cells))]


def shorter_with_line(plan, chance):
	line = pick_line(plan, chance)
	each = max(line["regions"], key=lambda each: each["cells"])
	each["cells"] -= 1
	return [change("length", f'"{each["name"]}"', lines=[line["name"]], also="the line is 1 cell shorter", **shift(plan, -1))]


def region_added_with_room(plan, chance):
	line = pick_line(plan, chance, ("picture", "border"))
	line["regions"][3]["cells"] -= 3
	line["regions"].insert(4, region("gate", 3, "blank", "lamp"))
	first = sum(each["cells"] for each in line["regions"][:4])
	return [change("region-added", '"gate"', lines=[line["name"]], new=f"3 cells from cell {first}, asserts blank and lamp",
		also='"back porch" is 3 cells shorter')]


def region_added_far_from_room(plan, chance):
	line = pick_line(plan, chance, ("picture", "border"))
	line["regions"][3]["cells"] -= 1
	line["regions"].insert(2, region("gate", 1, "blank", "lamp"))
	first = sum(each["cells"] for each in line["regions"][:2])
	return [change("region-added", '"gate"', lines=[line["name"]], new=f"1 cell from cell {first}, asserts blank and lamp",
		also='"back porch" is 1 cell shorter, "burst" comes 1 cell later')]


def region_added_with_line(plan, chance):
	line = pick_line(plan, chance)
	place = chance.randrange(1, len(line["regions"]))
	line["regions"].insert(place, region("gate", 2, "blank", "lamp"))
	first = sum(each["cells"] for each in line["regions"][:place])
	return [change("region-added", '"gate"', lines=[line["name"]], new=f"2 cells from cell {first}, asserts blank and lamp",
		also="the line is 2 cells longer")]


def region_removed_with_room(plan, chance):
	line = pick_line(plan, chance, ("picture", "border"))
	burst = line["regions"].pop(2)
	first = sum(each["cells"] for each in line["regions"][:2])
	line["regions"][2]["cells"] += burst["cells"]
	return [change("region-removed", '"burst"', lines=[line["name"]], old=f"{burst['cells']} cells from cell {first}, asserts blank and burst",
		also=f'"back porch" is {burst["cells"]} cells longer')]


def region_removed_far_from_room(plan, chance):
	line = pick_line(plan, chance, ("picture", "border"))
	gone = line["regions"].pop(1)
	first = line["regions"][0]["cells"]
	line["regions"][2]["cells"] += gone["cells"]
	return [change("region-removed", '"breezeway"', lines=[line["name"]], old=f"{gone['cells']} cells from cell {first}, asserts blank",
		also=f'"back porch" is {gone["cells"]} cells longer, "burst" comes {gone["cells"]} cells earlier')]


def region_removed_with_line(plan, chance):
	line = pick_line(plan, chance, ("picture", "border"))
	burst = line["regions"].pop(2)
	first = sum(each["cells"] for each in line["regions"][:2])
	return [change("region-removed", '"burst"', lines=[line["name"]], old=f"{burst['cells']} cells from cell {first}, asserts blank and burst",
		also=f"the line is {burst['cells']} cells shorter")]


def region_renamed(plan, chance):
	line = pick_line(plan, chance)
	each = chance.choice(line["regions"])
	old, each["name"] = each["name"], "renamed"
	return [change("region-renamed", "a region's name", section="in words only", lines=[line["name"]], old=f'"{old}"', new='"renamed"')]


def region_divided(plan, chance):
	"""The same cells in more regions: words, which say what became of which."""
	line = pick_line(plan, chance)
	places = [index for index, each in enumerate(line["regions"]) if each["cells"] > 1 and not each["stretch"] and not each["holds"]]
	place = chance.choice(places)
	each, first = line["regions"][place], sum(each["cells"] for each in line["regions"][:place])
	cells = each["cells"]
	each["cells"] -= 1
	line["regions"].insert(place + 1, region("far end", 1, *each["asserts"]))
	return [change("regions-divided", f"the same {cells} cells from cell {first}", section="in words only", lines=[line["name"]],
		old=f'"{each["name"]}"', new=f'"{each["name"]}" and "far end"')]


def edge_unseen(plan, chance):
	"""In the border, picture and front porch show the same: there the edge is only said."""
	for name in ("picture", "border"):
		before, after = line_of(plan, name)["regions"][4:6]
		before["cells"] -= 1
		after["cells"] += 1
	what = 'edge between "picture" and "front porch"'
	return [change("edge-moved", what, lines=["picture"], **shift(plan, -1)),
		change("edge-moved", what, section="in words only", lines=["border"], **shift(plan, -1))]


def signal_asserted(plan, chance):
	line = pick_line(plan, chance, ("picture", "border"))
	each = chance.choice(line["regions"][1:4])
	each["asserts"].append("lamp")
	old = "blank and burst" if each["name"] == "burst" else "blank"
	return [change("asserts", f'"{each["name"]}" asserts', lines=[line["name"]], old=old, new=old.replace(" and", ",") + " and lamp")]


def signal_not_asserted(plan, chance):
	line_of(plan, "picture")["regions"][4]["asserts"] = []
	return [change("asserts", '"picture" asserts', lines=["picture"], old="load", new="nothing")]


def wired_anew(plan, old_plan, names=None):
	"""The pins that the short form wires otherwise."""
	names = names or {}
	changes = []
	old, new = wiring_of(old_plan), wiring_of(plan)
	for label in sorted(set(old) | set(new)):
		before, after = old.get(label), new.get(label)
		if before is None or after is None:
			changes.append(change("added" if before is None else "removed", f"chip {label}", section="wiring"))
			continue
		if (before["part"], before["speed"], before["stage"]) != (after["part"], after["speed"], after["stage"]):
			changes.append(change("changed", f"chip {label}", section="wiring"))
		for pin in sorted(set(before) | set(after)):
			if pin in ("part", "speed", "stage"):
				continue
			left, right = before.get(pin, "-"), after.get(pin, "-")
			if names.get(left, left) != right:
				changes.append(change("pin", f"chip {label}, pin {pin}", section="wiring", old="open" if left == "-" else left,
					new="open" if right == "-" else right))
	return changes


def short(plan):
	return plan["chips"]["form"] == "short"


def signal_added(plan, chance):
	if not short(plan):
		return None
	old = copy.deepcopy(plan)
	plan["signals"].insert(chance.randrange(len(plan["signals"]) + 1), {"name": "bell", "role": "plain", "active": "low", "lead": 2})
	return [change("added", "signal bell", section="signals", new="plain, active low, lead 2 cells, from data")] + wired_anew(plan, old)


def signal_removed(plan, chance):
	if not short(plan):
		return None
	old = copy.deepcopy(plan)
	plan["signals"] = [each for each in plan["signals"] if each["name"] != "load"]
	line_of(plan, "picture")["regions"][4]["asserts"] = []
	return [change("removed", "signal load", section="signals", old="plain, active low, from data")] + wired_anew(plan, old)


def signal_renamed(plan, chance):
	old = chance.choice(["sync", "blank", "burst", "load"])
	for each in plan["signals"]:
		each["name"] = "other" if each["name"] == old else each["name"]
	for line in plan["lines"]:
		for each in line["regions"]:
			each["asserts"] = ["other" if name == old else name for name in each["asserts"]]
	for chip in plan["chips"].get("chips", []):
		chip["data"] = ["other" if wire == old else wire for wire in chip["data"]]
	return [change("changed", "a signal's name", section="in words only", old=old, new="other")]


def signal_property(key, value, words):
	def edit(plan, chance):
		if plan["machine"]["form"] != "loop":
			return None
		each = next(each for each in plan["signals"] if each["name"] == "load")
		old, each[key] = each[key], value
		return [change("changed", "signal load", section="signals", old=words(old), new=words(value))]
	return edit


def stretched_moved(plan, chance):
	regions = line_of(plan, "picture")["regions"]
	if regions[0]["stretch"] == 0 or plan["machine"]["form"] != "loop":
		return None
	cells = regions[0]["stretch"]
	regions[0]["stretch"], regions[3]["stretch"] = 0, cells
	return [change("stretched-moved", "a stretched cell" if cells == 1 else f"{cells} stretched cells", lines=["picture"], old='in "sync"',
		new='in "back porch"')]


def stretched_more(plan, chance):
	regions = line_of(plan, "picture")["regions"]
	old = regions[3]["stretch"]
	regions[3]["stretch"] = 2
	assert plan["clock"]["stretch"] == 3
	return [change("stretched", 'stretched cells of "back porch"', lines=["picture"], old=str(old), new="2",
		also="the line is 6 ticks longer")]


def hold_changed(plan, chance):
	holds = line_of(plan, "picture")["regions"][4]["holds"]
	if "at" not in holds:
		return None
	old, holds["at"] = holds["at"], holds["at"] + " + 5"
	return [change("hold", '"picture" holds at', lines=["picture"], old=old, new=None)]  # in whatever words


def hold_removed(plan, chance):
	holds = line_of(plan, "picture")["regions"][4]["holds"]
	name = chance.choice(sorted(holds))
	return [change("hold", f'"picture" holds {name}', lines=["picture"], old=holds.pop(name), new="nothing")]


def block_repeat(plan, chance):
	number = chance.randrange(len(plan["frame"]))
	block = plan["frame"][number]
	old = block[0]
	block[0] += chance.choice([1, 2, -1])
	return [change("repeat", f'block {number + 1}, "{block[1]}"', section="frame", old=f"{old} lines", new=f"{block[0]} lines")]


def block_added(plan, chance):
	plan["frame"].append([2, "vertical"])
	return [change("block-added", 'block 5, "vertical"', section="frame", new="2 lines")]


def block_removed(plan, chance):
	repeat = plan["frame"].pop(1)[0]
	return [change("block-removed", 'old block 2, "border"', section="frame", old=f"{repeat} lines")]


def block_moved(plan, chance):
	plan["frame"].append(plan["frame"].pop(0))
	return [change("block-moved", '3 lines of "vertical"', section="frame", old="block 1", new="block 4")]


def block_split(plan, chance):
	"""Where lines hold what counts the rows of their block, a cut is a change."""
	if plan["machine"]["form"] == "loop":
		plan["machine"]["fields"] = {"scan": (4, 0)}
		line_of(plan, "picture")["regions"][4]["holds"] = {"scan": "row"}
		plan["before"] = copy.deepcopy(plan)
	repeat = plan["frame"][2][0]
	plan["frame"][2:3] = [[repeat - 4, "picture"], [4, "picture"]]
	if plan["machine"]["form"] == "line-frame":
		return []
	return [change("repeat", 'block 3, "picture"', section="frame", old=f"{repeat} lines", new=f"{repeat - 4} lines"),
		change("block-added", 'block 4, "picture"', section="frame", new="4 lines")]


def line_facts(plan, line):
	clock = plan["clock"]
	ticks = cells_of(line) * clock["cell"] + sum(each["stretch"] for each in line["regions"]) * clock["stretch"]
	return f"{cells_of(line)} cells, {ticks} ticks"


def line_added(plan, chance):
	line = copy.deepcopy(line_of(plan, "border"))
	line["name"] = "night"
	line["regions"][3]["asserts"].append("lamp")
	old = copy.deepcopy(plan)
	plan["lines"].append(line)
	plan["frame"].append([4, "night"])
	return [change("line-added", 'line type "night"', new=line_facts(plan, line)),
		change("block-added", 'block 5, "night"', section="frame", new="4 lines")] + wired_anew(plan, old)


def line_added_unused(plan, chance):
	line = copy.deepcopy(line_of(plan, "border"))
	line["name"] = "night"
	line["regions"][3]["asserts"].append("lamp")
	old = copy.deepcopy(plan)
	plan["lines"].append(line)
	return [change("line-added", 'line type "night"', section="in words only", new=line_facts(plan, line) + ", not in the frame")] + \
		wired_anew(plan, old)


def line_removed(plan, chance):
	line = line_of(plan, "vertical")
	if plan["machine"]["form"] != "loop":
		return None
	plan["lines"].remove(line)
	plan["frame"].pop(0)
	return [change("line-removed", 'line type "vertical"', old=line_facts(plan, line)),
		change("block-removed", 'old block 1, "vertical"', section="frame", old="3 lines")]


def line_renamed(plan, chance):
	line = pick_line(plan, chance)
	old, line["name"] = line["name"], "other"
	for block in plan["frame"]:
		block[1] = "other" if block[1] == old else block[1]
	return [change("line-renamed", "a line type's name", section="in words only", old=f'"{old}"', new='"other"')]


def line_renamed_and_edited(plan, chance):
	"""One moved edge in a line type with another name is one change beside the name."""
	line = pick_line(plan, chance)
	old, line["name"] = line["name"], "other"
	for block in plan["frame"]:
		block[1] = "other" if block[1] == old else block[1]
	line["regions"][0]["cells"] -= 1
	line["regions"][1]["cells"] += 1
	names = [each["name"] for each in line["regions"]]
	return [change("line-renamed", "a line type's name", section="in words only", old=f'"{old}"', new='"other"'),
		change("edge-moved", f'edge between "{names[0]}" and "{names[1]}"', lines=["other"], **shift(plan, -1))]


def renamed_lines(plan, names):
	for line in plan["lines"]:
		line["name"] = names.get(line["name"], line["name"])
	for block in plan["frame"]:
		block[1] = names.get(block[1], block[1])
	return [change("line-renamed", "a line type's name", section="in words only", old=f'"{old}"', new=f'"{new}"') for old, new in names.items()]


def line_names_swapped(plan, chance):
	return renamed_lines(plan, {"border": "vertical", "vertical": "border"})


def line_names_passed_on(plan, chance):
	return renamed_lines(plan, {"border": "vertical", "vertical": "picture", "picture": "other"})


def clock_value(key, what, value, new, kind="changed"):
	def edit(plan, chance):
		plan["clock"][key] = value(plan["clock"][key])
		return [change(kind, what, section="clock", new=new(plan["clock"][key]))]
	return edit


def standard_changed(plan, chance):
	if not plan["standard"]:
		plan["standard"] = "composite-525"
		return [change("added", "standard", section="standard", new="composite-525")]
	plan["standard"] = "composite-625"
	return [change("changed", "standard", section="standard", old="composite-525", new="composite-625")]


def grade_changed(plan, chance):
	if not plan["standard"]:
		return None
	plan["grade"] = "studio"
	return [change("changed", "grade", section="standard", old="monitor", new="studio")]


def limit_changed(plan, chance):
	if not plan["standard"]:
		return None
	plan["limits"] = {"horizontal sync width": "4 us to 5.5 us"}
	return [change("changed", "limit of horizontal sync width", section="standard", new="from 4 to 5.5 us")]


def part_changed(plan, chance):
	old = copy.deepcopy(plan)
	chips = plan["chips"]["chips"][:1] if plan["chips"]["form"] == "long" else [plan["chips"]]
	for chip in chips:
		chip["part"] = "27C512" if plan["machine"]["form"] == "loop" and short(plan) else "27C256" if chip["part"] == "28C256" else "28C256"
	return wired_anew(plan, old)


def speed_changed(plan, chance):
	old = copy.deepcopy(plan)
	chip = plan["chips"]["chips"][1] if plan["chips"]["form"] == "long" else plan["chips"]
	chip["speed"] = 200
	return wired_anew(plan, old)


def pins_swapped(row):
	def edit(plan, chance):
		if plan["chips"]["form"] != "long":
			return None
		old = copy.deepcopy(plan)
		pins = chance.choice(plan["chips"]["chips"])[row]
		first, second = chance.sample(range(8), 2)
		pins[first], pins[second] = pins[second], pins[first]
		return wired_anew(plan, old)
	return edit


def label_changed(plan, chance):
	if plan["chips"]["form"] != "long":
		return None
	chip = plan["chips"]["chips"][1]
	chip["label"] = "U9"
	return [change("changed", "a chip's label", section="in words only", old="U2", new="U9")]


def state_bits(plan, chance):
	if not short(plan):
		return None
	old = copy.deepcopy(plan)
	plan["machine"]["state"] = 15
	return [change("changed", "state", section="machine", old="14 bits", new="15 bits"),
		change("changed", "start", section="machine")][:1] + wired_anew(plan, old)


def outputs_changed(plan, chance):
	if plan["machine"]["form"] != "loop":
		return None
	plan["machine"]["outputs"] = "direct"
	return [change("changed", "outputs", section="machine", old="registered", new="direct")]


def advance_changed(plan, chance):
	"""From a table to a counter: on a plan that holds nothing."""
	if not short(plan):
		return None
	before = [copy.deepcopy(plan)]
	line_of(before[0], "picture")["regions"][4]["holds"] = {}
	before[0]["machine"].update(fields={}, start=None)
	plan.clear()
	plan.update(copy.deepcopy(before[0]))
	plan["machine"]["advance"] = "count"
	plan["before"] = before[0]
	return [change("changed", "advance", section="machine", old="table", new="count"),
		change("added", "clear", section="machine", new="sync"), change("added", "counters", section="timing")] + wired_anew(plan, before[0])


def field_bits(plan, chance):
	if plan["machine"]["form"] != "loop":
		return None
	plan["machine"]["fields"]["at"] = (11, 0)
	return [change("changed", "field at", section="machine", old="bits 12..0", new="bits 11..0")]


def field_renamed(plan, chance):
	fields = plan["machine"]["fields"]
	old = sorted(fields)[0]
	fields["other"] = fields.pop(old)
	for line in plan["lines"]:
		for each in line["regions"]:
			each["holds"] = {"other" if name == old else name: text for name, text in each["holds"].items()}
	return [change("changed", "a field's name", section="in words only", old=old, new="other")]


def start_changed(plan, chance):
	if plan["machine"]["form"] != "loop":
		return None
	plan["machine"]["start"] = 0x3000
	return [change("changed", "start", section="machine", old="0x2000", new="0x3000")]


def timing_value(key, what, value, new):
	def edit(plan, chance):
		plan["timing"][key] = value
		return [change("changed", what, section="timing", new=new)]
	return edit


def sweep_added(plan, chance):
	plan["sweeps"] = [(3, 0, 20)]
	return [change("added", "sweep of bits 3..0 within", section="timing", new="20 ms")]


def sweep_changed(plan, chance):
	plan["before"] = copy.deepcopy(plan)
	plan["before"]["sweeps"] = [(3, 0, 20), (5, 4, 30)]
	plan["sweeps"] = [(5, 4, 30), (3, 0, 25)]
	return [change("changed", "sweep of bits 3..0 within", section="timing", old="20 ms", new="25 ms")]


def note_changed(plan, chance):
	plan["before"] = copy.deepcopy(plan)
	plan["before"]["note"] = "before"
	plan["note"] = "after"
	return [change("changed", "the plan's note", section="in words only", old="before", new="after")]


def name_changed(plan, chance):
	old, plan["name"] = plan["name"], "other-quay"
	return [change("changed", "the plan's name", section="in words only", old=old, new="other-quay")]


def nothing(plan, chance):
	return []


def lines_reordered(plan, chance):
	plan["lines"].reverse()
	return []


EDITS = {
	"nothing": nothing, "lines-reordered": lines_reordered, "edge-moved": edge_moved, "edge-moved-in-two": edge_moved_in_two,
	"region-moved": region_moved, "regions-moved": regions_moved, "widened-with-line": widened_with_line,
	"shorter-with-line": shorter_with_line, "region-added-with-room": region_added_with_room,
	"region-added-far-from-room": region_added_far_from_room, "region-added-with-line": region_added_with_line,
	"region-removed-with-room": region_removed_with_room, "region-removed-far-from-room": region_removed_far_from_room, "region-removed-with-line": region_removed_with_line,
	"region-renamed": region_renamed, "signal-asserted": signal_asserted, "signal-not-asserted": signal_not_asserted,
	"signal-added": signal_added, "signal-removed": signal_removed, "signal-renamed": signal_renamed,
	"signal-inverted": signal_property("active", "high", "active {}".format),
	"signal-lead": signal_property("lead", 1, lambda lead: f"lead {lead} cell{'' if lead == 1 else 's'}"),
	"signal-role": signal_property("role", "vertical sync", str), "stretched-moved": stretched_moved, "stretched-more": stretched_more,
	"hold-changed": hold_changed, "hold-removed": hold_removed, "block-repeat": block_repeat, "block-added": block_added,
	"block-removed": block_removed, "block-moved": block_moved, "block-split": block_split, "line-added": line_added,
	"line-added-unused": line_added_unused, "line-removed": line_removed, "line-renamed": line_renamed,
	"line-renamed-and-edited": line_renamed_and_edited, "line-names-swapped": line_names_swapped,
	"line-names-passed-on": line_names_passed_on, "region-divided": region_divided, "edge-unseen": edge_unseen,
	"clock-master": clock_value("master", "master clock", lambda _: Fraction(14400000), lambda _: "14400000 Hz (14.4 MHz)"),
	"clock-accuracy": clock_value("accuracy", "accuracy", lambda _: Fraction(30), lambda _: "30 ppm"),
	"clock-cell": clock_value("cell", "cell", lambda old: old + 1, lambda new: f"{new} ticks"),
	"clock-stretch": clock_value("stretch", "stretch", lambda _: 5, lambda _: "5 ticks"),
	"clock-subcarrier": clock_value("subcarrier", "subcarrier", lambda _: Fraction(3500000), lambda _: "3500000 Hz (3.5 MHz)"),
	"clock-phase": clock_value("phase", "phase", lambda _: "every 2 frames", lambda _: "every 2 frames"),
	"standard": standard_changed, "grade": grade_changed, "limit": limit_changed, "part": part_changed, "speed": speed_changed,
	"address-pins": pins_swapped("address"), "data-pins": pins_swapped("data"), "label": label_changed, "state-bits": state_bits,
	"outputs": outputs_changed, "advance": advance_changed, "field-bits": field_bits, "field-renamed": field_renamed,
	"start": start_changed, "latch": timing_value("latch", "latch", "74AC574", None),
	"share": timing_value("share", "share", Fraction(9, 10), "9/10"), "margin": timing_value("margin", "margin", Fraction(10), "10 ns"),
	"sweep-added": sweep_added, "sweep-changed": sweep_changed, "note": note_changed, "name": name_changed,
}
