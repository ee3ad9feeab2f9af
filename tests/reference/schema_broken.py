"""Breaks a report, a place at a time: a key more, a key less, a value of another kind. Prints a line for each break that its schema
accepts. A key less is tried where the schema has no key that may be left out. Of lists, the first two items are broken.

    schema_broken.py NAME FILE     prints on standard error how many breaks were tried
"""
import json
import sys

import schema_validators

# Whose keys are names.
FREE = {"hold"}


def is_complete(schema):
    """Whether every key that a schema has is required."""
    if isinstance(schema, list):
        return all(map(is_complete, schema))
    if not isinstance(schema, dict):
        return True
    keys = schema.get("properties", {})
    return set(keys) == set(schema.get("required", [])) and all(map(is_complete, schema.values()))


def other_kind(value):
    """A value that nothing of the kind of this one could be."""
    return [7] if isinstance(value, (dict, str)) else {"harbour": 7}


def breaks(document, drops):
    """What is broken, of every break of a document, which is changed in place and mended again."""
    todo = [("", document)]
    while todo:
        path, here = todo.pop()
        pairs = here.items() if isinstance(here, dict) else enumerate(here[:2])
        free = path.rpartition("/")[2] in FREE
        for key, value in list(pairs):
            here[key] = other_kind(value)
            yield f"{path}/{key} is of another kind"
            here[key] = value
            if isinstance(value, (dict, list)):
                todo.append((f"{path}/{key}", value))
        if not isinstance(here, dict) or free:
            continue
        here["harbour"] = 7
        yield f"{path} has a key more"
        del here["harbour"]
        for key in list(here) if drops else []:
            value = here.pop(key)
            yield f"{path}/{key} is left out"
            here[key] = value


def main(name, file):
    schema = schema_validators.schema(name)
    validator = schema_validators.validator(name)
    with open(file, encoding="utf-8") as text:
        document = json.load(text)
    tried = 0
    for broken in breaks(document, is_complete(schema)):
        tried += 1
        if validator.is_valid(document):
            print(f"{file}: {broken}")
    print(tried, file=sys.stderr)
    if not validator.is_valid(document):
        print(f"{file}: is not described to begin with")


main(sys.argv[1], sys.argv[2])
