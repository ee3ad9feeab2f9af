"""Reads src/catalogue/standards.yaml for what limits there are, and judges measured values by them: a second reading."""

import re
from fractions import Fraction

import yaml

UNITS = {"Hz": 1, "kHz": 10**3, "MHz": 10**6, "s": 1, "ms": Fraction(1, 10**3), "us": Fraction(1, 10**6), "ns": Fraction(1, 10**9),
	"line": 1, "lines": 1, "cycle": 1, "cycles": 1, "pulse": 1, "pulses": 1}
GRADES = ("studio", "monitor")
TIMES = ("front porch", "horizontal sync width", "breezeway", "burst start", "burst length", "burst end to picture", "back porch",
	"horizontal blanking", "picture start", "picture width", "horizontal centre", "equalising pulse width", "broad pulse width",
	"serration width")
FREQUENCIES = ("line rate", "field rate", "frame rate", "pixel clock", "subcarrier")


class Limit:
	def __init__(self, nominal=None, low=None, high=None):
		self.nominal, self.low, self.high = nominal, low, high

	def binds(self):
		return self.low is not None or self.high is not None

	def keeps(self, low, high):
		return (self.low is None or low >= self.low) and (self.high is None or high <= self.high)

	def fits(self, low, high):
		"""Whether 64-bit fractions hold what is kept and by how much: the program does not judge otherwise."""
		margins = [low - self.low] if self.low is not None else []
		margins += [self.high - high] if self.high is not None else []
		if self.low is not None and self.high is not None:
			scale = (self.high - self.low) / 2
		else:
			bound = self.low if self.high is None else self.high
			scale = abs(self.nominal - bound) if self.nominal not in (None, bound) else abs(bound)
		shares = [min(margins) / scale] if scale else []
		return all(fits(value) for value in [low, high, *margins, *shares])


def fits(value):
	return abs(value.numerator) < 1 << 63 and value.denominator < 1 << 63


def quotient(text):
	numbers = [Fraction(number) for number in text.split("/")]
	return numbers[0] / numbers[1] if len(numbers) == 2 else numbers[0]


def quantity(text, nominal=None):
	number, unit = text.split()
	return quotient(number) * (nominal / 10**6 if unit == "ppm" else UNITS[unit])


def read_range(text):
	if text.startswith("at least "):
		return quantity(text[9:]), None
	if text.startswith("at most "):
		return None, quantity(text[8:])
	return tuple(quantity(part) for part in text.split(" to "))


def read_limit(text):
	if text in ("positive", "negative"):
		value = Fraction(1 if text == "positive" else -1)
		return Limit(value, value, value)
	if text.startswith("exactly "):
		value = quantity(text[8:])
		return Limit(value, value, value)
	around = re.fullmatch(r"(.*) \+- (.*)", text)
	if around:
		nominal = quantity(around[1])
		tolerance = quantity(around[2], nominal)
		return Limit(nominal, nominal - tolerance, nominal + tolerance)
	within = re.fullmatch(r"(.*) \((.*)\)", text)
	if within:
		return Limit(quantity(within[1]), *read_range(within[2]))
	if text.startswith("at ") or " to " in text:
		return Limit(None, *read_range(text))
	return Limit(quantity(text))


def mode_values(mode):
	"""Nominal values of a display mode, from its counts and clock alone."""
	clock = quantity(mode["pixel clock"])
	(dots, dots_before, sync, dots_after), (lines, lines_before, vertical, lines_after) = (
		[int(count) for count in mode[what]] for what in ("dots", "lines"))
	width, height = dots + dots_before + sync + dots_after, lines + lines_before + vertical + lines_after
	signs = {"positive": Fraction(1), "negative": Fraction(-1)}
	return {
		"line rate": clock / width, "frame rate": clock / (width * height), "pixel clock": clock,
		"lines per field": Fraction(height), "vertical sync length": Fraction(vertical),
		"vertical front porch": Fraction(lines_before), "vertical back porch": Fraction(lines_after),
		"vertical blanking": Fraction(height - lines), "picture top": Fraction(vertical + lines_after),
		"picture height": Fraction(lines), "vertical centre": vertical + lines_after + Fraction(lines, 2),
		"front porch": dots_before / clock, "horizontal sync width": sync / clock, "back porch": dots_after / clock,
		"horizontal blanking": (width - dots) / clock, "picture start": (sync + dots_after) / clock, "picture width": dots / clock,
		"horizontal centre": (sync + dots_after + Fraction(dots, 2)) / clock,
		"horizontal sync polarity": signs[mode["horizontal sync"]], "vertical sync polarity": signs[mode["vertical sync"]],
	}


class Standard:
	def __init__(self, fields, limits):
		"""limits: item to a limit for each grade."""
		self.fields, self.limits = fields, limits


def mode_standard(mode, shares):
	limits = {}
	for item, nominal in mode_values(mode).items():
		limits[item] = {}
		for grade in GRADES:
			low, high = (nominal * Fraction(shares[item][grade][end]) if end in shares[item][grade] else None
				for end in ("low", "high"))
			limits[item][grade] = Limit(nominal, low, high)
	return Standard(1, limits)


def read_standards(path="src/catalogue/standards.yaml"):
	with open(path, encoding="utf-8") as file:
		tree = yaml.load(file, Loader=yaml.BaseLoader)
	standards = {name: mode_standard(mode, tree["mode limits"]) for name, mode in tree["modes"].items()}
	for name, standard in tree["standards"].items():
		standards[name] = Standard(int(standard["fields"]), {
			item: {grade: read_limit(limits[grade]["limit"]) for grade in GRADES} for item, limits in standard["limits"].items()})
	return standards


def widened(item, low, high, ppm):
	"""What the values may be when the clock is off by so much: frequencies grow with it, and times shrink."""
	share = Fraction(ppm) / 10**6
	if item in FREQUENCIES:
		return low * (1 - share), high * (1 + share)
	if item in TIMES:
		return low / (1 + share), high / (1 - share)
	return low, high
