"""Files that appear whole or not at all."""

from __future__ import annotations

import os
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from uuid import uuid4


@contextmanager
def atomic(path: Path) -> Iterator[Path]:
    """Give a name beside `path` to write to; move it to `path` when all went well, else leave `path` as it was."""
    part = path.with_name(f".{path.name}.{uuid4().hex[:8]}{path.suffix}")
    try:
        yield part
        os.replace(part, path)
    except BaseException:
        part.unlink(missing_ok=True)
        raise
