"""Holds what `fit` reckons of a layout against what `check` measures at the pins of its plan: every item of the standard, its
value, whether its limit is kept, by how much and with which share.

    fit_measured.py FOUND RANK CHECKED
"""
import json
import sys
from fractions import Fraction


def main():
    found, rank, checked = json.load(open(sys.argv[1])), int(sys.argv[2]), json.load(open(sys.argv[3]))
    layout = found["layouts"][rank - 1]
    limits = checked["proofs"]["limits"]
    grade, faults = found["grade"], []
    measured = {item["item"]: item for item in limits["items"] if "not_measured" not in item}
    reckoned = {item["item"]: item for item in layout["limits"]["items"]}
    if limits["standard"] != found["standard"] or limits["grade"] != grade:
        faults.append("another standard or grade")
    if measured.keys() != reckoned.keys():
        faults.append("items differ: %s" % sorted(measured.keys() ^ reckoned.keys()))
    for name in measured.keys() & reckoned.keys():
        mine, theirs = reckoned[name], measured[name]
        limit = theirs[grade]
        if not Fraction(mine["value"]) == Fraction(theirs["low"]) == Fraction(theirs["high"]):
            faults.append("%s is reckoned %s, measured %s to %s" % (name, mine["value"], theirs["low"], theirs["high"]))
        for key in ("kept", "margin", "share"):
            if mine.get(key) != limit.get(key):
                faults.append("%s of %s is reckoned %s, measured %s" % (key, name, mine.get(key), limit.get(key)))
    if limits["kept"][grade] != layout["limits"]["kept"]:
        faults.append("%d limits are reckoned kept, %d measured" % (layout["limits"]["kept"], limits["kept"][grade]))
    if limits["missed"][grade] != layout["limits"]["binding"] - layout["limits"]["kept"]:
        faults.append("another number of limits missed")
    print(*faults, sep="\n")
    sys.exit(1 if faults else 0)


main()
