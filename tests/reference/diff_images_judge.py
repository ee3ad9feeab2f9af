"""Makes pairs of plans with one known edit, builds one of the two, and judges what `scanlatch diff --json` says of its images and the other.

    diff_images_judge.py PROGRAM FOLDER FIRST COUNT

Both ways: images of the old plan against the new one, and the old plan against images of the new one. What an edit must read as is what
diff_edits.py says, as far as pins and states show it: see `shown`. Prints a line for each: "ok EDIT …" or "FAILED EDIT …".
"""
import copy
import json
import os
import random
import shutil
import subprocess
import sys

from diff_edits import EDITS
from diff_judge import matches
from generate_diff import Maker, Writer

# What no pin and no state of the machine's loop shows: names, measures of time, demands on the machine.
UNSEEN = {"nothing", "lines-reordered", "region-renamed", "signal-renamed", "signal-role", "line-renamed", "line-added-unused", "clock-master",
	"clock-accuracy", "clock-cell", "clock-stretch", "clock-subcarrier", "clock-phase", "standard", "grade", "limit", "speed", "field-bits",
	"field-renamed", "latch", "share", "margin", "sweep-added", "sweep-changed", "note", "name"}

# Images of another machine, or with signals on other pins: whatever they are read as, it must be a report or a refusal.
OTHER_MACHINE = {"signal-added", "signal-removed", "part", "address-pins", "data-pins", "label", "state-bits", "outputs", "advance"}


def alike_in(plan, line_name, name):
	"""The regions around one, between which no pin sees an edge."""
	line = next(line for line in plan["lines"] if line["name"] == line_name)
	names = [each["name"] for each in line["regions"]]
	first = last = names.index(name)
	while first > 0 and set(line["regions"][first - 1]["asserts"]) == set(line["regions"][first]["asserts"]):
		first -= 1
	while last + 1 < len(names) and set(line["regions"][last + 1]["asserts"]) == set(line["regions"][last]["asserts"]):
		last += 1
	return names[first:last + 1]


def asserts(change, old, new):
	return {"section": "lines", "kind": "asserts", "what": change["what"] + " asserts", "lines": change["lines"], "old": old, "new": new}


def unnamed(change):
	return {key: value for key, value in change.items() if key != "what"}


def shown(edit, plans, change, to_images):
	"""What a change may read as: a list of alternatives. None: as nothing."""
	if edit == "hold-removed":
		# That anything may be held is no demand; and what images hold then is whatever they do, the old value too.
		return [{"section": "lines", "kind": "hold", "what": change["what"], "old": change["old"]}, None] if to_images else [None]
	if edit in ("widened-with-line", "shorter-with-line"):
		# Which of regions that do the same was lengthened, no pin shows.
		names = alike_in(plans[0], change["lines"][0], change["what"].strip('"'))
		return [dict(change, what=f'"{name}"') for name in names]
	if edit == "line-renamed-and-edited" and to_images:
		# Images take the plan's names.
		return [{key: value for key, value in change.items() if key != "lines"}]
	if edit.startswith("region-added"):
		# Cells that assert more may be a new region, or an old one that was changed; and images have no names.
		return [unnamed(change)] if to_images else [change, asserts(change, "blank", "blank and lamp")]
	if edit.startswith("region-removed") and to_images:
		return [change] + ([asserts(change, "blank and burst", "blank")] if change["what"] == '"burst"' else [])
	if (edit == "line-added" and to_images) or (edit == "line-removed" and not to_images):
		return [unnamed(change)]
	return [change]


def judge(edit, plans, wanted, document, to_images):
	"""What is wrong, or None."""
	plan, = document["plans"]
	if "changes_unknown" in plan:
		return f"not read: {plan['changes_unknown']}"
	found = [change for change in plan["changes"] if change["section"] != "limits"]
	for change in wanted if edit not in UNSEEN else []:
		ways = shown(edit, plans, change, to_images)
		match = next((other for other in found if any(way is not None and matches(way, other) for way in ways)), None)
		if match is None and None in ways:
			continue
		if match is None:
			return f"wanted one of {ways}, found {[other['words'] for other in found]}"
		found.remove(match)
	if found:
		return f"more than wanted: {[change['words'] for change in found]}"
	return None


def run(program, arguments, *statuses):
	result = subprocess.run([program] + arguments, capture_output=True, text=True, timeout=60)
	if result.returncode not in statuses:
		raise ValueError(f"{arguments[0]}: exit status {result.returncode}: {result.stderr}")
	return result


def judge_pair(program, folder, edit, plans, texts, wanted, to_images):
	paths = [os.path.join(folder, side) for side in ("old.yaml", "new.yaml")]
	images = os.path.join(folder, "images")
	for path, text in zip(paths, texts):
		with open(path, "w", encoding="utf-8") as file:
			file.write(text)
	shutil.rmtree(images, ignore_errors=True)
	try:
		run(program, ["build", "--unproven", paths[int(to_images)], "-o", images], 0, 1)
		result = run(program, ["diff", "--json"] + ([paths[0], images] if to_images else [images, paths[1]]),
			*((0, 1, 2) if edit in OTHER_MACHINE else (0, 1)))
	except ValueError as error:
		return str(error)
	if edit in OTHER_MACHINE:
		return None if result.returncode == 2 or json.loads(result.stdout)["plans"] else "no report"
	document = json.loads(result.stdout)
	musts = document["plans"][0]["musts"]["new" if to_images else "old"]
	if result.returncode != (1 if musts else 0):
		return f"exit status {result.returncode}, though musts that fail in the images are {musts}"
	return judge(edit, plans, wanted, document, to_images)


def main():
	program, folder, first, count = sys.argv[1], sys.argv[2], int(sys.argv[3]), int(sys.argv[4])
	for seed in range(first, first + count):
		for edit in EDITS:
			chance = random.Random(f"{seed} {edit}")
			old = Maker(chance, "line-frame" if chance.random() < 0.25 else "loop").plan
			new = copy.deepcopy(old)
			wanted = EDITS[edit](new, chance)
			if wanted is None:
				continue
			old = new.pop("before", old)
			unseen = {"in words only"} | (set() if edit in OTHER_MACHINE else {"wiring"})
			wanted = [change for change in wanted if change["section"] not in unseen]
			new["name"] = old["name"]  # which image files are called by
			style = random.Random(f"{seed} {edit} style") if chance.random() < 0.6 else None
			cuts = not any(change["section"] == "frame" for change in wanted)
			texts = (Writer(old).text(), Writer(new, style, cuts).text())
			for to_images in (False, True):
				flaw = judge_pair(program, folder, edit, (old, new), texts, wanted, to_images)
				way = "to-images" if to_images else "from-images"
				print(f"ok {edit} {way} {seed}" if flaw is None else f"FAILED {edit} {way} {seed}: {flaw}")


main()
