"""Prints a line for each good plan or set that its schema refuses, and for each plan that is refused as a board without its lines
and frame.

    schema_good.py FILE …
"""
import sys

import schema_validators
import schema_yaml


def main(files):
    languages, board = schema_validators.Languages(), schema_validators.validator("board")
    for file in files:
        value = schema_yaml.load(file)
        for fault in languages.faults(value):
            print(f"{file}: {fault}"[:400])
        if board.is_valid(value):
            print(f"{file}: taken for a board")
        if "scanlatch" in value:
            rest = {key: part for key, part in value.items() if key not in ("lines", "frame")}
            for fault in board.iter_errors(rest):
                print(f"{file} as a board: {fault.message}"[:400])


main(sys.argv[1:])
