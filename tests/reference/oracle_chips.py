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
	"""label, pins of the part, and for each pin its wire: `state.3`, `low`, `next.0`, a signal's name, or None if open."""

	def __init__(self, label, part, size, address, data):
		self.label = label
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


def word_bits(plan):
	"""The bits of a row in the order in which straight wiring takes them."""
	machine = plan.machine
	control = ["clear"] if machine.counted else [f"next.{bit}" for bit in range(machine.bits)]
	return control + [signal.name for signal in plan.signals if signal.field is None]


def chips_of(plan):
	tree = plan.tree["chips"]
	if isinstance(tree, list):
		return [Chip(chip["label"], chip["part"], part_size(plan, chip["part"]), wires(chip["address"]), wires(chip["data"]))
			for chip in tree]
	size = part_size(plan, tree["part"])
	address = [f"state.{bit}" for bit in range(plan.machine.bits)]
	bits = word_bits(plan)
	return [Chip(f"rom{first // size[1]}", tree["part"], size, address, bits[first:first + size[1]])
		for first in range(0, len(bits), size[1])]


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


def state_addresses(chip, bits, bank=0):
	"""The address that each state puts on the chip in that bank, tied pins at their level, open pins low."""
	high = {"high"} | {f"bank.{bit}" for bit in range(24) if bank >> bit & 1}
	fixed = sum(1 << pin for pin, wire in enumerate(chip.address) if wire in high)
	addresses = [fixed]
	for bit in range(bits):
		if f"state.{bit}" not in chip.address:
			raise Fault(f"{chip.label}: state.{bit} is on no address pin")
		pin = 1 << chip.address.index(f"state.{bit}")
		addresses += [address | pin for address in addresses]
	return addresses


class Rows:
	"""What the chips hold for every state: next (or None), clear (or None), and the level of each data signal."""

	def __init__(self, plan, chips, bank=0):
		self.bits = plan.machine.bits
		self.next = None if plan.machine.counted else [0] * (1 << self.bits)
		self.columns = {}
		for chip in chips:
			addresses = state_addresses(chip, self.bits, bank)
			for number, lane in enumerate(chip.lanes()):
				values = bytes(lane[address] for address in addresses)
				self.take(values, chip.data[8 * number:8 * number + 8])
		self.clear = self.columns.pop("clear", None)

	def take(self, values, pins):
		part = [0] * 256
		for pin, wire in enumerate(pins):
			if wire is None:
				continue
			if wire.startswith("next."):
				weight = 1 << int(wire[5:])
				part = [sum_ | weight if value >> pin & 1 else sum_ for value, sum_ in enumerate(part)]
			else:
				self.columns[wire] = values.translate(bytes(value >> pin & 1 for value in range(256)))
		if any(part):
			self.next = [known | part[value] for known, value in zip(self.next, values)]


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
