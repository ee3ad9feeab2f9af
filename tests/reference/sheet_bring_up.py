"""Holds the bring-up tables of build sheets against a count of its own: the second implementation's machine is run on the images, and its
pins are looked at cell by cell.

	sheet_bring_up.py < lines PLAN<TAB>FOLDER<TAB>PAGE

FOLDER has the images of `build PLAN --format bin`, PAGE is what `sheet PLAN` wrote. Prints a line for each page: `ok` or `FAILED`, the plan,
and what was found; fails if one FAILED."""

import re
import sys
import xml.etree.ElementTree as ElementTree
from fractions import Fraction

import oracle
from oracle_chips import Fault
from oracle_machine import asserted_pins, cell_ticks

XHTML = "{http://www.w3.org/1999/xhtml}"


def words(element):
	return "".join(element.itertext())


def small(element):
	"""The exact value, which stands below the rounded one."""
	found = element.find(XHTML + "small")
	return None if found is None else found.text


class Page:
	"""The rows of the (first) bring-up table: for each net its rounded and exact frequency and part, and what was counted."""

	def __init__(self, path):
		tree = ElementTree.parse(path)
		table = next(table for table in tree.iter(XHTML + "table") if table.get("class") == "bring-up")
		self.order = []
		self.rows = {}
		for row in table.find(XHTML + "tbody"):
			name = words(row[0])
			if name in self.rows:
				raise Fault(f"{name} is there twice")
			self.order.append(name)
			self.rows[name] = (row[2].text, small(row[2]), row[3].text, small(row[3]), row.get("title"), words(row[4]))


def rises_and_high(levels, ticks):
	"""Rising edges of one lap that is run for ever, and the ticks for which the level is 1."""
	rises = sum(1 for before, level in zip([levels[-1]] + levels[:-1], levels) if level and not before)
	return rises, sum(length for level, length in zip(levels, ticks) if level)


def bit_of(values, bit):
	return [value >> bit & 1 for value in values]


def stage_nets(plan, machine, name, stage, states, addresses):
	"""State bits and clear of a stage, by the names of the page."""
	prefix = "" if plan.machine.form == "loop" else name + " "
	nets = {f"{prefix}state.{bit}": bit_of(states, bit) for bit in range(stage.bits)}
	if stage.counted:
		clear = machine.rows_of["loop" if prefix == "" else name].clear
		nets[f"{prefix}clear"] = [int(clear[address]) for address in addresses]
	return nets


def levels_of_nets(plan, machine, pins):
	"""The level of every net in each cell of the second lap."""
	lap = slice(plan.cells, 2 * plan.cells)
	if plan.machine.form == "loop":
		nets = stage_nets(plan, machine, "loop", plan.machine, machine.states[lap], machine.states[lap])
	else:
		nets = stage_nets(plan, machine, "line", plan.machine.line, machine.states[lap], machine.read_rows("line")[lap])
		nets |= stage_nets(plan, machine, "frame", plan.machine.frame, machine.frame_states[lap], machine.frame_states[lap])
		nets["step"] = [int(step) for step in machine.steps[lap]]
		kinds = machine.kinds[lap]
		nets |= {f"kind.{bit}": bit_of(kinds, bit) for bit in range(kind_bits(plan))}
	for signal in plan.signals:
		nets[signal.name] = [int(level != signal.active_low) for level in pins[signal.name][lap]]
	return nets


def kind_bits(plan):
	"""Page 2.7: as many as the line types need, unless more are asked for."""
	asked = plan.tree["machine"].get("kind")
	return int(asked.split()[0]) if asked is not None else (len(plan.tree["lines"]) - 1).bit_length()


def divider_nets(plan, ticks):
	"""A binary counter that counts each cell's ticks from 0."""
	counts = [count for length in ticks for count in range(length)]
	longest = plan.clock.cell + plan.clock.stretch
	ones = [1] * len(counts)
	return {f"divider bit {bit}": rises_and_high(bit_of(counts, bit), ones) for bit in range((longest - 1).bit_length())}


def expect(name, what, wanted, found):
	if wanted != found:
		raise Fault(f"{name}: {what}: wanted {wanted}, found {found}")


def check_rounded(name, exact, text, places, units):
	"""A decimal of at most so many places, off by no more than half of the last."""
	number, unit = text.rsplit(" ", 1)
	if abs(Fraction(number) * units[unit] - exact) * 2 > Fraction(units[unit], 10 ** places):
		raise Fault(f"{name}: {text} is not {float(exact)}")


RATES = {"Hz": 1, "kHz": 1000, "MHz": 1000000}


def check_net(page, name, rises, high, total, master):
	rate, exact_rate, part, exact_part, title, _ = page.rows[name]
	if title is not None:
		expect(name, "counted", (rises, high, total), tuple(int(number) for number in
			re.search(r": rises (\d+) times in a frame, high for (\d+) of (\d+) ticks$", title).groups()))
	if rises == 0:
		expect(name, "frequency", "steady high" if high else "steady low", rate)
		return
	expect(name, "exact frequency", f"{master * rises / total} Hz", exact_rate)
	check_rounded(name, master * rises / total, rate, 6, RATES)
	expect(name, "exact part", str(Fraction(high, total)), exact_part)
	check_rounded(name, Fraction(high, total), part, 4, {"%": Fraction(1, 100)})


def check_order(plan, page):
	"""Clock first, then the divider, states from the lowest bit on, sync before other signals."""
	def places(test):
		return [index for index, name in enumerate(page.order) if test(name)]
	if page.order[0] != "master clock":
		raise Fault("the master clock is not first")
	states = [name for name in page.order if re.fullmatch(r"(line )?state\.\d+", name)]
	expect("order", "of state bits", sorted(states, key=lambda name: int(name.split(".")[1])), states)
	signals = {signal.name: signal.role for signal in plan.signals}
	dividers, last_state = places(lambda name: name.startswith("divider")), max(places(lambda name: "state." in name))
	first_signal = min(places(lambda name: name in signals), default=len(page.order))
	if dividers and max(dividers) > min(places(lambda name: "state." in name)) or last_state > first_signal:
		raise Fault(f"order: {page.order}")
	roles = [signals[name] for name in page.order[first_signal:]]
	if sorted(roles, key=lambda role: (role == "plain", "sync" not in role)) != roles:
		raise Fault(f"order of signals: {roles}")


def check_page(plan_path, folder, page_path):
	plan = oracle.read_plan(plan_path)
	chips = oracle.read_images(plan, folder, "bin", 16)
	machine = oracle.machine_run(plan, chips, oracle.start_of(plan, folder))
	pins = asserted_pins(plan, machine)
	ticks = cell_ticks(plan, machine, pins)
	total, master = sum(ticks), plan.clock.master
	page = Page(page_path)
	counted = {name: rises_and_high(levels, ticks) for name, levels in levels_of_nets(plan, machine, pins).items()}
	counted |= divider_nets(plan, ticks)
	for name, (rises, high) in counted.items():
		check_net(page, name, rises, high, total, master)
	expect("master clock", "exact frequency", f"{master} Hz", page.rows["master clock"][1])
	if "cells" in page.rows:
		expect("cells", "exact frequency", f"{master * len(ticks) / total} Hz", page.rows["cells"][1])
	others = set(page.rows) - set(counted) - {"master clock", "cells", "dots", "subcarrier"}
	expect("rows", "that nothing here drives", set(), others)
	check_order(plan, page)
	return f"{len(counted)} nets"


def main():
	failed = False
	for line in sys.stdin:
		plan, folder, page = line.rstrip("\n").split("\t")
		try:
			print("ok", plan, check_page(plan, folder, page), sep="\t")
		except Fault as fault:
			failed = True
			print("FAILED", plan, fault, sep="\t")
	sys.exit(failed)


if __name__ == "__main__":
	main()
