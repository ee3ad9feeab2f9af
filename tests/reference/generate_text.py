"""Writes a tree of mappings, lists and texts as YAML in a style that varies by chance: block or flow, plain or quoted."""

import re

PLAIN = re.compile(r"[A-Za-z0-9_(][A-Za-z0-9_./%*+() -]*")
DIGITS = {"s": 12, "ms": 9, "us": 6, "ns": 3}


def decimal_of(value, unit):
	"""A fraction cut to a picosecond, in the digits of its unit, without needless zeros."""
	digits = DIGITS[unit]
	scaled = int(value * 10**digits)
	text = f"{scaled // 10**digits}.{scaled % 10**digits:0{digits}d}".rstrip("0")
	return text + "0" if text.endswith(".") else text


def scalar(chance, text):
	choice = chance.random()
	if PLAIN.fullmatch(text) and not text.endswith(" ") and choice < 0.85:
		return text
	if choice < 0.5:
		return '"' + text + '"'
	return "'" + text + "'"


def flow(chance, node):
	if isinstance(node, dict):
		return "{ " + ", ".join(f"{scalar(chance, key)}: {flow(chance, value)}" for key, value in node.items()) + " }"
	if isinstance(node, list):
		return "[" + ", ".join("-" if value == "-" else flow(chance, value) for value in node) + "]"
	return scalar(chance, node)


def is_small(node):
	values = node.values() if isinstance(node, dict) else node
	return all(isinstance(value, str) for value in values)


def block_lines(chance, node, indent):
	"""The lines of a mapping or list in block style; parts of it may be in flow style."""
	lines = []
	pad = "  " * indent
	items = node.items() if isinstance(node, dict) else ((None, value) for value in node)
	for key, value in items:
		lead = pad + ("- " if key is None else scalar(chance, key) + ":")
		flowing = isinstance(value, str) or not value or chance.random() < (0.7 if is_small(value) else 0.15)
		if flowing or any(item == "-" for item in value):
			remark = "   # said by the harbour master" if chance.random() < 0.03 else ""
			lines.append(lead + ("" if key is None else " ") + flow(chance, value) + remark)
		elif key is None:
			inner = block_lines(chance, value, indent + 1)
			lines.append(pad + "- " + inner[0].lstrip())
			lines += inner[1:]
		else:
			lines.append(lead)
			lines += block_lines(chance, value, indent + 1)
	return lines


def written(chance, tree):
	return "\n".join(block_lines(chance, tree, 0)) + "\n"
