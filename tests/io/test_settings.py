"""TOML files: read, or refused with the file and the line."""

import pytest

from whitefringe.errors import SetupError
from whitefringe.io import read_toml, toml_text, write_text


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


ENTRIES = {
    "name": 'a "quoted" name, µ and \\',
    "count": 3,
    "share": 0.1,
    "on": True,
    "limits": [0.9, 1.1],
    "source": {"shape": "lines", "lines": [{"wavelength": "500 nm"}, {"wavelength": "501 nm", "strength": 0.5}]},
    "filter": [{"shape": "table", "repair": ["sort"]}, {"shape": "top-hat"}],
}


def test_what_is_written_is_read_again(tmp_path):
    path = write_text(toml_text(ENTRIES), tmp_path / "made.toml")
    assert read_toml(path) == ENTRIES


def test_no_toml_for_other_things():
    with pytest.raises(TypeError, match="no TOML for None"):
        toml_text({"nothing": None})


def test_text_files_are_kept_unless_told(tmp_path):
    path = write_text("a = 1", tmp_path / "kept.toml")
    with pytest.raises(SetupError, match=r"kept\.toml: the file exists; say overwrite=True"):
        write_text("a = 2", path)
    assert read_toml(write_text("a = 2", path, overwrite=True)) == {"a": 2}
    with pytest.raises(SetupError, match="there is no folder"):
        write_text("a = 3", tmp_path / "none" / "x.toml")
    assert [item.name for item in tmp_path.iterdir()] == ["kept.toml"]
