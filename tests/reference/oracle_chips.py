"""Wiring, image files and the rows that a machine reads out of them, from the pages alone.

Images are bytes of a chip's whole capacity. Sizes of parts come from their names: the digits of a memory's name are its
capacity in kilobits (01 for a megabit), as its data sheet has it; a plan's own parts state theirs.
"""

import re

RECORD_BYTES = 16

# Name: (address pins, data pins).
PARTS = {
	"28C16": (11, 8), "28C64": (13, 8), "28C256": (15, 8), "28C010": (17, 8), "29C010": (17, 8),
	"39SF010A": (17, 8), "39SF020A": (18, 8), "39SF040": (19, 8),
	"27C256": (15, 8), "27C512": (16, 8), "27C010": (17, 8), "27C020": (18, 8), "27C040": (19, 8), "27C080": (20, 8),
	"27C1024": (16, 16),
}


class Fault(Exception):
	"""Something in the files or the machine is not as the pages say; the text says what."""


class Chip:
	"""label, stage, pins of the part, and for each pin its wire: `state.3`, `low`, `next.0`, a signal's name, or None if
	open."""

	def __init__(self, label, stage, part, size, address, data):
		self.label = label
		self.stage = stage
		self.part = part
		self.address_pins, self.data_pins = size
		self.address = address + [None] * (self.address_pins - len(address))
		self.data = data + [None] * (self.data_pins - len(data))
		self.capacity = (self.data_pins // 8) << self.address_pins
		self.image = None

	def lanes(self):
		"""The image as one byte string for each eight data pins (the low byte comes first)."""
		width = self.data_pins // 8
		return [self.image[lane::width] for lane in range(width)]


def part_size(plan, part):
	own = (plan.tree.get("parts") or {}).get(part)
	if own:
		return int(own["address pins"]), int(own["data pins"])
	if part not in PARTS:
		raise Fault(f"the oracle does not know the size of part {part}")
	return PARTS[part]


def numbered(name, bits):
	return [f"{name}.{bit}" for bit in range(bits)]


def word_of(plan, stage, given):
	"""The bits of a row in the order in which straight wiring takes them; given: those of kind or step."""
	control = [] if stage.counted else numbered("next", stage.bits)
	clear = ["clear"] if stage.counted else []
	return control + given + clear + [signal.name for signal in plan.signals
		if signal.field is None and stage.name in ("loop", signal.stage)]


def stages_of(plan):
	"""(name, wires of the address, word) of each stage."""
	machine = plan.machine
	if machine.form == "loop":
		return [("loop", numbered("state", machine.bits), word_of(plan, machine, []))]
	kind = numbered("kind", machine.kind_bits)
	return [("line", numbered("state", machine.line.bits) + kind, word_of(plan, machine.line, ["step"])),
		("frame", numbered("state", machine.frame.bits), word_of(plan, machine.frame, kind))]


def chips_of(plan):
	tree = plan.tree["chips"]
	if isinstance(tree, list):
		return [Chip(chip["label"], chip.get("stage", "loop"), chip["part"], part_size(plan, chip["part"]),
			wires(chip["address"]), wires(chip["data"])) for chip in tree]
	chips = []
	for stage, address, word in stages_of(plan):
		part = tree["part"] if stage == "loop" else tree[stage]["part"]
		size = part_size(plan, part)
		chips += [Chip(f"rom{len(chips) + lane}", stage, part, size, address, word[first:first + size[1]])
			for lane, first in enumerate(range(0, len(word), size[1]))]
	return chips


def wires(names):
	return [None if name == "-" else name for name in names]


def check_repeats(chip):
	"""The image is the same whatever the level of a pin that is open, tied, or a bank's jumper."""
	for pin, wire in enumerate(chip.address):
		if wire is None or wire in ("low", "high") or wire.startswith("bank."):
			for lane in chip.lanes():
				if not halves_equal(lane, 1 << pin):
					raise Fault(f"{chip.label}: the image changes with address pin A{pin} ({wire or 'open'})")


def halves_equal(lane, step):
	"""Bytes whose address differs only in the bit of value `step` are equal."""
	if step <= 256:
		return all(lane[first::2 * step] == lane[first + step::2 * step] for first in range(step))
	return all(lane[first:first + step] == lane[first + step:first + 2 * step] for first in range(0, len(lane), 2 * step))


def check_open_data_pins(chip):
	for number, lane in enumerate(chip.lanes()):
		mask = sum(1 << pin for pin in range(8) if chip.data[8 * number + pin] is None)
		if any(value & mask != mask for value in set(lane)):
			raise Fault(f"{chip.label}: an open data pin stores 0 in byte {number} of a row")


def bank_count(chips):
	return 1 << len({wire for chip in chips for wire in chip.address if wire and wire.startswith("bank.")})


def row_addresses(chip, names, bank=0):
	"""The address that each row's number puts on the chip in that bank, tied pins at their level, open pins low. names:
	the wires that carry the number, the lowest bit first."""
	high = {"high"} | {f"bank.{bit}" for bit in range(24) if bank >> bit & 1}
	fixed = sum(1 << pin for pin, wire in enumerate(chip.address) if wire in high)
	addresses = [fixed]
	for name in names:
		if name not in chip.address:
			raise Fault(f"{chip.label}: {name} is on no address pin")
		pin = 1 << chip.address.index(name)
		addresses += [address | pin for address in addresses]
	return addresses


class Rows:
	"""What the chips of a stage hold in every row: next, kind, clear (where the word has them), and the level of each other
	bit of the word by its name, in columns."""

	def __init__(self, plan, chips, bank=0, stage="loop"):
		_, self.names, _ = next(found for found in stages_of(plan) if found[0] == stage)
		self.numbers = {}
		self.columns = {}
		for chip in chips:
			if chip.stage == stage:
				addresses = row_addresses(chip, self.names, bank)
				for number, lane in enumerate(chip.lanes()):
					values = bytes(lane[address] for address in addresses)
					self.take(values, chip.data[8 * number:8 * number + 8])
		self.next = self.numbers.get("next")
		self.kind = self.numbers.get("kind")
		self.clear = self.columns.pop("clear", None)

	def take(self, values, pins):
		for pin, wire in enumerate(pins):
			if wire is not None and "." not in wire:
				self.columns[wire] = values.translate(bytes(value >> pin & 1 for value in range(256)))
		for name in ("next", "kind"):
			weights = [(pin, 1 << int(wire.split(".")[1])) for pin, wire in enumerate(pins) if wire and wire.startswith(name + ".")]
			if weights:
				part = [sum(weight for pin, weight in weights if value >> pin & 1) for value in range(256)]
				known = self.numbers.get(name) or [0] * (1 << len(self.names))
				self.numbers[name] = [number | part[value] for number, value in zip(known, values)]


def image_size_fault(chip, data):
	if len(data) != chip.capacity:
		raise Fault(f"{chip.label}: image of {len(data)} bytes, the part has {chip.capacity}")


def read_hex(text, capacity, record_bytes=RECORD_BYTES):
	"""The bytes of an Intel HEX file that obeys page 3.1; any departure from the page is a Fault."""
	if not text.endswith("\n") or "\r" in text:
		raise Fault("hex: a line does not end in a single line feed")
	image = bytearray()
	lines = text[:-1].split("\n")
	if lines[-1] != ":00000001FF":
		raise Fault("hex: the last record is not the type 01 record")
	upper = 0
	for number, line in enumerate(lines[:-1], 1):
		record = hex_record(number, line)
		if record[3] == 0:
			check_data_record(number, record, upper << 16, len(image), min(record_bytes, capacity - len(image)))
			image += record[4:-1]
		elif record[3] == 4:
			upper = check_upper_record(number, record, image, upper)
		else:
			raise Fault(f"hex line {number}: record type {record[3]:02X}")
	return bytes(image)


def hex_record(number, line):
	if not re.fullmatch(r":(?:[0-9A-F]{2}){5,}", line):
		raise Fault(f"hex line {number}: not a record in upper case: {line!r}")
	record = bytes.fromhex(line[1:])
	if len(record) != record[0] + 5 or sum(record) % 256:
		raise Fault(f"hex line {number}: wrong length or checksum")
	return record


def check_data_record(number, record, upper, due, size):
	address = upper | record[1] << 8 | record[2]
	if address != due:
		raise Fault(f"hex line {number}: address {address:X} where {due:X} comes next")
	if record[0] != size:
		raise Fault(f"hex line {number}: {record[0]} data bytes, not {size}")


def check_upper_record(number, record, image, upper):
	if record[:4] != b"\x02\0\0\x04" or len(record) != 7:
		raise Fault(f"hex line {number}: malformed type 04 record")
	new = record[4] << 8 | record[5]
	if new != upper + 1 or len(image) != new << 16:
		raise Fault(f"hex line {number}: type 04 record where the address does not pass 64 KiB")
	return new
