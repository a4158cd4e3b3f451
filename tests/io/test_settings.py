"""TOML files: read, or refused with the file and the line."""

import pytest

from whitefringe.errors import SetupError
from whitefringe.io import read_toml


@pytest.mark.parametrize("text", ["[source]\nshape = 'flat'\nn = 3\n", "\ufeff[source]\r\nshape = 'flat'\r\nn = 3\r\n"])
def test_a_file_becomes_a_dictionary(tmp_path, text):
    path = tmp_path / "bench.toml"
    path.write_bytes(text.encode())
    assert read_toml(path) == {"source": {"shape": "flat", "n": 3}}
    assert read_toml(str(path)) == read_toml(path)


def test_an_empty_file_is_an_empty_dictionary(tmp_path):
    path = tmp_path / "bench.toml"
    path.write_text("# nothing yet\n")
    assert read_toml(path) == {}


def test_a_missing_file(tmp_path):
    with pytest.raises(SetupError, match=r"bench\.toml: no such setup file"):
        read_toml(tmp_path / "bench.toml")


def test_a_folder(tmp_path):
    with pytest.raises(SetupError, match=r"cannot be read \(.*[Dd]irectory"):
        read_toml(tmp_path)


@pytest.mark.parametrize(
    ("content", "message"),
    [
        (b"a = 1\nb = \n", r"not valid TOML: Invalid value \(at line 2, column 5\)"),
        (b"a = 1\na = 2\n", r"not valid TOML: Cannot overwrite a value \(at line 2"),
        (b"width, 3\n", r"not valid TOML: .* \(at line 1"),
        (b"name = '\xff'\n", r"cannot be read \(.*can't decode byte 0xff"),
    ],
)
def test_what_is_not_toml(tmp_path, content, message):
    path = tmp_path / "bench.toml"
    path.write_bytes(content)
    with pytest.raises(SetupError, match=rf"bench\.toml: {message}"):
        read_toml(path)
