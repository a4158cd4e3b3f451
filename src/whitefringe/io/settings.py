"""TOML files in, plain dictionaries out."""

from __future__ import annotations

import tomllib
from pathlib import Path
from typing import Any

from ..errors import SetupError


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
