"""Values of YAML files by the core schema of YAML 1.2.2 (section 10.3.2), as editors' YAML support hands them to a validator.

PyYAML scans and parses, by YAML 1.1, which unlike 1.2 lets a bare - stand in a list in brackets; which plain scalars are numbers,
truth values and nulls is decided by the core schema's own expressions.
"""
import re

import yaml

NULL = re.compile(r"^(null|Null|NULL|~|)$")
TRUTH = re.compile(r"^(true|True|TRUE|false|False|FALSE)$")
WHOLE = re.compile(r"^[-+]?[0-9]+$")
OCTAL = re.compile(r"^0o[0-7]+$")
HEXADECIMAL = re.compile(r"^0x[0-9a-fA-F]+$")
NUMBER = re.compile(r"^[-+]?(\.[0-9]+|[0-9]+(\.[0-9]*)?)([eE][-+]?[0-9]+)?$")
INFINITE = re.compile(r"^([-+]?(\.inf|\.Inf|\.INF)|\.nan|\.NaN|\.NAN)$")


class Loader(yaml.SafeLoader):
    """Composes nodes; resolves nothing, so that every plain scalar keeps its text."""

    yaml_implicit_resolvers = {}


def plain_value(text):
    """What a plain scalar is."""
    if NULL.match(text):
        return None
    if TRUTH.match(text):
        return text.lower() == "true"
    if WHOLE.match(text):
        return int(text)
    if OCTAL.match(text):
        return int(text[2:], 8)
    if HEXADECIMAL.match(text):
        return int(text, 16)
    if NUMBER.match(text):
        return float(text)
    if INFINITE.match(text):
        return float(text.lower().replace(".inf", "inf").replace(".nan", "nan"))
    return text


def scalar_value(node):
    return plain_value(node.value) if node.style is None else node.value


def key_text(node):
    """The name that a key becomes in JSON."""
    if not isinstance(node, yaml.ScalarNode):
        raise yaml.YAMLError("a key that is no scalar")
    value = scalar_value(node)
    if value is None or isinstance(value, bool):
        return {None: "null", True: "true", False: "false"}[value]
    return str(value)


def value_of(node):
    if node is None:  # no document
        return None
    if isinstance(node, yaml.ScalarNode):
        return scalar_value(node)
    if isinstance(node, yaml.SequenceNode):
        return [value_of(item) for item in node.value]
    return {key_text(key): value_of(value) for key, value in node.value}


def compose(path):
    with open(path, encoding="utf-8") as file:
        return yaml.compose(file, Loader)


def load(path):
    """The values of a file. Raises what PyYAML raises where it is no YAML of one document."""
    return value_of(compose(path))
