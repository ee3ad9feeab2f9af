"""Which plans of tests/bad the schema refuses. Prints a line "NAME: RULES" for each that breaks a rule of form and is accepted, and
"NAME: refused without an error" where the reader has none.

    schema_bad.py FOLDER FORM-RULES     FOLDER: tests/bad, staged; FORM-RULES: separated by blanks
"""
import pathlib
import re
import sys

import yaml

import schema_validators
import schema_yaml

HEADLINE = re.compile(r"^[^ ].*: (error|notice): .* \[([a-z0-9-]+)\]$")


def rules(case):
    """The rules of the errors that are expected of a case."""
    lines = case.with_suffix(".stderr").read_text().splitlines()
    found = [HEADLINE.match(line) for line in lines]
    return {match[2] for match in found if match and match[1] == "error"}


def is_lifted(case):
    """Whether the case is given to lift, which takes boards."""
    arguments = case.with_suffix(".args")
    return arguments.exists() and arguments.read_text().startswith("lift ")


def main(folder, form):
    languages = schema_validators.Languages()
    judged = 0
    for case in sorted(pathlib.Path(folder).glob("*.yaml")):
        if case.is_dir():
            continue
        try:
            value = schema_yaml.load(case)
        except (yaml.YAMLError, UnicodeDecodeError, RecursionError):
            continue  # no values that a validator could see
        judged += 1
        broken, accepted = rules(case), languages.accepts(value, as_board=is_lifted(case))
        if accepted and broken & form:
            print(f"{case.stem}: {' '.join(sorted(broken & form))}")
        if not accepted and not broken:
            print(f"{case.stem}: refused without an error")
    print(f"judged {judged}", file=sys.stderr)


main(sys.argv[1], set(sys.argv[2].split()))
