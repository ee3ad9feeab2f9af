"""Makes pairs of plans with one known edit, and judges what `scanlatch diff --json` says of each.

    diff_judge.py PROGRAM FOLDER FIRST COUNT

Prints a line for each pair: "ok EDIT …" or "FAILED EDIT …".
"""
import copy
import json
import os
import random
import subprocess
import sys

from diff_edits import EDITS
from generate_diff import Maker, Writer


def matches(wanted, found):
	return all(value is None or found.get(key) == value for key, value in wanted.items()) and ("also" in wanted or "also" not in found)


def keeps_timeline(change):
	"""Whether every cell still asserts, holds and lasts what it did. Of the stretch it depends on whether cells are stretched."""
	if change["section"] == "clock":
		return change["what"] in {"accuracy", "subcarrier", "phase"}
	if change["section"] == "signals":
		return change["kind"] == "changed"
	return change["section"] not in {"lines", "frame"} and not change["what"].startswith("field ")


def judge(wanted, document):
	"""What is wrong, or None. Limits that changed verdict follow from edits."""
	if len(document["plans"]) != 1:
		return "other than one plan"
	found = [change for change in document["plans"][0]["changes"] if change["section"] != "limits"]
	for change in wanted:
		match = next((other for other in found if matches(change, other)), None)
		if match is None:
			return f"wanted {change}"
		found.remove(match)
	if found:
		return f"more than wanted: {found}"
	differs = any(change["section"] != "in words only" for change in wanted)
	if document["differs"] != differs:
		return f"differs: {document['differs']}"
	same = all(keeps_timeline(change) for change in wanted)
	if document["same_timeline"] != same and not any(change["what"] == "stretch" for change in wanted):
		return f"same timeline: {document['same_timeline']}"
	return None


def run(program, folder, name, plans, wanted):
	paths = []
	for side, text in zip(("old", "new"), plans):
		paths.append(os.path.join(folder, f"{name}-{side}.yaml"))
		with open(paths[-1], "w", encoding="utf-8") as file:
			file.write(text)
	result = subprocess.run([program, "diff", "--json"] + paths, capture_output=True, text=True, timeout=60)
	differs = any(change["section"] != "in words only" for change in wanted)
	if result.returncode != int(differs):
		return f"exit status {result.returncode}: {result.stderr}"
	return judge(wanted, json.loads(result.stdout))


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
			style = random.Random(f"{seed} {edit} style") if chance.random() < 0.6 else None
			cuts = not any(change["section"] == "frame" for change in wanted)
			texts = (Writer(old).text(), Writer(new, style, cuts).text())
			flaw = run(program, folder, f"{edit}-{seed}", texts, wanted)
			print(f"ok {edit} {seed}" if flaw is None else f"FAILED {edit} {seed}: {flaw}")


if __name__ == "__main__":
	main()
