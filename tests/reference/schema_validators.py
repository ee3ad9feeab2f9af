"""The schemas of the languages, for python3-jsonschema (an implementation of draft 2020-12 by others)."""
import json
import os
import subprocess

import jsonschema

PROGRAM = os.environ["SCANLATCH"]


def single_keys(pairs):
    """An object, each of whose keys stands once."""
    assert len({key for key, _ in pairs}) == len(pairs), f"a key stands twice: {[key for key, _ in pairs]}"
    return dict(pairs)


def schema(name):
    """The schema of a language or report, itself valid by the meta-schema."""
    text = subprocess.run([PROGRAM, "schema", name], check=True, stdout=subprocess.PIPE).stdout
    document = json.loads(text, object_pairs_hook=single_keys)
    jsonschema.Draft202012Validator.check_schema(document)
    return document


def validator(name):
    return jsonschema.Draft202012Validator(schema(name))


class Languages:
    """Judges plans and sets, told apart as the reader does."""

    def __init__(self):
        self.validators = {name: validator(name) for name in ("plan", "set", "board")}

    def language(self, value, as_board):
        if as_board:
            return self.validators["board"]
        is_set = isinstance(value, dict) and "scanlatch-set" in value and "scanlatch" not in value
        return self.validators["set" if is_set else "plan"]

    def accepts(self, value, as_board=False):
        return self.language(value, as_board).is_valid(value)

    def faults(self, value, as_board=False):
        faults = self.language(value, as_board).iter_errors(value)
        return [f"{'/'.join(map(str, fault.absolute_path))}: {fault.message}" for fault in faults]
