"""JSON reports against their schemas.

    schema_reports.py NAME FILE …     prints a line for each file that the schema NAME does not describe
"""
import json
import sys

import schema_validators


def main(name, files):
    validator = schema_validators.validator(name)
    for file in files:
        with open(file, encoding="utf-8") as text:
            document = json.load(text)
        for fault in validator.iter_errors(document):
            # The deepest fault of the alternative that fits best says most.
            while fault.context:
                fault = max(fault.context, key=lambda one: (len(one.absolute_path), one.validator != "const"))
            print(f"{file}: {'/'.join(map(str, fault.absolute_path))}: {fault.message}"[:400])


main(sys.argv[1], sys.argv[2:])
