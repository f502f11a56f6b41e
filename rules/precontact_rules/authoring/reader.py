"""YAML restricted to what JSON can say, with the line of every key and item kept for messages."""
import re

import yaml

from .faults import Fault

_NUMBER = re.compile(r"-?(0|[1-9][0-9]*)(\.[0-9]+)?([eE][-+]?[0-9]+)?\Z")
_WORDS = {"true": True, "false": False, "null": None}


class Map(dict):
    """A mapping that knows its own line and that of each key."""

    line, lines, file = 1, {}, ""

    def at(self, key):
        """The line of a key, or of the mapping where it has none."""
        return self.lines.get(key, self.line)


class Seq(list):
    """A list that knows its own line and that of each item."""

    line, lines, file = 1, (), ""

    def at(self, index):
        return self.lines[index]


def read(path, name, faults):
    """The content of one file as Map, Seq, str, number, bool or None; faults are added under `name`."""
    text = path.read_text(encoding="utf-8")
    for number, line in enumerate(text.splitlines(), 1):
        if "\t" in line:
            faults.append(Fault(name, number, "a tab", "indent with spaces"))
    try:
        node = yaml.compose(text, Loader=yaml.SafeLoader)
    except yaml.MarkedYAMLError as error:
        mark = error.problem_mark or error.context_mark
        faults.append(Fault(name, mark.line + 1 if mark else 1, f"not YAML ({error.problem})", "see rules/README.md section 1"))
        return Map()
    if node is None:
        faults.append(Fault(name, 1, "an empty file", "a mapping"))
        return Map()
    _forbid_anchors(text, name, faults)
    return _plain(node, name, faults)


def _forbid_anchors(text, name, faults):
    for token in yaml.scan(text):
        if isinstance(token, (yaml.AnchorToken, yaml.AliasToken, yaml.TagToken)):
            faults.append(Fault(name, token.start_mark.line + 1, "an anchor, alias or tag", "write the value out; only what JSON can say is read"))


def _plain(node, name, faults):
    line = node.start_mark.line + 1
    if isinstance(node, yaml.MappingNode):
        made = Map()
        made.line, made.lines, made.file = line, {}, name
        for key_node, value_node in node.value:
            key, at = str(key_node.value), key_node.start_mark.line + 1
            if key in made:
                faults.append(Fault(name, at, f"the key {key!r} a second time", f"one {key!r}; the first is on line {made.lines[key]}"))
                continue
            made.lines[key] = at
            made[key] = _plain(value_node, name, faults)
        return made
    if isinstance(node, yaml.SequenceNode):
        made = Seq(_plain(item, name, faults) for item in node.value)
        made.line, made.lines, made.file = line, [item.start_mark.line + 1 for item in node.value], name
        return made
    if node.style in ("'", '"', "|", ">"):
        return node.value
    if node.value in _WORDS:
        return _WORDS[node.value]
    if _NUMBER.match(node.value):
        return float(node.value) if any(c in node.value for c in ".eE") else int(node.value)
    return node.value
