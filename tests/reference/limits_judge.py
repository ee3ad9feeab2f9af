"""Asks the program what it measures of a plan, and holds it against what it should. Prints a line for each comparison: `ok` or
`FAILED` first."""

import json
import os
import subprocess
from fractions import Fraction

from limits_catalogue import GRADES, TIMES, UNITS, fits, widened

PROGRAM = os.environ.get("SCANLATCH", "build/scanlatch")
TIMEOUT_S = 120


class Broken(Exception):
	"""The program did not answer."""


def run(*arguments):
	"""Standard output of a run that ends with 0, or 1: advice may be missed, as limits are."""
	done = subprocess.run([PROGRAM, *arguments], capture_output=True, text=True, timeout=TIMEOUT_S, check=False)
	if done.returncode not in (0, 1):
		errors = [line for line in done.stderr.splitlines() if "error: " in line]
		raise Broken(f"status {done.returncode}: {errors[0] if errors else done.stderr}")
	return done.stdout


class Answer:
	"""What the program says of a plan's limits."""

	def __init__(self, report):
		self.frame = report.get("frame")
		self.limits = report["proofs"]["limits"]
		self.items = {entry["item"]: entry for entry in self.limits["items"]}

	def values(self, item, prefix=""):
		"""(low, high), or None if the item was not measured."""
		entry = self.items[item]
		if prefix + "low" not in entry:
			return None
		unit = UNITS.get(entry["unit"], 1)
		return Fraction(entry[prefix + "low"]) * unit, Fraction(entry[prefix + "high"]) * unit


def written(board, folder):
	"""The path of the board's plan."""
	path = os.path.join(folder, board.name + ".yaml")
	with open(path, "w", encoding="utf-8") as file:
		file.write(board.yaml())
	return path


def checked(plan):
	return Answer(json.loads(run("check", "--json", plan)))


def proved(plan, folder):
	run("build", plan, "-o", folder, "--format", "bin")
	return Answer(json.loads(run("prove", "--json", plan, folder)))


def has_room(item, low, high):
	"""Whether the values fit into 64 bits, also in the unit in which they are shown."""
	units = (1, Fraction(1, 10**6) if item in TIMES else 10**6)
	return all(fits(value / unit) for value in (low, high) for unit in units)


def shown(values):
	return "not measured" if values is None else " to ".join(map(str, values if values[0] != values[1] else values[:1]))


class Judge:
	def __init__(self, standards):
		self.standards = standards

	@staticmethod
	def verdict(holds, name, wanted="", found=""):
		print(f"ok {name}" if holds else f"FAILED {name}: wanted {wanted}, found {found}")

	def same(self, name, wanted, found):
		self.verdict(wanted == found, name, wanted, found)

	def judge(self, name, board, answer, predicted, readings=None, pauses=True, stray_tick=None):
		"""Every item of the board's standard as predicted, or as one of its other readings, and judged as the catalogue has it.
		pauses: whether the lines without burst are those that the standard numbers; None: left to the program. stray_tick:
		at which the first sync pulse begins that belongs to nothing."""
		standard = self.standards[board.standard]
		self.same(f"{name}: items", sorted(standard.limits), sorted(answer.items))
		counts = {what: {grade: 0 for grade in GRADES} for what in ("kept", "missed", "not measured")}
		agreed = True
		for item in sorted(set(standard.limits) & set(answer.items)):
			allowed = [predicted.get(item), *(readings or {}).get(item, [])]
			found = answer.values(item)
			self.verdict(found in allowed, f"{name}: {item}", " or ".join(map(shown, allowed)), shown(found))
			agreed = agreed and found in allowed
			if found in allowed and len(allowed) > 1:
				print(f"open {name}: {item}: {' or '.join(map(shown, allowed))}, found {shown(found)}")
			self.judge_limits(f"{name}: {item}", board, item, answer, standard.limits[item], pauses, counts)
		if agreed:
			self.judge_counts(name, board, answer, counts, stray_tick)

	def judge_limits(self, name, board, item, answer, limits, pauses, counts):
		"""By what the program itself found."""
		values = answer.values(item)
		if values and board.accuracy:
			low, high = widened(item, *values, board.accuracy.split()[0])
			found = answer.values(item, "accuracy_")
			if (low, high) != values and (found or has_room(item, low, high)):
				self.verdict(found == (low, high), f"{name}: accuracy", shown((low, high)), shown(found))
			values = low, high
		for grade in GRADES:
			limit = limits[grade]
			found = answer.items[item][grade].get("kept")
			if not limit.binds():
				self.same(f"{name}: {grade} kept", None, found)
				continue
			kept = limit.keeps(*values) if values else None
			if item == "lines without burst" and grade == "studio" and kept is not None:
				kept = kept and (answer.limits.get("burst_pauses_kept", True) if pauses is None else pauses)
			if found is None and kept is not None and not limit.fits(*values):
				print(f"open {name}: {grade} kept: not judged, as numbers do not fit")
				kept = None
			counts["not measured" if kept is None else "kept" if kept else "missed"][grade] += 1
			self.same(f"{name}: {grade} kept", kept, found)

	def judge_counts(self, name, board, answer, counts, stray_tick):
		grade = board.grade or "monitor"
		for what in ("kept", "missed"):
			self.same(f"{name}: {what}", counts[what], answer.limits[what])
		self.same(f"{name}: not measured", counts["not measured"], answer.limits["not_measured"])
		self.same(f"{name}: grade", (board.standard, grade), (answer.limits["standard"], answer.limits["grade"]))
		fails = stray_tick is not None or counts["missed"][grade] > 0
		self.same(f"{name}: verdict", "fail" if fails else "pass", answer.limits["verdict"])
		cell = answer.limits.get("counterexample", {}).get("frame_cell")
		self.same(f"{name}: stray", stray_tick, None if cell is None else board.tick_of_cell()[cell])

	def judge_places(self, name, board, answer, begins):
		"""The lowest and highest values begin where they do. begins: item to a map from values to ticks."""
		ticks = board.tick_of_cell()
		for item in sorted(set(begins) & set(answer.items)):
			for end, value in zip(("low_at", "high_at"), answer.values(item) or ()):
				tick = ticks[answer.items[item][end]["frame_cell"]]
				allowed = begins[item].get(value, set())
				self.verdict(tick in allowed, f"{name}: {item}: {end}", f"tick {sorted(allowed)[:3]}", tick)

	def missed(self, name, answer, grade, wanted):
		"""The items that miss the grade are these, or not measured."""
		found = sorted(item for item, entry in answer.items.items() if not entry.get(grade, {}).get("kept", True))
		self.same(f"{name}: misses of the {grade}", sorted(wanted), found)
