#!/usr/bin/python3
"""Round trips: plan, images, lifted plan, images again.

	lift_trip.py WORK PLAN …

For each plan a line: "ok PLAN: …", "skipped PLAN: …" (no images could be built of it), "refused PLAN: RULE" (no raster) or "WRONG
PLAN: …"; after "ok", another of the images with a bit flipped, "damaged ok PLAN: …" or "damaged refused PLAN: RULE". Timelines are laid out from the texts by oracle_plan.py, which was written from the design pages without a look at the
program, and compared cell by cell, asserted signals, pins and ticks, up to where the frame begins and how many laps it has. Plans
with pinned states must give back the very bytes. The prover finds the images, damaged ones too, to keep to the plan that was lifted
from them: closure and signals. The board of every other plan is written without lines and frame.
"""

import os
import random
import re
import subprocess
import sys

import yaml

from oracle_plan import Plan, Refused

PROGRAM = os.environ["SCANLATCH"]


class Wrong(Exception):
	pass


def run(*arguments):
	return subprocess.run([PROGRAM, *arguments], stdin=subprocess.DEVNULL, capture_output=True, text=True, timeout=60, check=False)


def build(path, folder, may_fail=("closure", "colour", "power-up", "sweep", "signals"), must_fail=()):
	"""The images of a plan by file name, proved but for what may or must fail; None where there are none."""
	done = run("build", path, "-o", folder, "--format", "bin", "--unproven")
	if done.returncode not in (0, 1):
		return None, done.stderr
	for line in done.stdout.splitlines():
		if line.startswith("FAIL") and line.split()[1] not in may_fail:
			raise Wrong(f"{path}: {line}")
	for proof in must_fail:
		if f"\nFAIL  {proof} " not in done.stdout:
			raise Wrong(f"{path}: {proof} should have failed")
	images = {}
	for name in os.listdir(folder):
		if name.endswith(".bin"):
			with open(os.path.join(folder, name), "rb") as file:
				images[name] = file.read()
	return images, ""


def cells_of(plan):
	names = sorted(plan.asserted)
	columns = [plan.asserted[name] for name in names] + [plan.pins[name] for name in names] + [plan.cell_ticks]
	return list(zip(*columns))


def shortest_period(cells):
	"""The shortest run that the cells repeat: by the failure function of Knuth, Morris and Pratt (1977)."""
	border = [0] * len(cells)
	length = 0
	for index in range(1, len(cells)):
		while length and cells[index] != cells[length]:
			length = border[length - 1]
		length += cells[index] == cells[length]
		border[index] = length
	period = len(cells) - border[-1]
	return cells[:period] if len(cells) % period == 0 else cells


def same_round(left, right):
	"""Whether two sequences, going round for ever, are the same but for where they begin."""
	left, right = shortest_period(left), shortest_period(right)
	if len(left) != len(right):
		return False
	letters = {cell: chr(0x100 + number) for number, cell in enumerate(dict.fromkeys(left + right))}
	text = "".join(letters[cell] for cell in left)
	return "".join(letters[cell] for cell in right) in text + text


def read(path):
	with open(path, encoding="utf-8") as file:
		return file.read()


def write(path, text):
	with open(path, "w", encoding="utf-8") as file:
		file.write(text)


def board_of(path, work, number):
	"""The plan itself, or a file without lines and frame, which then says the kind's bits."""
	if number % 2 == 0:
		return path
	tree = yaml.load(read(path), yaml.BaseLoader)
	machine = tree["machine"]
	if machine["form"] == "line-frame" and "kind" not in machine:
		machine["kind"] = f"{(len(tree['lines']) - 1).bit_length()} bits"
	del tree["lines"], tree["frame"]
	board = os.path.join(work, "board.yaml")
	write(board, yaml.dump(tree, sort_keys=False, allow_unicode=True))
	return board


def cut_options(plan):
	if plan.machine.form != "loop" or plan.tree["signals"].get("cut", {}).get("role") != "plain":
		return ["--cut", "mark"] if "mark" in plan.tree["signals"] else []
	return ["--cut", "cut"]


def lift(board, images, out, *options):
	done = run("lift", *options, board, images, "-o", out)
	for rule in ("lift-raster", "lift-size"):
		if done.returncode == 2 and f"[{rule}]" in done.stderr:
			return rule
	if done.returncode not in (0, 1) or not os.path.exists(out):
		raise Wrong(f"lift {' '.join(options)}: status {done.returncode} {done.stdout[-500:]}{done.stderr[-800:]}")
	failed = re.findall(r"cannot be built as it stands: it fails the proof (\S+?):? ", done.stderr)
	if failed:
		return "fails " + " ".join(failed)
	if "cannot be built as it stands" in done.stderr:
		return "lift-near"
	if done.returncode == 1 and "[lift-loops]" not in done.stderr:
		raise Wrong(f"lift {' '.join(options)} found something: {done.stderr[-800:]}")
	return None


def keeps_to(lifted, images):
	"""Whether the prover finds images to follow a plan, in bank 0; whether they come home from elsewhere is not the plan's affair."""
	done = run("prove", lifted, images)
	if done.returncode not in (0, 1):
		raise Wrong(f"prove: status {done.returncode} {done.stderr[-500:]}")
	failed, follow = False, True
	for line in done.stdout.splitlines():
		if not line.startswith(" "):
			failed = line.startswith(("FAIL  closure", "FAIL  signals"))
		elif failed and line.startswith("      at line"):
			follow = follow and bool(re.search(r"bank [1-9]", line))
	return follow


def flip_bit(images, folder, seed):
	"""The images with one bit flipped, in a folder."""
	chance = random.Random(seed)
	name = chance.choice(sorted(images))
	os.makedirs(folder)
	for other, image in images.items():
		damaged = bytearray(image)
		if other == name:
			damaged[chance.randrange(len(image))] ^= 1 << chance.randrange(8)
		with open(os.path.join(folder, other), "wb") as file:
			file.write(damaged)


def damaged_trip(path, board, images, work, options):
	folder, lifted = os.path.join(work, "damaged"), os.path.join(work, "damaged.yaml")
	flip_bit(images, folder, os.environ.get("DAMAGE", "") + os.path.basename(path))
	refusal = lift(board, folder, lifted, *options)
	if refusal:
		return f"damaged refused {path}: {refusal}"
	# Two stages may go through lines that no plan numbers or begins like that.
	beyond = "# The images number the frame's lines otherwise" in read(lifted) or "# The lines of the images begin in different" in read(lifted)
	if not beyond and not keeps_to(lifted, folder):
		raise Wrong("damaged images do not keep to the plan that was lifted from them")
	return f"damaged ok {path}"


def trip(path, work, number):
	try:
		plan = Plan(read(path))
	except Refused as refused:
		return f"skipped {path}: {refused}"
	first = os.path.join(work, "first")
	images, why = build(path, first)
	if images is None:
		return f"skipped {path}: {why.splitlines()[0]}"
	board = board_of(path, work, number)
	lifted, pinned = os.path.join(work, "lifted.yaml"), os.path.join(work, "pinned.yaml")
	options = cut_options(plan)
	refusal = lift(board, first, lifted, *options)
	if refusal in ("lift-size", "lift-near"):
		raise Wrong(f"what a plan made is none by {refusal}")
	# Lines that are cut elsewhere may meet another phase, and states that are chosen anew another sweep: that must have been said.
	fails = refusal.split()[1:] if refusal and refusal.startswith("fails ") else []
	if refusal and not fails:
		return f"refused {path}: {refusal}"
	again, why = build(lifted, os.path.join(work, "again"), fails, fails)
	if again is None:
		raise Wrong(f"the lifted plan is not built: {why}")
	if not same_round(cells_of(plan), cells_of(Plan(read(lifted)))):
		raise Wrong("the lifted plan lays out another timeline")
	if not keeps_to(lifted, first):
		raise Wrong("the images do not keep to the lifted plan")
	lift(board, first, pinned, "--near", *options)
	if not same_round(cells_of(plan), cells_of(Plan(read(pinned)))):
		raise Wrong("the plan with pinned states lays out another timeline")
	near, why = build(pinned, os.path.join(work, "near"))
	if near != images:
		raise Wrong(f"the plan with pinned states gives back other bytes {why}")
	cells, held = len(plan.places), "held" if "hold:" in read(lifted) else "free"
	return f"ok {path}: {cells} cells, {held}\n{damaged_trip(path, board, images, work, options)}"


def main(arguments):
	for number, path in enumerate(arguments[1:]):
		work = os.path.join(arguments[0], os.path.basename(path).removesuffix(".yaml"))
		os.makedirs(work)
		try:
			print(trip(path, work, number), flush=True)
		except Wrong as wrong:
			print(f"WRONG {path}: {wrong}".replace("\n", " | "), flush=True)
	return 0


if __name__ == "__main__":
	sys.exit(main(sys.argv[1:]))
