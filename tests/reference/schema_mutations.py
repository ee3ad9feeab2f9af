"""Mutated plans, or boards, before reader and schema: what the schema refuses the reader refuses, and what the reader refuses for its
form the schema refuses, but for what WHY_UNSEEN lists.

    schema_mutations.py plans SEED COUNT FOLDER FORM-RULES PLAN …      FOLDER: where mutated plans are put
    schema_mutations.py boards SEED COUNT FOLDER FORM-RULES PLAN …     the plans without lines and frame
"""
import collections
import json
import os
import pathlib
import random
import re
import subprocess
import sys

import yaml

import schema_validators
import schema_yaml

# What a schema cannot see: a rule, what the message begins with, and why.
WHY_UNSEEN = [
    ("bad-bits", r"\w+: there is no bit", "the number of state bits stands elsewhere in the plan"),
    ("bad-bits", r"\w+: wanted one bit or hi\.\.lo, found \"\d+\.\.\d+\"", "no pattern compares hi and lo"),
    ("bad-bits", r"\w+: wanted one bit or hi\.\.lo, found \"\d{4,}", "nor tells how large a bit is"),
    ("bad-number", r"[a-z ]+: wanted \d+ to \d+ bits, found \"[\d.]+ ?/ ?[\d.]+ ?bits?\"", "no pattern compares a ratio"),
    ("bad-number", r"share: wanted n/m, .* found \"[\d.]+(/[\d.]+)?\"", "nor numerator and denominator"),
    ("bad-number", r"start: ", "how large start may be depends on the state bits"),
    ("bad-number", r"bank: ", "how large a bank's number may be depends on the bank bits"),
    ("bad-quantity", r"lead: wanted a whole number of cells", "no pattern divides"),
    ("bad-quantity", r"[a-z]+: wanted (1|0|more than nothing).* (ticks|cells|ppm), found", "no pattern compares a quantity's number"),
    ("bad-quantity", r"[a-z ]+: the number is too large, or has too many digits", "nor counts what 64 bits hold"),
    ("bad-expression", r"expression \"[^\"]*[()]", "no pattern pairs parentheses"),
    ("bad-expression", r".*: the number is too large|.*: the expression has more than", "nor counts what the reader can hold"),
    ("bad-name", r"(name|label) \"[-.\d]+\"", "of a name that YAML takes for a number no pattern sees the characters"),
    ("bank-plan", "", "the plans of a set are other files"),
    ("doubled-fill", "", "the other fill may stand in the line type that this one is like"),
    ("fill-without-cells", "", "the fill may stand in a change of a line type without cells"),
    ("doubled-name", r"label", "labels are compared with those of other chips"),
    ("doubled-name", r"region .* is changed twice", "regions are compared with those of other changes"),
    ("too-many", r"regions: wanted at most", "regions are counted over all line types"),
]
SCALARS = ["7", "0", "-1", "1.5", "0x10", "+7", "1e3", "2.0", "true", "false", "True", "~", "", "x", "auto", "free", "9 dots",
           "4.7 us", "150 ns", "3 ticks", "1/2", "3..1", "1..0", "every 2 lines", "every frame", "50 ppm", "315/22 MHz",
           "master / 4", "cell", "80*(row/9) + col", "(1", "line-frame", "loop", "frame", "data", "-", "state.0", "next.1", "28C256",
           "7.", ".5", "0o17", "null", "sync width", "a-b", "A_b", "tide board", "12 bits", "99 bits", "4.7us", "-1 cells"]
ADDED = {"note": ["x"], "stage": ["line", "frame"], "line": ["7"], "frame": ["7"], "speed": ["150 ns"], "kind": ["2 bits"], "cells": ["9"],
         "fill": ["true", "false"], "change": ["7"], "like": ["x"], "clear": ["sync", "async"], "phase": ["free", "every line", "every frame"],
         "advance": ["table", "count"]}
PASSED_OVER = {"lines", "frame"} # of a plan in a board's place
QUOTED = ["7", "true", "0x10", "-1", "", "two 'quotes'", "1e3", "null", "2.5"]


class Scalar:
    def __init__(self, text, plain):
        self.text, self.plain = text, plain


def tree(node):
    if isinstance(node, yaml.ScalarNode):
        return Scalar(node.value, node.style is None)
    if isinstance(node, yaml.SequenceNode):
        return [tree(item) for item in node.value]
    return {"pairs": [[tree(key), tree(value)] for key, value in node.value]}


def flow(node):
    """A tree as YAML in flow style; what YAML takes for a text stands in quotes."""
    if isinstance(node, Scalar):
        is_other = node.plain and not isinstance(schema_yaml.plain_value(node.text), str)
        return node.text if is_other else json.dumps(node.text)
    if isinstance(node, list):
        return "[" + ", ".join(flow(item) or '""' for item in node) + "]"  # nothing cannot stand in a list
    return "{" + ", ".join(f"{flow(key)}: {flow(value)}" for key, value in node["pairs"]) + "}"


def places(node, found):
    """Every value of a tree that can be put another in place of, as (container, index), and every mapping."""
    todo = [node]
    mappings = []
    while todo:
        here = todo.pop()
        if isinstance(here, list):
            found += [(here, index) for index in range(len(here))]
            todo += here
        elif isinstance(here, dict):
            mappings.append(here)
            found += [(pair, 1) for pair in here["pairs"]]
            todo += [pair[1] for pair in here["pairs"]]
    return mappings


def misspelt(chance, text):
    at = chance.randrange(len(text) + 1)
    kind = chance.randrange(4)
    if kind == 0 or not text:
        return text[:at] + chance.choice("abcdefghijklmnopqrstuvwxyz _-9") + text[at:]
    at = min(at, len(text) - 1)
    if kind == 1:
        return text[:at] + text[at + 1:]
    if kind == 2:
        return text[:at] + text[at:at + 2][::-1] + text[at + 2:]
    return text[:at] + text[at].swapcase() + text[at + 1:]


def other_value(chance, old, values):
    kind = chance.randrange(8)
    if kind < 3:
        return Scalar(chance.choice(SCALARS), True)
    if kind == 3:
        return Scalar(chance.choice(QUOTED), False)
    if kind == 4:
        return [old]
    if kind == 5:
        return {"pairs": [[Scalar(chance.choice(["at", "cells", "region"]), False), old]]}
    if kind == 6:
        container, index = chance.choice(values)
        return copy(container[index])
    return chance.choice([[], {"pairs": []}, Scalar("", True)])


def mutate(chance, root):
    values = []
    mappings = [mapping for mapping in places(root, values) if mapping["pairs"]]
    mapping = chance.choice(mappings)["pairs"]
    pair = chance.choice(mapping)
    kind = chance.randrange(10)
    if kind < 2:
        pair[0] = Scalar(misspelt(chance, pair[0].text), False)
    elif kind == 2:
        mapping.remove(pair)
    elif kind == 3:
        key = chance.choice(list(ADDED))
        mapping.append([Scalar(key, False), Scalar(chance.choice(chance.choice([SCALARS, ADDED[key]])), True)])
    elif kind == 4 and isinstance(pair[1], Scalar):
        pair[1] = Scalar(misspelt(chance, pair[1].text), pair[1].plain)
    else:
        container, index = chance.choice(values)
        container[index] = other_value(chance, container[index], values)


def copy(node):
    if isinstance(node, Scalar):
        return Scalar(node.text, node.plain)
    if isinstance(node, list):
        return [copy(item) for item in node]
    return {"pairs": [[copy(key), copy(value)] for key, value in node["pairs"]]}


def has_doubled_key(root):
    mappings = places(root, [])
    names = [[key.text for key, _ in mapping["pairs"]] for mapping in mappings]
    return any(len(set(keys)) < len(keys) for keys in names)


def board_of(plan):
    """What is left of a plan without lines and frame, where a board of two stages has to say how many bits its kind has."""
    pairs = [[key, value] for key, value in plan["pairs"] if key.text not in PASSED_OVER]
    for key, machine in pairs:
        if key.text == "machine" and not {"kind", "state"} & {key.text for key, _ in machine["pairs"]}:
            machine["pairs"].append([Scalar("kind", False), Scalar("4 bits", True)])
    return {"pairs": pairs}


def trees_of(plans, boards):
    trees = [(pathlib.Path(plan).stem, tree(schema_yaml.compose(plan))) for plan in plans]
    if not boards:
        return trees
    return [(name, board_of(plan)) for name, plan in trees if plan["pairs"][0][0].text == "scanlatch"]


def write_mutants(seed, count, folder, trees, boards):
    chance = random.Random(seed)
    written = []
    while len(written) < count:
        name, original = chance.choice(trees)
        mutant = copy(original)
        for _ in range(chance.choice([1, 1, 1, 2])):
            mutate(chance, mutant)
        if has_doubled_key(mutant):
            continue  # which is YAML's concern
        if boards and PASSED_OVER & {key.text for key, _ in mutant["pairs"]}:
            continue  # whatever stands there
        path = folder / f"{len(written)}-{name}.yaml"
        path.write_text("\n".join(f"{flow(key)}: {flow(value)}" for key, value in mutant["pairs"]) + "\n")
        written.append(path)
    return written


def reader_errors(paths, folder, boards):
    """What the reader says of each file: its errors as (rule, text). Boards are read for images that are not there."""
    errors = collections.defaultdict(list)
    names = [path.name for path in paths]
    (folder / "no-images").mkdir(exist_ok=True)
    calls = [["lift", name, "no-images"] for name in names] if boards else \
        [["check", *names[start:start + 200]] for start in range(0, len(names), 200)]
    for arguments in calls:
        run = subprocess.run([os.path.abspath(schema_validators.PROGRAM), *arguments], cwd=folder, stdout=subprocess.DEVNULL,
                             stderr=subprocess.PIPE, text=True, check=False)
        if run.returncode not in (0, 1, 2):
            raise SystemExit(f"status {run.returncode}: {run.stderr[-2000:]}")
        for line in run.stderr.splitlines():
            match = re.match(r"^([^ :]+\.yaml):(?:\d+:\d+:)? error: (.*) \[([a-z0-9-]+)\]$", line)
            if match and match[3] != "image-missing":
                errors[match[1]].append((match[3], match[2]))
    return errors


def is_otherwise_written(text):
    """True for a plain scalar that YAML reads as a number or truth value of which a schema cannot tell how it was written."""
    value = schema_yaml.plain_value(text)
    if isinstance(value, bool):
        return text != str(value).lower()
    if isinstance(value, float) and value.is_integer():
        value = int(value)
    return value is not None and text != str(value)


def why_unseen(rule, text):
    if any(map(is_otherwise_written, re.findall(r"\"([^\"]*)\"", text) + re.findall(r"found (\S+)", text))):
        return "how a number or truth value is written"
    for unseen, message, why in WHY_UNSEEN:
        if rule == unseen and re.match(message, text):
            return why
    return None


def is_nothing_in_words(faults):
    """True if all that the schema minds is that a name is written ~ or null, which YAML reads as nothing: quotes help."""
    return all(fault.split(": ", 1)[1].startswith("None is not") for fault in faults)


def main(boards, seed, count, folder, form, plans):
    languages = schema_validators.Languages()
    paths = write_mutants(seed, count, folder, trees_of(plans, boards), boards)
    errors = reader_errors(paths, folder, boards)
    tally = collections.Counter()
    for path in paths:
        accepted, found = languages.accepts(schema_yaml.load(path), boards), errors[path.name]
        of_form = [error for error in found if error[0] in form]
        tally[("accepted" if accepted else "refused", "form" if of_form else "other" if found else "read")] += 1
        if not accepted and not found:
            faults = languages.faults(schema_yaml.load(path), boards)
            if is_nothing_in_words(faults):
                tally["a name that YAML reads as nothing"] += 1
            else:
                print(f"{path.name}: read, but refused by the schema:", *faults)
        if accepted:
            for rule, text in of_form:
                why = why_unseen(rule, text)
                tally[why or "unseen without a reason"] += 1
                if why is None:
                    print(f"{path.name}: accepted, but the reader says: {text} [{rule}]")
    for key, number in tally.items():
        print(number, *(key if isinstance(key, tuple) else [key]), file=sys.stderr)


main(sys.argv[1] == "boards", int(sys.argv[2]), int(sys.argv[3]), pathlib.Path(sys.argv[4]), set(sys.argv[5].split()), sys.argv[6:])
