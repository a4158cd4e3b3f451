"""TOML files: to plain dictionaries and back."""

from __future__ import annotations

import json
import tomllib
from pathlib import Path
from typing import Any

from ..errors import SetupError
from ._atomic import atomic


def read_toml(path: str | Path) -> dict[str, Any]:
    """Read a TOML file.

    Raises
    ------
    SetupError
        The file is missing, unreadable or not TOML; the message names the file and the line.
    """
    path = Path(path)
    try:
        text = path.read_text(encoding="utf-8-sig")
    except FileNotFoundError:
        raise SetupError(f"{path}: no such setup file") from None
    except (OSError, UnicodeDecodeError) as error:
        raise SetupError(f"{path}: cannot be read ({error})") from None
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise SetupError(f"{path}: not valid TOML: {error}") from None


def toml_text(entries: dict[str, Any], heading: str = "") -> str:
    """Write nested dictionaries as TOML: text, numbers, truth values, lists of those, tables and lists of tables.

    Examples
    --------
    >>> print(toml_text({"name": "bench", "scan": {"passes": 2}, "filter": [{"shape": "table"}]}))
    name = "bench"
    <BLANKLINE>
    [scan]
    passes = 2
    <BLANKLINE>
    [[filter]]
    shape = "table"
    """
    lines = [f"{name} = {_toml_value(value)}" for name, value in entries.items() if not _is_table(value)]
    for name, value in entries.items():
        for table in value if isinstance(value, list) and _is_table(value) else [value] if _is_table(value) else []:
            key = f"{heading}.{name}" if heading else name
            bracketed = f"[[{key}]]" if isinstance(value, list) else f"[{key}]"
            lines += ["", bracketed, toml_text(table, key)]
    return "\n".join(lines).lstrip("\n")


def _is_table(value: Any) -> bool:
    return isinstance(value, dict) or (isinstance(value, list) and bool(value) and all(isinstance(item, dict) for item in value))


def _toml_value(value: Any) -> str:
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, (int, float)):
        return repr(value)
    if isinstance(value, str):
        return json.dumps(value, ensure_ascii=False)
    if isinstance(value, (list, tuple)):
        return "[" + ", ".join(_toml_value(item) for item in value) + "]"
    raise TypeError(f"no TOML for {value!r}")


def write_text(text: str, path: str | Path, *, overwrite: bool = False) -> Path:
    """Write a text file whole or not at all.

    Raises
    ------
    SetupError
        The file exists and `overwrite` is false, or its folder is missing.
    """
    path = Path(path)
    if path.exists() and not overwrite:
        raise SetupError(f"{path}: the file exists; say overwrite=True to replace it")
    if not path.parent.is_dir():
        raise SetupError(f"{path}: there is no folder {path.parent} to write to")
    with atomic(path) as part:
        part.write_text(text, encoding="utf-8")
    return path
