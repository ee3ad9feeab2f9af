"""Looks through every layout of a small space, one by one and without any bound, and compares the best with what
`scanlatch fit --json` found.

    fit_search.py STANDARDS CRYSTALS PARTS FOUND GRADE PHASE_LINES TICKS_PER_DOT DOTS_PER_CELL STRETCHED WIDTH TOP CRYSTAL...

The first three are what `scanlatch list --json` prints. Written from the definitions in src/layout/fit.h,
src/catalogue/judge.h and the items' own words, not from the search.
"""
import json
import sys
from fractions import Fraction
from functools import lru_cache

MILLION = 1000000
SCALES = {"us": Fraction(1, MILLION), "MHz": Fraction(MILLION)}
COUNTED = ("lines", "pulses", "")


def value_of(text, unit):
    if text in ("positive", "negative"):
        return Fraction(1 if text == "positive" else -1)
    return Fraction(text) * SCALES.get(unit, 1)


class Limit:
    def __init__(self, entry):
        self.unit = entry["unit"]
        self.nominal, self.low, self.high = (
            value_of(entry[key], entry["unit"]) if key in entry else None for key in ("nominal", "low", "high"))
        self.binds = self.low is not None or self.high is not None

    def judge(self, value):
        """(kept, share or None); None if the limit does not bind."""
        if not self.binds:
            return None
        margins = []
        if self.low is not None:
            margins.append(value - self.low)
        if self.high is not None:
            margins.append(self.high - value)
        margin = min(margins)
        if self.low is not None and self.high is not None:
            scale = (self.high - self.low) / 2
            if scale == 0:
                return margin >= 0, None
        else:
            bound = self.low if self.low is not None else self.high
            scale = abs(self.nominal - bound) if self.nominal not in (None, bound) else abs(bound)
            if scale == 0:
                return margin >= 0, Fraction((margin > 0) - (margin < 0))
        return margin >= 0, min(Fraction(1), margin / scale)


class Standard:
    def __init__(self, entry, grade):
        self.limits, self.studio = {}, {}
        for limit in entry["limits"]:
            if limit["grade"] == grade:
                self.limits[limit["item"]] = Limit(limit)
            if limit["grade"] == "studio":
                self.studio[limit["item"]] = Limit(limit)
        self.colour = "subcarrier" in self.limits
        self.separate = "horizontal sync polarity" in self.limits

    @lru_cache(maxsize=None)
    def judge(self, item, value):
        return self.limits[item].judge(value) if item in self.limits else None

    def score(self, values):
        """Of (item, value): limits kept, and the shares of those kept, in rising order."""
        kept, shares = 0, []
        for item, value in values:
            found = self.judge(item, value)
            if found is not None and found[0]:
                kept += 1
                if found[1] is not None:
                    shares.append(found[1])
        return kept, sorted(shares)

    def full(self, item):
        limit = self.studio[item]
        return limit.nominal if limit.nominal is not None else (limit.low + limit.high) / 2


def better(left, right):
    """Is a score (kept, shares) above another? What one lacks is 1."""
    if left[0] != right[0]:
        return left[0] > right[0]
    longest = max(len(left[1]), len(right[1]))
    ones = [Fraction(1)] * longest
    return (left[1] + ones)[:longest] > (right[1] + ones)[:longest]


def stretched_ways(cells, stretched):
    """Every way of stretching so many cells of regions."""
    if len(cells) == 1:
        if stretched <= cells[0]:
            yield (stretched,)
        return
    for first in range(min(cells[0], stretched) + 1):
        for rest in stretched_ways(cells[1:], stretched - first):
            yield (first,) + rest


def compositions(total, parts):
    if parts == 1:
        yield (total,)
        return
    for first in range(1, total - parts + 2):
        for rest in compositions(total - first, parts - 1):
            yield (first,) + rest


class Marks:
    """How an item fares at so many ticks of a crystal (the centre: half ticks). Shares are ranks among all of them, so that they
    compare as fast as small numbers."""
    ITEMS = ["horizontal sync width", "back porch", "picture start", "front porch", "horizontal centre"]
    BURST = ["breezeway", "burst start", "burst start in cycles", "burst length", "burst length in cycles",
             "burst end to picture"]

    def __init__(self, standard, tick, cycle, most):
        found = {}
        for item in self.ITEMS + (self.BURST if standard.colour else []):
            unit = Fraction(1, cycle) if item.endswith("in cycles") else tick / 2 if item == "horizontal centre" else tick
            found[item] = [standard.judge(item, unit * count) for count in range(2 * most + 1)]
        self.shares = sorted({Fraction(1)} | {mark[1] for marks in found.values() for mark in marks if mark and mark[1] is not None})
        ranks = {share: rank for rank, share in enumerate(self.shares)}
        # A share for each kept limit: one that has none counts as 1, which no other is above.
        self.marks = {item: [None if not mark or not mark[0] else ranks[mark[1] if mark[1] is not None else Fraction(1)]
                             for mark in marks] for item, marks in found.items()}

    def score(self, regions):
        """Minus the limits missed, and the shares, in rising order: to be compared as a whole."""
        marks = self.marks
        if len(regions) == 6:
            sync, breezeway, burst, porch, picture, front = regions
            found = [marks["breezeway"][breezeway], marks["burst start"][sync + breezeway],
                     marks["burst start in cycles"][sync + breezeway], marks["burst length"][burst],
                     marks["burst length in cycles"][burst], marks["burst end to picture"][porch]]
            porch += breezeway + burst
        else:
            sync, porch, picture, front = regions
            found = []
        start = sync + porch
        found += [marks["horizontal sync width"][sync], marks["back porch"][porch], marks["picture start"][start],
                  marks["front porch"][front], marks["horizontal centre"][2 * start + picture]]
        kept = sorted(rank for rank in found if rank is not None)
        return [len(kept)] + kept


@lru_cache(maxsize=None)
def marks_of(standard, tick, cycle, most):
    return Marks(standard, tick, cycle, most)


def best_edges(standard, line, columns):
    """The best of all edges: of equal ones the first by picture's start, sync's end, burst's start and end."""
    parts = 5 if standard.colour else 3
    marks = marks_of(standard, line["tick"], line["cycle"], int(line["master"] / standard.limits["line rate"].low))
    best, best_score, best_place = None, None, None
    for cells in compositions(line["cells"] - columns, parts):
        for ways in stretched_ways(cells, line["stretched"]):
            ticks = [a * line["cell"] + b * line["stretch"] for a, b in zip(cells, ways)]
            score = marks.score(ticks[:-1] + [columns * line["cell"]] + ticks[-1:])
            if best is not None and score < best_score:
                continue
            edges = [(sum(cells[:n]), sum(ways[:n])) for n in range(1, parts)]
            place = [edges[-1]] + edges[:-1]
            if best is None or score > best_score or place < best_place:
                best, best_score, best_place = list(zip(cells, ways)), score, place
    return best[:-1] + [(columns, 0)] + best[-1:], (best_score[0], [marks.shares[rank] for rank in best_score[1:]])


def best_serration(standard, line):
    best, best_score = None, None
    for cells in range(1, line["cells"]):
        for stretched in range(0, line["stretched"] + 1):
            if stretched > cells or line["stretched"] - stretched > line["cells"] - cells:
                continue
            ticks = cells * line["cell"] + stretched * line["stretch"]
            if 2 * ticks >= line["ticks"]:
                continue
            score = standard.score([("serration width", ticks * line["tick"]),
                                    ("broad pulse width", (line["ticks"] - ticks) * line["tick"])])
            if best is None or better(score, best_score):
                best, best_score = (cells, stretched), score
    return best, best_score


def meets(standard, item, value):
    found = standard.judge(item, value)
    return found is None or found[0]


def counts_of(standard, lines, broad, top, height):
    values = [("lines per field", lines), ("vertical sync length", broad), ("vertical front porch", lines - top - height),
              ("vertical back porch", top - broad), ("vertical blanking", lines - height), ("picture top", top),
              ("picture height", height), ("vertical centre", top + Fraction(height, 2))]
    if not standard.separate:
        values.append(("broad pulses", broad))
    if standard.colour:
        values.append(("lines without burst", broad))
    return [(item, Fraction(value)) for item, value in values]


@lru_cache(maxsize=None)
def best_counts(standard, lines, height):
    """The best broad lines and top of a frame of so many lines, and what its counts come to."""
    best, best_score = None, None
    broads = [int(standard.studio["vertical sync length"].nominal)] if standard.separate else range(1, 9)
    for broad in broads:
        for top in range(broad, lines - height + 1):
            score = standard.score(counts_of(standard, lines, broad, top, height))
            if best is None or better(score, best_score):
                best, best_score = (lines, broad, top), score
    return best, best_score


@lru_cache(maxsize=None)
def best_frame(standard, line_hz, height):
    best, best_scores = None, None
    numbers = range(1, 1200)
    if standard.separate:
        numbers = [int(standard.studio["lines per field"].nominal)]
    for lines in numbers:
        rate = line_hz / lines
        if not meets(standard, "field rate", rate) or not meets(standard, "frame rate", rate):
            continue
        rates = standard.score([("field rate", rate), ("frame rate", rate)])
        frame, counts = best_counts(standard, lines, height)
        if frame is None:
            continue
        kept = rates[0] + counts[0]
        if best is not None and kept <= best_scores[0]:
            if kept < best_scores[0] or better(best_scores[1], rates):
                continue
            if not better(rates, best_scores[1]) and not better(counts, best_scores[2]):
                continue
        best, best_scores = frame, (kept, rates, counts)
    return best, best_scores


def best_memory(parts, latch, cells, signals, cell_s):
    bits = max(1, (cells - 1).bit_length())
    left = cell_s - latch["delay"] - latch["setup"] - Fraction(20, 1000000000)
    best = None
    for index, part in enumerate(parts):
        grades = [Fraction(grade["seconds"]) for grade in part["access"] if Fraction(grade["seconds"]) <= left]
        if part["address_pins"] < bits or not grades:
            continue
        chips = -(-(bits + signals) // part["data_pins"])
        key = (chips, part["address_pins"], -max(grades), index)
        if best is None or key < best[0]:
            best = (key, {"part": part["name"], "access_s": max(grades), "chips": chips})
    return best[1] if best else None


def layouts_of(standard, parts, latch, space, number, crystal):
    master = Fraction(crystal["hz"])
    tick, cycle = 1 / master, None
    if standard.colour:
        cycle = max(1, round(master / standard.limits["subcarrier"].nominal))
        if not meets(standard, "subcarrier", master / cycle):
            return
    blanks = 5 if standard.colour else 3
    for dot in space["ticks_per_dot"]:
        for dots in space["dots_per_cell"]:
            cell = dot * dots
            picture = space["columns"] * cell
            if picture * tick < standard.full("picture width") * space["width"] / 100:
                continue
            stretches = [(0, 0)]
            if standard.colour:
                stretches += [(n, y) for y in range(1, dots + 1) for n in range(1, space["stretched"] + 1)]
            for stretched, stretch_dots in stretches:
                for cells in range(space["columns"] + max(blanks, stretched), 1000):
                    ticks = cells * cell + stretched * stretch_dots * dot
                    if not meets(standard, "line rate", master / ticks):
                        continue
                    if standard.colour and space["phase"] and ticks * space["phase"] % cycle != 0:
                        continue
                    frame, scores = best_frame(standard, master / ticks, space["picture_lines"])
                    if frame is None:
                        continue
                    signals = 2 + standard.separate + standard.colour + (stretched > 0)
                    memory = best_memory(parts, latch, cells * frame[0], signals, cell * tick)
                    if memory is None:
                        continue
                    yield {"crystal": number, "dot": dot, "dots": dots, "cell": cell, "cells": cells, "stretched": stretched,
                           "stretch_dots": stretch_dots, "stretch": stretch_dots * dot, "ticks": ticks, "tick": tick,
                           "cycle": cycle, "master": master, "frame": frame, "scores": scores, "memory": memory}


def judge_layout(standard, line, space):
    picture = space["columns"] * line["cell"]
    fixed = [("line rate", line["master"] / line["ticks"]), ("pixel clock", line["master"] / line["dot"]),
             ("horizontal blanking", (line["ticks"] - picture) * line["tick"]), ("picture width", picture * line["tick"])]
    if standard.colour:
        fixed += [("subcarrier", line["master"] / line["cycle"]),
                  ("subcarrier cycles per line", Fraction(line["ticks"], line["cycle"]))]
    scores = [standard.score(fixed), line["scores"][1]]
    line["regions"], score = best_edges(standard, line, space["columns"])
    scores.append(score)
    line["serration"] = None
    if not standard.separate:
        line["serration"], score = best_serration(standard, line)
        scores.append(score)
    line["kept"] = sum(score[0] for score in scores) + line["scores"][2][0] + (2 if standard.separate else 0)
    shares = [share for score in scores for share in score[1]]
    line["share"] = min(shares) if shares else None
    line["key"] = (-line["kept"], -(1 if line["share"] is None else line["share"]), line["cells"] * line["frame"][0],
                   line["memory"]["chips"], line["stretched"], line["stretch"], line["crystal"], line["dot"], line["dots"],
                   line["cells"])


def show(line, names):
    return (names[line["crystal"]], line["dot"], line["dots"], line["cells"], line["stretched"], line["stretch_dots"], line["ticks"],
            line["kept"], line["share"], line["frame"], line["memory"]["part"], line["memory"]["access_s"],
            line["memory"]["chips"], line["regions"], line["serration"])


def shown(layout):
    limits, frame, memory = layout["limits"], layout["frame"], layout["memory"]
    serration = layout.get("serration")
    return (layout["crystal"], layout["dot_ticks"], layout["cell_dots"], layout["cells"], layout["stretched"],
            layout.get("stretch_dots", 0), layout["ticks"], limits["kept"],
            Fraction(limits["share"]) if "share" in limits else None,
            (frame["lines"], frame.get("broad_lines", frame.get("vertical_sync_lines")), frame["picture_top"]), memory["part"],
            Fraction(memory["access_s"]), memory["chips"],
            [(region["cells"], region["stretched"]) for region in layout["regions"]],
            (serration["cells"], serration["stretched"]) if serration else None)


def numbers(text):
    return [int(number) for number in text.split(",")]


def main():
    standards, crystals, parts, found = (json.load(open(name)) for name in sys.argv[1:5])
    grade, phase, ticks, dots, stretched, width, top = sys.argv[5:12]
    names = sys.argv[12:]
    entry = next(entry for entry in standards["standards"] if entry["name"] == found["standard"])
    standard = Standard(entry, grade)
    latch = next(part for part in parts["latches"] if part["name"] == "74HC574")
    latch = {key: Fraction(latch[key]["seconds"]) for key in ("delay", "setup")}
    space = {"columns": found["columns"], "picture_lines": found["picture_lines"], "ticks_per_dot": numbers(ticks),
             "dots_per_cell": numbers(dots), "stretched": int(stretched), "width": int(width), "phase": int(phase)}
    lines = []
    for number, name in enumerate(names):
        crystal = next(crystal for crystal in crystals["crystals"] if crystal["name"] == name)
        lines += layouts_of(standard, parts["memories"], latch, space, number, crystal)
    for line in lines:
        judge_layout(standard, line, space)
    lines.sort(key=lambda line: line["key"])
    wanted = [show(line, names) for line in lines[:int(top)]]
    given = [shown(layout) for layout in found["layouts"]]
    for rank, (left, right) in enumerate(zip(wanted, given)):
        if left != right:
            sys.exit("layout %d: wanted %s, found %s" % (rank + 1, left, right))
    if len(wanted) != len(given):
        sys.exit("wanted %d layouts, found %d" % (len(wanted), len(given)))
    if len(lines) != found["choices"]:
        sys.exit("wanted %d choices, found %d" % (len(lines), found["choices"]))
    print(len(lines), len(wanted))


main()
