"""The text of a job file and the YAML in it, read safely."""

from __future__ import annotations

import json
from functools import lru_cache
from importlib import resources
from pathlib import Path
from typing import Any

import yaml

from analysis_core.errors import JobError

LARGEST = 4_000_000  # bytes; a job file is written by hand


def text_of(path: Path, what: str) -> str:
    """Return the text of a file, ``what`` it is in messages.  Raises JobError."""
    try:
        raw = path.read_bytes()
    except OSError as error:
        reason = error.strerror or error
        raise JobError(f"{what} '{path}' cannot be read: {reason}.") from None
    try:
        return raw.decode("utf-8-sig")
    except UnicodeDecodeError:
        raise JobError(f"{what} '{path}' is not UTF-8 text; save it as UTF-8.") from None


def read_yaml(text: str) -> Any:
    """Return the plain data of a job file's text, unchecked.  Raises JobError."""
    try:
        node = composed(text)
        return None if node is None else JobLoader("").construct_document(node)
    except yaml.YAMLError as error:
        raise JobError(f"It is not YAML: {' '.join(str(error).split())}.") from None
    except RecursionError:
        raise JobError("It is nested too deeply; a job file has a few levels.") from None


def composed(text: str) -> yaml.Node | None:
    """Return the nodes of a job file's text, with their places; they are not to be changed.

    Raises yaml.YAMLError, JobError and RecursionError.
    """
    # Constructing works merge keys into their nodes; such nodes serve once.
    return _compose(text) if "<<" in text else _composed(text)


@lru_cache(maxsize=4)  # a decision asks several times about the same two texts
def _composed(text: str) -> yaml.Node | None:
    return _compose(text)


def _compose(text: str) -> yaml.Node | None:
    node: yaml.Node | None = JobLoader(text).get_single_node()
    return node


def schema() -> dict[str, Any]:
    """Return the JSON schema of the job file."""
    source = resources.files("analysis_core.job").joinpath("job_schema.json")
    loaded: dict[str, Any] = json.loads(source.read_text(encoding="utf-8"))
    return loaded


class JobLoader(yaml.SafeLoader):
    """The safe loader with the booleans of YAML 1.2; it also refuses repeated keys and aliases.

    In YAML 1.1 the words on, off, yes and no are booleans; here they are words.  YAML keeps the
    last of two equal keys in silence; a load would vanish.  Aliases make files that grow without
    bound.
    """

    yaml_implicit_resolvers = {  # noqa: RUF012  # the name and form that yaml asks for
        first: [
            (tag, pattern)
            for tag, pattern in resolvers
            if tag != "tag:yaml.org,2002:bool" or first in "tTfF"
        ]
        for first, resolvers in yaml.SafeLoader.yaml_implicit_resolvers.items()
    }

    def compose_node(self, parent: Any, index: Any) -> Any:
        if self.check_event(yaml.events.AliasEvent):
            mark = self.peek_event().start_mark  # type: ignore[no-untyped-call]
            raise JobError(f"Line {mark.line + 1} uses a YAML alias (*); write the value out.")
        return super().compose_node(parent, index)

    def construct_mapping(self, node: Any, deep: bool = False) -> Any:
        seen: set[Any] = set()
        for key_node, _ in node.value:
            key = key_node.value
            if isinstance(key, str) and key in seen:
                line = key_node.start_mark.line + 1
                raise JobError(f"Line {line} states the key '{key}' a second time; join the two.")
            if isinstance(key, str):
                seen.add(key)
        return super().construct_mapping(node, deep=deep)
