"""Checks NAME.manifest.json against page 3.1: names, sums, start, frame, and the figures of proofs worked out here."""

import json
import os
import zlib
from fractions import Fraction

import oracle_line_frame
import oracle_machine
from oracle_chips import Fault, bank_count
from oracle_colour import check_figures
from oracle_machine import codes_seen, glitch_edges, multi_bit_edges
from oracle_plan import quantity_of

PROOFS = ["closure", "signals", "colour", "power-up", "upset", "limits", "glitches", "speed", "sweep"]
MUSTS = {"closure", "signals", "colour", "power-up", "sweep"}


def expect(name, wanted, found):
	if wanted != found:
		raise Fault(f"manifest: {name}: expected {wanted!r}, found {found!r}")


def close(name, wanted, found):
	"""A rounded value may be off by half a unit of its sixth decimal."""
	if abs(Fraction(found) - wanted) > Fraction(1, 10**6) + abs(wanted) / 10**12:
		raise Fault(f"manifest: {name}: expected {float(wanted)}, found {found}")


def crc32(data):
	return f"{zlib.crc32(data):08x}"


def load(path):
	def pairs(items):
		names = [name for name, _ in items]
		expect("keys of an object", len(set(names)), len(names))
		return dict(items)
	with open(path, encoding="utf-8") as file:
		return json.load(file, object_pairs_hook=pairs)


def check_head(plan, plan_path, manifest):
	expect("keys", ["format", "name", "plan", "chips", "start", "frame", "proofs"], list(manifest))
	expect("format", 1, manifest["format"])
	expect("name", plan.name, manifest["name"])
	with open(plan_path, "rb") as file:
		expect("plan", {"file": os.path.basename(plan_path), "crc32": crc32(file.read())}, manifest["plan"])


def check_chips(plan, chips, folder, formats, manifest):
	expect("number of chips", len(chips), len(manifest["chips"]))
	for chip, entry in zip(chips, manifest["chips"]):
		if plan.machine.form == "line-frame":
			expect(f"chip {chip.label}: stage", chip.stage, entry.pop("stage", chip.stage))
		files = [f"{plan.name}.{chip.label}.{kind}" for kind in formats]
		expect(f"chip {chip.label}", {"label": chip.label, "part": chip.part, "bytes": chip.capacity, "crc32": crc32(chip.image),
			"sum16": sum(chip.image) % 65536, "files": files, "address": [wire or "-" for wire in chip.address],
			"data": [wire or "-" for wire in chip.data]}, entry)
	wanted = sorted(name for entry in manifest["chips"] for name in entry["files"]) + [f"{plan.name}.manifest.json"]
	expect("files in the folder", sorted(wanted), sorted(os.listdir(folder)))


def check_start(plan, chips, machine, manifest):
	"""Of two stages the page does not say which comes first."""
	first = {"loop": machine.states[0]}
	if plan.machine.form == "line-frame":
		first = {"frame": machine.frame_states[0], "line": machine.states[0]}
	wanted = [{"bank": bank, "stage": stage, "state": state} for bank in range(bank_count(chips))
		for stage, state in first.items()]
	expect("start", wanted, sorted(manifest["start"], key=lambda entry: (entry["bank"], entry["stage"])))


def check_frame(plan, ticks, frame):
	rate = plan.clock.master / sum(ticks)
	expect("keys of frame", ["lines", "cells", "ticks", "rate"], list(frame))
	expect("frame lines, cells, ticks", (len(plan.lines), plan.cells, str(sum(ticks))),
		(frame["lines"], frame["cells"], frame["ticks"]))
	expect("rate", str(rate), frame["rate"]["fraction"])
	close("rate", rate, frame["rate"]["decimal"])


def verdict(proofs, name, wanted):
	expect(f"{name}: verdict", wanted, proofs[name]["verdict"])
	return proofs[name]


def check_codes(plan, machine, proof):
	"""Codes listed are given back; codes chosen contain those that are seen, and none that is seen where it must not be."""
	expect("signals: coded signals", sorted(signal.name for signal in plan.signals if signal.field), sorted(proof["codes"]))
	for signal in plan.signals:
		if signal.field is None:
			continue
		given = set(proof["codes"][signal.name])
		if signal.codes is not None:
			expect(f"signals: codes of {signal.name}", set(signal.codes), given)
			continue
		if machine.field_levels(signal, given)[:plan.cells] != [bool(level) for level in plan.pins[signal.name]]:
			raise Fault(f"manifest: signals: codes {sorted(given)} do not make {signal.name}")


def check_power_up(plan, machine, longest, banks, proof):
	cells, states = longest
	expect("power-up: states", banks * machine.size, proof["states"])
	two = plan.machine.form == "line-frame"
	frame = machine.feedback if two else machine.states
	expect("power-up: frame states", len(set(frame[:plan.cells])), proof["frame_states"])
	if states is None and proof["longest_cells"] < cells:
		raise Fault(f"manifest: power-up: the longest way takes {cells} cells or more, not {proof['longest_cells']}")
	if states is not None:
		expect("power-up: longest way", cells, proof["longest_cells"])
	if cells and not two and proof["longest_state"] not in states:
		raise Fault(f"manifest: power-up: state {proof['longest_state']:#x} has not the longest way")
	expect("power-up: lost states", 0, proof["lost_states"])


def check_upset(plan, machine, banks, proof):
	proofs = oracle_line_frame if plan.machine.form == "line-frame" else oracle_machine
	waits, slips = proofs.upset(plan, machine)
	expect("upset: flips", banks * len(waits), proof["upsets"])
	expect("upset: worst", max(waits), proof["worst_cells"])
	expect("upset: mean", Fraction(sum(waits), len(waits)), Fraction(proof["mean_cells"]))
	expect("upset: worst slip", max(slips), proof["worst_slip_cells"])
	expect("upset: mean slip", Fraction(sum(slips), len(slips)), Fraction(proof["mean_slip_cells"]))


def check_colour(plan, lengths, proofs):
	clock = plan.clock
	if clock.subcarrier is None:
		verdict(proofs, "colour", "absent")
		return
	check_figures(clock, lengths, verdict(proofs, "colour", "pass"))


def stages(plan):
	machine = plan.machine
	return (machine.line, machine.frame) if machine.form == "line-frame" else (machine,)


def check_glitches(plan, machine, banks, proof):
	decoded = [signal for signal in plan.signals if signal.field]
	unlatched = any(stage.direct or stage.clear_async for stage in stages(plan))
	expect("glitches: verdict where nothing can flicker", proof["verdict"] == "absent", not decoded and not unlatched)
	if not decoded:
		return
	flickers = {signal.name: banks * glitch_edges(plan, machine, signal, codes_seen(plan, machine, signal)) for signal in decoded}
	expect("glitches: signals that may flicker", {name: edges for name, edges in flickers.items() if edges},
		{entry["signal"]: entry["edges"] for entry in proof["disturbed"]})
	expect("glitches: verdict", "pass" if not any(flickers.values()) else "fail", proof["verdict"])
	fields = {plan.machine.fields[signal.field] for signal in decoded}
	expect("glitches: edges with several bits", banks * multi_bit_edges(plan, machine, fields), proof["multi_bit_edges"])


def check_sweep(plan, proofs):
	verdict(proofs, "sweep", "pass" if plan.sweeps else "absent")


def seconds(text):
	return quantity_of(text)[0]


def check_speed(plan, ticks, proof):
	"""What is measured on the plan; delays of parts are the catalogue's. Which parts are on the slowest path of two stages
	is the program's business."""
	timing = plan.tree.get("timing") or {}
	cell = min(ticks) / plan.clock.master
	share = Fraction(timing.get("share", "1/1"))
	expect("speed: shortest cell", cell, Fraction(proof["cell_s"]))
	expect("speed: share", cell * share, Fraction(proof["available_s"]))
	expect("speed: margin", seconds(timing.get("margin", "0 ns")), Fraction(proof["margin_s"]))
	if plan.machine.form == "line-frame":
		return
	holder = "counter" if plan.machine.counted else "latch"
	if f"{holder} delay" in timing:
		expect(f"speed: {holder} delay", seconds(timing[f"{holder} delay"]), Fraction(proof["delay_s"]))
	if f"{holder} setup" in timing and not plan.machine.counted:
		expect("speed: latch setup", seconds(timing["latch setup"]), Fraction(proof["setup_s"]))
	chips = plan.tree["chips"]
	speeds = [chip["speed"] for chip in (chips if isinstance(chips, list) else [chips])]
	expect("speed: access", max(map(seconds, speeds)), Fraction(proof["access_s"]))


def check_manifest(plan, plan_path, folder, chips, formats, found):
	"""found: what judge() measured on the images: machine, ticks, lengths, longest."""
	machine, ticks, lengths, longest = found
	banks = bank_count(chips)
	manifest = load(os.path.join(folder, f"{plan.name}.manifest.json"))
	check_head(plan, plan_path, manifest)
	check_chips(plan, chips, folder, formats, manifest)
	check_start(plan, chips, machine, manifest)
	check_frame(plan, ticks, manifest["frame"])
	proofs = manifest["proofs"]
	expect("proofs", PROOFS, list(proofs))
	expect("musts", MUSTS, {name for name, proof in proofs.items() if proof["must"]})
	expect("closure", (len(plan.lines), plan.cells, str(sum(ticks))),
		tuple(verdict(proofs, "closure", "pass")[key] for key in ("lines", "cells", "ticks")))
	signals = verdict(proofs, "signals", "pass")
	expect("signals: comparisons", banks * plan.cells * len(plan.signals), signals["comparisons"])
	check_codes(plan, machine, signals)
	check_colour(plan, lengths, proofs)
	check_power_up(plan, machine, longest, banks, verdict(proofs, "power-up", "pass"))
	check_upset(plan, machine, banks, proofs["upset"])
	check_glitches(plan, machine, banks, proofs["glitches"])
	check_speed(plan, ticks, proofs["speed"])
	check_sweep(plan, proofs)
