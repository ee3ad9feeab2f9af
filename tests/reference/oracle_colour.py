#!/usr/bin/python3
"""Colour worked out anew from a plan: cycles of lines, the phase at their starts, repeats, the first line out of step.

	oracle_colour.py PLAN…     judges what `check --json` printed of each PLAN to PLAN.json; prints `ok`, `refused` or `FAILED`,
	                           the plan, and what sort of colour it has. Refused: there is no document, or the plan is wrong
	                           otherwise than in its line lengths. Fails when a line FAILED

Phases are relative to line 0, exact fractions of a cycle, those of a program's document laid out line by line.
"""

import json
import os
import sys
from fractions import Fraction

from oracle_chips import Fault
from oracle_plan import Refused, plan_of_file

# Lines beyond which repeats are not tried one after the other.
MOST_LINES = 20_000


def agree(name, wanted, found):
	if wanted != found:
		raise Fault(f"colour: {name}: expected {wanted!r}, found {found!r}")


def phases_of(clock, lengths, count):
	"""The phase at the start of so many lines of the endless sequence."""
	ticks = 0
	phases = []
	for number in range(count):
		phases.append(clock.cycles(ticks) % 1)
		ticks += lengths[number % len(lengths)]
	return phases


def laid_out(document, count):
	"""The same from "phases" of a document, by the rule in src/view/proofs.h."""
	period, advance, runs = document["period"], Fraction(document["advance"]), document["runs"]
	agree("keys of phases", ["period", "advance", "runs"], list(document))
	starts, total = [], Fraction(0)
	for run in runs:
		agree("line of a run", len(starts), run["line"])
		phase, step = Fraction(run["phase"]), Fraction(run["advance"])
		if not (0 <= phase < 1 and 0 <= step < 1 and run["lines"] > 0):
			raise Fault(f"colour: {run} is no run")
		starts += [phase + step * line for line in range(run["lines"])]
		total += step * run["lines"]
	agree("lines of all runs", period, len(starts))
	agree("advance of a period", total % 1, advance)
	if any(run["advance"] == after["advance"] for run, after in zip(runs, runs[1:])):
		raise Fault("colour: two runs that are one")
	return [(starts[line % period] + line // period * advance) % 1 for line in range(count)]


def shifted_alike(phases, lines, shift):
	return all(phases[line + shift] == phases[line] for line in range(lines))


def repeats_of(clock, lengths, frames):
	"""The fewest lines after which the phase is the same again whatever the line; None if there are too many to try."""
	most = len(lengths) * frames
	if most > MOST_LINES:
		return None
	phases = phases_of(clock, lengths, most + len(lengths))
	return next(shift for shift in range(1, most + 1) if shifted_alike(phases, len(lengths), shift))


def first_out_of_step(clock, lengths):
	"""As the document has it; None where nothing is out of step."""
	if clock.phase is None:
		return None
	count, unit = clock.phase
	lines = len(lengths)
	shift = count * lines if unit == "frame" else count
	phases = phases_of(clock, lengths, shift + lines)
	for line in range(lines):
		if phases[line] != phases[line + shift]:
			return {"line": (line + shift) % lines, "frame": (line + shift) // lines,
				"by": str((phases[line + shift] - phases[line]) % 1)}
	return None


def check_figures(clock, lengths, proof):
	frame = clock.cycles(sum(lengths))
	agree("cycles of a frame", str(frame), proof["cycles_per_frame"])
	agree("cycles of line 0", str(clock.cycles(lengths[0])), proof["cycles_per_line"])
	agree("all lines alike", len(set(lengths)) == 1, proof["uniform"])
	agree("phase repeats after frames", frame.denominator, proof["repeats_frames"])
	repeats = repeats_of(clock, lengths, frame.denominator)
	if repeats is not None:
		agree("phase repeats after lines", repeats, proof["repeats_lines"])
	count = min(proof["repeats_lines"] + 2, MOST_LINES) + len(lengths)
	wanted, found = phases_of(clock, lengths, count), laid_out(proof["phases"], count)
	if wanted != found:
		line = next(line for line in range(count) if wanted[line] != found[line])
		raise Fault(f"colour: line {line} starts at {wanted[line]}, found {found[line]}")
	out_of_step = first_out_of_step(clock, lengths)
	agree("first line out of step", out_of_step, proof.get("out_of_step"))
	agree("verdict", "pass" if out_of_step is None else "fail", proof["verdict"])


def check_plan(plan, document):
	"""Judges `check --json`; returns words for what sort of colour that was."""
	clock, proof = plan.clock, document["proofs"]["colour"]
	if clock.subcarrier is None:
		agree("verdict without a subcarrier", "absent", proof["verdict"])
		agree("lines with cycles", [], [line["name"] for line in document["lines"] if "cycles" in line])
		return "no subcarrier"
	for line in document["lines"]:
		agree(f"cycles of {line['name']}", str(clock.cycles(plan.line_types[line["name"]].ticks(clock))), line["cycles"])
	lengths = [line.ticks(clock) for line, _, _ in plan.lines]
	check_figures(clock, lengths, proof)
	sort = ["uniform" if proof["uniform"] else "uneven", proof["verdict"]]
	sort += ["repeats later"] if proof["repeats_lines"] > len(lengths) else []
	sort += ["free"] if clock.phase is None else []
	sort += [f"{len(proof['phases']['runs'])} runs"]
	return ", ".join(sort)


def judge(path):
	if os.path.getsize(path + ".json") == 0:
		return "refused", "no document"
	with open(path + ".json", encoding="utf-8") as document:
		try:
			return "ok", check_plan(plan_of_file(path), json.load(document))
		except Refused as reason:
			return "refused", str(reason)
		except Fault as fault:
			return "FAILED", str(fault)


def main(paths):
	failed = 0
	for path in paths:
		verdict, words = judge(path)
		failed += verdict == "FAILED"
		print(f"{verdict} {path}: {words}")
	return 1 if failed or not paths else 0


if __name__ == "__main__":
	sys.exit(main(sys.argv[1:]))
