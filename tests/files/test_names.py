"""Names: whatever is typed, files stay well-formed and names stay apart."""

from __future__ import annotations

import xml.etree.ElementTree as ET
from xml.sax.saxutils import quoteattr

import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.files.names import ascii_name, clean_name, clean_unique_names


@given(st.text())
def test_a_clean_name_survives_xml_and_cleaning_again(name: str) -> None:
    cleaned = clean_name(name)
    assert cleaned and clean_name(cleaned) == cleaned
    assert ET.fromstring(f"<a n={quoteattr(cleaned)}/>").attrib["n"] == cleaned


@given(st.text())
def test_an_ascii_name_is_printable_ascii(name: str) -> None:
    plain = ascii_name(name)
    assert plain and all(" " <= c <= "~" for c in plain)


def test_what_becomes_of_characters() -> None:
    assert clean_name("tile 1") == "tile 1"
    assert clean_name("=<&>\"'") == "=<&>\"'"
    assert clean_name("a\x00b\nc\td\x7f\ud800\ufffe") == "a_b_c_d___"
    assert clean_name("") == clean_name("  ") == "_"
    assert ascii_name("café Ω") == "cafe _"


def test_names_must_stay_apart_once_cleaned() -> None:
    assert clean_unique_names(["a", "b"], "x.step") == ("a", "b")
    with pytest.raises(ValueError, match=r"x\.step: got 'a_' twice"):
        clean_unique_names(["a\x01", "a\x02"], "x.step")
    with pytest.raises(ValueError, match="no piece at all"):
        clean_unique_names([], "x.step")
