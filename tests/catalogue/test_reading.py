"""Strict YAML: what an unquoted word means, and every way in which a text is refused.

Guesses of YAML 1.1 that must not be made are those of the YAML 1.1 type pages (yaml.org/type/).
"""

from __future__ import annotations

import pytest

from goniosim.catalogue.reading import MAX_BYTES, read_document, read_text
from goniosim.errors import BadInput


def value_of(word: str):
    return read_text(f"a: {word}\n", "text").value["a"]


@pytest.mark.parametrize("word, value", [
    ("1e-3", 0.001), ("1.0e-3", 0.001), ("-2", -2), ("+3", 3), (".5", 0.5), ("5.", 5.0), ("0", 0), ("-0.25", -0.25),
    ("true", True), ("false", False), ("null", None), ("~", None), ("", None), ("1e16", 1e16),
])
def test_words_that_mean_something(word, value):
    assert value_of(word) == value and type(value_of(word)) is type(value)


@pytest.mark.parametrize("word", ["017", "0x1F", "0o17", "12:30", "190:20:30", "yes", "no", "on", "off", "y", "Yes",
                                  "2024-01-02", "1_000", ".nan", ".inf", "nan", "True", "NULL", "<<", "1e", "--1"])
def test_words_that_stay_text(word):
    assert value_of(word) == word


def test_quoted_numbers_stay_text():
    assert value_of("'7.9'") == "7.9" and value_of('"1"') == "1"


def test_places_count_from_one():
    document = read_text("a: 1\nb:\n  - {c: 2, d: 3}\n", "text")
    assert document.value_places[("b", 0, "d")] == (3, 15)
    assert document.key_places[("b", 0, "d")] == (3, 12)


def test_letters_beyond_ascii_count_as_one_column():
    document = read_text("{t: 'äöü€', c: 2}\n", "text")
    assert document.value_places[("c",)] == (1, 16)


def test_key_given_twice_names_both_lines(report, flat_lens):
    assert report(flat_lens.replace("title: Demo", "title: Demo\nname: other")) == (
        "demo.yaml has 1 problem\n"
        "  line 5, column 1  name  is given twice (first on line 3)\n"
        "More: goniosim plugins explain lens")


def test_key_given_twice_inside_a_face(report, flat_lens):
    text = flat_lens.replace("radius_mm: 6.0", "radius_mm: 6.0, radius_mm: 7.0")
    column = text.splitlines()[11].index("radius_mm: 7.0") + 1
    assert f"line 12, column {column}  bodies[0].faces[2].radius_mm  is given twice (first on line 12)" in report(text)


def test_anchors_and_aliases_are_refused_once():
    bomb = "a: &a [x, x]\n" + "".join(f"{chr(98 + i)}: &{chr(98 + i)} [*{chr(97 + i)}, *{chr(97 + i)}]\n"
                                      for i in range(20))
    with pytest.raises(BadInput) as caught:
        read_text(bomb, "bomb.yaml").refuse([])
    assert str(caught.value) == ("bomb.yaml has 1 problem\n  line 1, column 4  anchors (&) and aliases (*) are not used "
                                 "in these files; write the values out")


@pytest.mark.parametrize("text, message", [
    ("", "  is empty"),
    ("# only a comment\n", "  is empty"),
    ("a: 1\n---\nb: 2\n", "  line 2, column 1  a second document begins here; a file holds one"),
    ("a: !!python/object/apply:os.system ['true']\n",
     "  line 1, column 4  a  carries the tag tag:yaml.org,2002:python/object/apply:os.system; "
     "tags are not used in these files"),
    ("a: !thing 1\n", "  line 1, column 4  a  carries the tag !thing; tags are not used in these files"),
    ("a:\n\t- 1\n", "  line 2, column 1  a tab stands here; indent with spaces"),
    ("? [a, b]\n: 1\n", "  line 1, column 3  a key must be a word"),
    ("a: 1e999\n", "  line 1, column 4  a  is too large a number"),
    ("a: " + "9" * 5000 + "\n", "  line 1, column 4  a  is too large a number"),
    ("a: \x07\n", "  line 1, column 4  holds the control character '\\x07'; save it as plain text"),
])
def test_texts_that_are_refused(text, message):
    with pytest.raises(BadInput) as caught:
        read_text(text, "demo.yaml").refuse([])
    assert str(caught.value) == "demo.yaml has 1 problem\n" + message


@pytest.mark.parametrize("text", ["[" * 5000, "a: " + "[" * 60 + "]" * 60, "{a: " * 40 + "1" + "}" * 40,
                                  "- " * 3000 + "x"])
def test_deep_nesting_is_refused(text):
    with pytest.raises(BadInput, match="is nested more than 20 deep"):
        read_text(text, "deep.yaml")


def test_broken_syntax_says_where():
    with pytest.raises(BadInput, match=r"line 2, column \d+ +cannot be read as YAML: ") as caught:
        read_text("a: [1, 2\nb: 3\n", "demo.yaml")
    assert "Traceback" not in str(caught.value)


def test_not_utf8(report):
    assert report("goniosim: lens\ntitle: gro\xdf\n".encode("latin-1")) == (
        "demo.yaml has 1 problem\n  line 2, column 11  is not UTF-8 text; save it as UTF-8")


def test_byte_order_mark_is_harmless(tmp_path):
    path = tmp_path / "demo.yaml"
    path.write_bytes(b"\xef\xbb\xbfa: 1\n")
    assert read_document(path).value == {"a": 1}


def test_huge_file_is_not_even_read(tmp_path):
    path = tmp_path / "huge.yaml"
    path.write_text("a: 1\n" + "#" * MAX_BYTES)
    with pytest.raises(BadInput, match="is larger than 1000 kB; files of this kind are small"):
        read_document(path)


def test_folder_and_missing_file(tmp_path):
    with pytest.raises(BadInput, match="is a folder; a file is needed"):
        read_document(tmp_path)
    with pytest.raises(BadInput, match="cannot be read: No such file or directory"):
        read_document(tmp_path / "none.yaml")
