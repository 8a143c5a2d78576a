"""Changes a job file as text, so that its comments, order and spelling stay as they were.

The parser tells where in the text a thing stands; only that place is rewritten.  Every change is
read again and compared with what was meant; a text that does not say it is refused.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import yaml

from analysis_core.errors import JobError
from analysis_core.job.yaml_text import JobLoader, composed, read_yaml

Data = dict[str, Any]


def entries(text: str, section: str) -> list[Any]:
    """Return the entries of a list in the job file as plain data; [] where it has none."""
    found = _data(text).get(section)
    return list(found) if isinstance(found, list) else []


def stated(text: str, section: str, key: str) -> Any:
    """Return one value of a section as plain data; None where it is not stated."""
    found = _data(text).get(section)
    return found.get(key) if isinstance(found, dict) else None


def with_entry(text: str, section: str, entry: Mapping[str, Any]) -> str:
    """Return the text with an entry added at the end of a list."""
    wanted = _data(text)
    wanted[section] = [*(wanted.get(section) or []), dict(entry)]
    root = _root(text)
    item = _flow(entry)
    value = _value(root, section)
    if root is None or (value is None and not root.flow_style):
        changed = _with_block(text, root, f"{section}:", [f"  - {item}"])
    elif value is None:
        changed = _inserted(text, _last_index(root) - 1, f"{_comma(root)}{section}: [{item}]")
    elif isinstance(value, yaml.SequenceNode) and value.flow_style:
        changed = _inserted(text, _last_index(value) - 1, f"{_comma(value)}{item}")
    elif isinstance(value, yaml.SequenceNode) and value.value:
        indent = " " * (_dash(text, value.value[0]) - _line_start(text, _start(value.value[0])))
        changed = _after_line(text, _last_index(value), f"{indent}- {item}")
    else:
        changed = _replaced(text, _start(value), _last_index(value), "")
        changed = _after_line(changed, _start(value), f"  - {item}")
    return _checked(changed, wanted)


def as_list(text: str, section: str) -> str:
    """Return the text with a section that is a single word written as a list of it."""
    root = _root(text)
    value = _value(root, section)
    if not isinstance(value, yaml.ScalarNode) or not isinstance(_data(text)[section], str):
        return text
    wanted = _data(text)
    wanted[section] = [wanted[section]]
    written = text[_start(value) : _last_index(value)]
    changed = _replaced(text, _start(value), _last_index(value), f"[{written}]")
    return _checked(changed, wanted)


def with_replaced(text: str, section: str, index: int, entry: Mapping[str, Any]) -> str:
    """Return the text with one entry of a list exchanged."""
    wanted = _data(text)
    wanted[section] = list(wanted[section])
    wanted[section][index] = dict(entry)
    node = _item(text, section, index)
    changed = _replaced(text, _start(node), _last_index(node), _flow(entry))
    return _checked(changed, wanted)


def without_entry(text: str, section: str, index: int) -> str:
    """Return the text without one entry of a list; the list itself goes with its last entry."""
    wanted = _data(text)
    wanted[section] = [e for i, e in enumerate(wanted[section]) if i != index]
    if not wanted[section]:
        del wanted[section]
        return _checked(_without_key(text, section), wanted)
    value = _value(_root(text), section)
    node = _item(text, section, index)
    if value.flow_style:
        if index + 1 < len(value.value):
            first, last = _start(node), _start(value.value[index + 1])
        else:
            first, last = _last_index(value.value[index - 1]), _last_index(node)
        return _checked(_replaced(text, first, last, ""), wanted)
    first = _line_start(text, _dash(text, node))
    return _checked(_replaced(text, first, _line_end(text, _last_index(node)), ""), wanted)


def with_value(text: str, section: str, key: str, value: object) -> str:
    """Return the text with one value in a section: ``with_value(text, "rules", "set", name)``."""
    wanted = _data(text)
    wanted[section] = {**(wanted.get(section) or {}), key: value}
    root = _root(text)
    written = _flow(value)
    node = _value(root, section)
    if root is None or (node is None and not root.flow_style):
        changed = _with_block(text, root, f"{section}:", [f"  {key}: {written}"])
    elif node is None:
        changed = _inserted(
            text, _last_index(root) - 1, f"{_comma(root)}{section}: {{{key}: {written}}}"
        )
    elif not isinstance(node, yaml.MappingNode):
        gap = "" if text[: _start(node)].endswith(" ") else " "
        changed = _replaced(text, _start(node), _last_index(node), f"{gap}{{{key}: {written}}}")
    elif (old := _value(node, key)) is not None:
        changed = _replaced(text, _start(old), _last_index(old), written)
    elif node.flow_style:
        changed = _inserted(text, _last_index(node) - 1, f"{_comma(node)}{key}: {written}")
    else:
        indent = " " * node.value[0][0].start_mark.column
        changed = _after_line(text, _last_index(node), f"{indent}{key}: {written}")
    return _checked(changed, wanted)


class _Dumper(yaml.SafeDumper):
    """Writes the words on, off, yes and no unquoted, as the job file's loader reads them."""

    yaml_implicit_resolvers = JobLoader.yaml_implicit_resolvers

    def ignore_aliases(self, data: Any) -> bool:
        return True


def _flow(value: object) -> str:
    """Return a value in one line."""
    text = yaml.dump(
        value, Dumper=_Dumper, default_flow_style=True, sort_keys=False, allow_unicode=True,
        width=math.inf,
    )  # fmt: skip
    return str(text).removesuffix("...\n").strip()


def _data(text: str) -> Data:
    """Return the sections; a mapping of the caller's own, whose values are not to be changed."""
    data = read_yaml(text)
    if data is None:
        return {}
    if not isinstance(data, dict):
        raise JobError("The job file is not a mapping of sections; correct it in a text editor.")
    return dict(data)


def _checked(text: str, wanted: Data) -> str:
    try:
        right = _data(text) == wanted
    except JobError:
        right = False
    if not right:
        raise JobError(
            "The job file is written in a way that cannot be changed here; change it in a text "
            "editor."
        )
    return text


def _root(text: str) -> yaml.MappingNode | None:
    node = composed(text)
    return node if isinstance(node, yaml.MappingNode) else None


def _value(node: Any, key: str) -> Any:
    for name, value in node.value if isinstance(node, yaml.MappingNode) else ():
        if name.value == key:
            return value
    return None


def _item(text: str, section: str, index: int) -> Any:
    return _value(_root(text), section).value[index]


def _start(node: Any) -> int:
    return int(node.start_mark.index)


def _last_index(node: Any) -> int:
    """Return where a node really ends; the parser lets a block run on over what follows it."""
    if isinstance(node, yaml.CollectionNode) and not node.flow_style and node.value:
        last = node.value[-1]
        if isinstance(node, yaml.SequenceNode):
            return _last_index(last)
        return max(_last_index(last[0]), _last_index(last[1]))
    end = int(node.end_mark.index)
    if isinstance(node, yaml.ScalarNode) and node.style in ("|", ">"):
        return len(node.end_mark.buffer[:end].rstrip()) if node.end_mark.buffer else end
    return end


def _comma(node: Any) -> str:
    return ", " if node.value else ""


def _dash(text: str, node: Any) -> int:
    """Return where the dash in front of a list's entry stands."""
    return text.rindex("-", 0, _start(node))


def _line_start(text: str, index: int) -> int:
    return text.rfind("\n", 0, index) + 1


def _line_end(text: str, index: int) -> int:
    """Return the place after the end of the line that holds ``index``."""
    end = text.find("\n", index)
    return len(text) if end < 0 else end + 1


def _newline(text: str) -> str:
    return "\r\n" if "\r\n" in text else "\n"


def _after_line(text: str, index: int, line: str) -> str:
    end, newline = _line_end(text, index), _newline(text)
    before = text[:end] if text[:end].endswith("\n") or not end else text[:end] + newline
    return f"{before}{line}{newline}{text[end:]}"


def _with_block(text: str, root: Any, head: str, lines: list[str]) -> str:
    newline = _newline(text)
    block = newline.join([head, *lines]) + newline
    if root is None or not root.value:
        return (text if not text or text.endswith("\n") else text + newline) + block
    end = _line_end(text, _last_index(root))
    before, after = text[:end], text[end:]
    if not before.endswith("\n"):
        before += newline
    return f"{before}{newline}{block}{after}"


def _without_key(text: str, section: str) -> str:
    root = _root(text)
    assert root is not None
    number = next(i for i, (name, _) in enumerate(root.value) if name.value == section)
    name, value = root.value[number]
    if root.flow_style:
        if number + 1 < len(root.value):
            return _replaced(text, _start(name), _start(root.value[number + 1][0]), "")
        first = _last_index(root.value[number - 1][1]) if number else _start(name)
        return _replaced(text, first, _last_index(value), "")
    end = _line_end(text, max(_last_index(value), _last_index(name)))
    return _replaced(text, _line_start(text, _start(name)), end, "")


def _inserted(text: str, index: int, words: str) -> str:
    return text[:index] + words + text[index:]


def _replaced(text: str, first: int, last: int, words: str) -> str:
    return text[:first] + words + text[last:]
