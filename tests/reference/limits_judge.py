"""Asks the program what it measures of a plan, and holds it against what it should. Prints a line for each comparison: `ok` or
`FAILED` first."""

import json
import os
import subprocess
from fractions import Fraction

from limits_catalogue import GRADES, widened

PROGRAM = os.environ.get("SCANLATCH", "build/scanlatch")
TIMEOUT_S = 120


class Broken(Exception):
	"""The program did not answer."""


def run(*arguments):
	"""Standard output of a run that ends with 0, or 1: advice may be missed, as limits are."""
	done = subprocess.run([PROGRAM, *arguments], capture_output=True, text=True, timeout=TIMEOUT_S, check=False)
	if done.returncode not in (0, 1):
		raise Broken(f"status {done.returncode}: {done.stderr.strip().partition(chr(10))[0]}")
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
		return Fraction(entry[prefix + "low"]), Fraction(entry[prefix + "high"])


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

	def judge(self, name, board, answer, predicted):
		"""Every item of the board's standard as predicted, and judged as the catalogue has it."""
		standard = self.standards[board.standard]
		self.same(f"{name}: items", sorted(standard.limits), sorted(answer.items))
		counts = {what: {grade: 0 for grade in GRADES} for what in ("kept", "missed")}
		for item in sorted(set(standard.limits) & set(answer.items)):
			values, found = predicted.get(item), answer.values(item)
			self.verdict(values == found, f"{name}: {item}", shown(values), shown(found))
			if values is not None and values == found:
				self.judge_limits(f"{name}: {item}", board, item, values, answer.items[item], standard.limits[item], counts)
		if all(predicted.get(item) == answer.values(item) for item in set(standard.limits) & set(answer.items)):
			self.judge_counts(name, board, answer, predicted, counts)

	def judge_limits(self, name, board, item, values, entry, limits, counts):
		if board.accuracy:
			low, high = widened(item, *values, board.accuracy.split()[0])
			if (low, high) != values:
				self.verdict(entry.get("accuracy_low") == str(low) and entry.get("accuracy_high") == str(high), f"{name}: accuracy",
					shown((low, high)), (entry.get("accuracy_low"), entry.get("accuracy_high")))
			values = low, high
		for grade in GRADES:
			limit = limits[grade]
			kept = limit.keeps(*values) if limit.binds() else None
			if kept is not None:
				counts["kept" if kept else "missed"][grade] += 1
			self.same(f"{name}: {grade} kept", kept, entry[grade].get("kept"))

	def judge_counts(self, name, board, answer, predicted, counts):
		grade = board.grade or "monitor"
		for what in ("kept", "missed"):
			self.same(f"{name}: {what}", counts[what], answer.limits[what])
		self.same(f"{name}: not measured", sum(item not in predicted for item in self.standards[board.standard].limits),
			answer.limits["unmeasured"])
		self.same(f"{name}: grade", (board.standard, grade), (answer.limits["standard"], answer.limits["grade"]))
		self.same(f"{name}: verdict", "fail" if counts["missed"][grade] else "pass", answer.limits["verdict"])

	def missed(self, name, answer, grade, wanted):
		"""The items that miss the grade are these, or not measured."""
		found = sorted(item for item, entry in answer.items.items() if not entry.get(grade, {}).get("kept", True))
		self.same(f"{name}: misses of the {grade}", sorted(wanted), found)
