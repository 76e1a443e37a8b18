"""Writing of plain documents as TOML 1.0: what is read back equals what was written."""

import re
from collections.abc import Mapping
from typing import Any

_BARE = re.compile(r"[A-Za-z0-9_-]+")
_ESCAPES = {'"': '\\"', "\\": "\\\\", "\n": "\\n", "\t": "\\t", "\r": "\\r", "\b": "\\b", "\f": "\\f"}


def to_toml(document: Mapping[str, Any]) -> str:
    """The text of a document whose tables are headed, and whose lists of tables at the top are entries [[…]].

    Deeper tables stand inline when they hold no table of their own, else under headers of their own.
    """
    lines: list[str] = []
    _table(document, (), lines)
    return "\n".join(lines).lstrip("\n") + "\n"


def _table(table: Mapping[str, Any], path: tuple[str, ...], lines: list[str]) -> None:
    headed = {key: v for key, v in table.items() if _needs_header(v, len(path))}
    for key, value in table.items():
        if key not in headed:
            lines.append(f"{_key(key)} = {_value(value)}")
    for key, value in headed.items():
        name = ".".join(map(_key, (*path, key)))
        for header, content in [(f"[[{name}]]", v) for v in value] if isinstance(value, list) else [(f"[{name}]", value)]:
            if isinstance(value, list) or not content or not all(_needs_header(v, len(path) + 1) for v in content.values()):
                lines += ["", header]
            _table(content, (*path, key), lines)


def _needs_header(value: Any, depth: int) -> bool:
    if isinstance(value, list):
        return depth == 0 and bool(value) and all(isinstance(v, Mapping) for v in value)
    return isinstance(value, Mapping) and (depth == 0 or (depth < 3 and _holds_table(value)))


def _holds_table(value: Mapping[str, Any]) -> bool:
    return any(isinstance(v, Mapping) for v in value.values())


def _key(key: str) -> str:
    return key if _BARE.fullmatch(key) else _text(key)


def _text(text: str) -> str:
    return '"' + "".join(_ESCAPES.get(c, f"\\u{ord(c):04x}" if ord(c) < 32 or ord(c) == 127 else c) for c in text) + '"'


def _value(value: Any) -> str:
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return _text(value)
    if isinstance(value, Mapping):
        return "{ " + ", ".join(f"{_key(k)} = {_value(v)}" for k, v in value.items()) + " }" if value else "{}"
    if isinstance(value, (list, tuple)):
        return "[" + ", ".join(map(_value, value)) + "]"
    if isinstance(value, int):
        return str(value)
    return repr(float(value))
