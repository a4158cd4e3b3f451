"""The only room that opens users' files: tables, settings, and safe writing."""

from .packaged import read_packaged
from .settings import read_toml, toml_text, write_text
from .tables import read_table, sha256_of, write_table

__all__ = ["read_packaged", "read_table", "read_toml", "sha256_of", "toml_text", "write_table", "write_text"]
