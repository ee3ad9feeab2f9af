"""Random chips for a stage: catalogue parts and parts of the plan's own, straight wiring and scrambled wiring."""

CATALOGUE = [
	("28C16", 11, 8, ["150 ns", "200 ns"]), ("28C64", 13, 8, ["150 ns", "200 ns"]),
	("28C256", 15, 8, ["150 ns", "90 ns", "155 ns"]), ("27C256", 15, 8, ["150 ns"]), ("27C512", 16, 8, ["70 ns"]),
	("28C010", 17, 8, ["120 ns"]), ("27C1024", 16, 16, ["120 ns"])]

LABELS = ["U7", "rom-a", "LEFT", "x_1", "0", "U8", "Q", "r2", "r3", "r4", "r5", "r6"]
MOST_CHIPS = 8


def own_part(chance, pins):
	"""(name, address pins, data pins, grades) and the `parts` entry that says so."""
	part = ("XROM" + str(pins), pins, chance.choice([8, 8, 16]), ["55 ns", "120 ns"][:chance.randint(1, 2)])
	return part, {part[0]: {"address pins": str(part[1]), "data pins": str(part[2]), "access": part[3]}}


def part_chooser(chance, parts):
	"""A function that chooses a part with at least so many address pins, and notes it in `parts` if it is the plan's own."""
	def part_with(pins):
		if chance.random() < 0.5:
			part, entry = own_part(chance, min(24, pins + chance.choice([0, 0, 1, 3])))
			if parts.setdefault(part[0], entry[part[0]]) is entry[part[0]]:
				return part
		fitting = [part for part in CATALOGUE if part[1] >= pins]
		return chance.choice(fitting[:3] if chance.random() < 0.9 else fitting)
	return part_with


def with_parts(chips, parts):
	return {"chips": chips, "parts": parts} if parts else {"chips": chips}


def chips_for(chance, bits, word):
	"""{'chips': …} and perhaps {'parts': …} for a table of 2^bits rows with these word bits."""
	parts = {}
	part_with = part_chooser(chance, parts)
	address = [f"state.{bit}" for bit in range(bits)]
	if chance.random() < 0.5:
		return with_parts(long_chips(chance, address, word, part_with, LABELS, MOST_CHIPS), parts)
	return with_parts(short_chips(chance, part_with(bits)), parts)


def chips_for_stages(chance, stages, long_form):
	"""The same for {stage: (wires of the address, word)}."""
	parts = {}
	part_with = part_chooser(chance, parts)
	if not long_form:
		return with_parts({stage: short_chips(chance, part_with(len(address))) for stage, (address, _) in stages.items()}, parts)
	chips = []
	for number, (stage, (address, word)) in enumerate(stages.items()):
		made = long_chips(chance, address, word, part_with, LABELS[number::2], MOST_CHIPS // 2)
		chips += [{"label": chip.pop("label"), "stage": stage, **chip} for chip in made]
	chance.shuffle(chips)
	return with_parts(chips, parts)


def short_chips(chance, part):
	return {"part": part[0], "speed": chance.choice(part[3])}


def long_chips(chance, address, word, part_with, labels, most):
	banks = [f"bank.{bit}" for bit in range(chance.choice([0, 0, 0, 1, 2]))]
	word = chance.sample(word, len(word))
	labels = chance.sample(labels, len(labels))
	chips = []
	while word:
		part = part_with(len(address) + len(banks))
		taken = chance.randint(1, min(part[2], len(word)))
		if len(chips) == most - 1:
			taken = min(part[2], len(word))
		data, word = word[:taken], word[taken:]
		chips.append({"label": labels.pop(), "part": part[0], "speed": chance.choice(part[3]),
			"address": address_wires(chance, address + banks, part[1]), "data": data_wires(chance, data, part[2])})
	return chips


def address_wires(chance, wires, pins):
	wires = wires + [chance.choice(["low", "high", "-"]) for _ in range(pins - len(wires))]
	if chance.random() < 0.8:
		chance.shuffle(wires)
	return wires


def data_wires(chance, data, pins):
	wires = data + ["-"] * (pins - len(data))
	if chance.random() < 0.8:
		chance.shuffle(wires)
	return wires
