"""Judges the images of a set: each bank against its plan, with the jumpers set so.

    oracle_set.py SET FOLDER

Written from design pages 1.6, 1.7 and 2.11. Prints a line for each bank; fails at the first that is wrong."""

import os
import sys

import yaml

import oracle
import oracle_line_frame
from oracle_chips import Fault, chips_of


def banks_of(tree):
	"""The plan's file for every setting of the jumpers: those that are not listed repeat bank 0."""
	count = 1 << int(tree["bank"].split()[0])
	return [tree["banks"].get(str(bank), tree["banks"]["0"]) for bank in range(count)]


def start_of(manifest, bank, plan):
	stage = "line" if plan.machine.form == "line-frame" else "loop"
	return next(entry["state"] for entry in manifest["start"] if (entry["bank"], entry["stage"]) == (bank, stage))


def wire_banks(plan, tree, chips):
	"""Page 2.8: in the short form the bank's bits follow those of state and kind, from A0 on."""
	if isinstance(plan.tree["chips"], list):
		return
	for chip in chips:
		first = sum(wire is not None and wire.split(".")[0] in ("state", "kind") for wire in chip.address)
		for bit in range(int(tree["bank"].split()[0])):
			chip.address[first + bit] = f"bank.{bit}"


def judge_bank(tree, folder, set_folder, bank, file):
	plan = oracle.read_plan(os.path.join(set_folder, file))
	manifest = oracle.load(os.path.join(folder, f"{tree['name']}.manifest.json"))
	chips = chips_of(plan)
	wire_banks(plan, tree, chips)
	for chip in chips:
		with open(os.path.join(folder, f"{tree['name']}.{chip.label}.bin"), "rb") as image:
			chip.image = image.read()
	machine = oracle.prove_musts(plan, chips, start_of(manifest, bank, plan), bank)[0]
	if plan.machine.form == "line-frame":
		oracle_line_frame.check_kinds(plan, machine)
		oracle_line_frame.check_numbering(plan, machine)
	entry = next(entry for entry in manifest["banks"] if bank in entry["banks"])
	if (entry["name"], entry["frame"]["lines"], entry["frame"]["cells"]) != (plan.name, len(plan.lines), plan.cells):
		raise Fault(f"bank {bank}: the manifest tells of another plan: {entry['name']}, {entry['frame']}")


def main(set_path, folder):
	with open(set_path, encoding="utf-8") as file:
		tree = yaml.load(file, Loader=yaml.BaseLoader)
	for bank, file in enumerate(banks_of(tree)):
		judge_bank(tree, folder, os.path.dirname(set_path), bank, file)
		print(f"bank {bank}: {file}")


if __name__ == "__main__":
	main(*sys.argv[1:])
