"""Prints a line for each good plan or set that its schema refuses, for each plan that is refused as a board without its lines
and frame, for each such board of two stages that is accepted though it does not say how many bits its kind has, and for each key of the languages that none of them has.

    schema_good.py FILE …
"""
import sys

import schema_validators
import schema_yaml


def keys_of_schema(schema):
    """The names of all keys that a schema or a part of one has, but those of limits, which are many."""
    found = set()
    for key, part in schema.items() if isinstance(schema, dict) else enumerate(schema if isinstance(schema, list) else []):
        if key == "properties":
            found |= {name for name, value in part.items() if name != "limits" or "properties" not in value}
            part = {name: value for name, value in part.items() if name != "limits"}
        found |= keys_of_schema(part)
    return found


def keys_of(value):
    if isinstance(value, dict):
        return set(value).union(*map(keys_of, value.values()))
    return set().union(*map(keys_of, value)) if isinstance(value, list) else set()


def needs_kind(machine):
    """Whether a machine does not say how many bits its kind has, which without line types nothing else does."""
    return machine["form"] == "line-frame" and "kind" not in machine


def main(files):
    missing = set().union(*(keys_of_schema(schema_validators.schema(name)) for name in ("plan", "set", "board")))
    languages, board = schema_validators.Languages(), schema_validators.validator("board")
    for file in files:
        value = schema_yaml.load(file)
        missing -= keys_of(value)
        for fault in languages.faults(value):
            print(f"{file}: {fault}"[:400])
        if "scanlatch" in value:
            rest = {key: part for key, part in value.items() if key not in ("lines", "frame")}
            if needs_kind(rest["machine"]):
                if board.is_valid(rest):
                    print(f"{file} as a board: accepted without a kind")
                rest["machine"] = {**rest["machine"], "kind": "4 bits"}
            for fault in board.iter_errors(rest):
                print(f"{file} as a board: {fault.message}"[:400])
    for name in sorted(missing):
        print(f"no plan has the key {name}")


main(sys.argv[1:])
