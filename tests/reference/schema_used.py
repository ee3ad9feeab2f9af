"""Prints the keys of the reports' schemas that no report has.

    schema_used.py FOLDER …     where the reports are
"""
import json
import pathlib
import sys

import schema_validators

REPORTS = ["check", "build", "prove", "diff", "sheet", "fit", "lift", "parts", "standards", "crystals", "manifest"]


def keys_of(value, found):
    todo = [value]
    while todo:
        here = todo.pop()
        if isinstance(here, dict):
            found.update(here)
            todo += here.values()
        elif isinstance(here, list):
            todo += here


def described_keys(schema, found):
    if isinstance(schema, dict):
        found.update(schema.get("properties", {}))
        for part in schema.values():
            described_keys(part, found)
    elif isinstance(schema, list):
        for part in schema:
            described_keys(part, found)


def main(folders):
    found, described = set(), set()
    for folder in folders:
        for path in pathlib.Path(folder).rglob("*"):
            if path.is_file() and path.suffix not in (".bin", ".hex"):
                keys_of(json.loads(path.read_text(encoding="utf-8")), found)
    for name in REPORTS:
        described_keys(schema_validators.schema(name), described)
    print("\n".join(sorted(described - found)))


main(sys.argv[1:])
