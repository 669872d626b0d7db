"""Recipe texts edited in place: the asked keys change, nothing else does."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.recipe.edit import EditError, Put, edit_file, edited
from wavejig.recipe.starter import starter

RECIPES = sorted((Path(__file__).parents[2] / "recipes").glob("*.toml"))
SIDE = Put(table="radiator", key="side", value='"31.2 mm"', remark="31 mm before; from first.s1p")


@pytest.mark.parametrize("path", RECIPES, ids=lambda p: p.stem)
def test_demo_recipes_keep_every_other_line(path: Path) -> None:
    before = path.read_text(encoding="utf-8")
    after = edited(before, [SIDE])
    assert tomllib.loads(after)["radiator"]["side"] == "31.2 mm"
    kept = iter(after.splitlines())
    assert all(line in kept for line in before.splitlines() if not line.startswith("side"))


def test_remark_and_column_stay() -> None:
    text = '[radiator]\nside  =  "30 mm"      # over the outside # twice\nwire = "1 mm"\n'
    assert edited(text, [SIDE]) == (
        "[radiator]\n# side: 31 mm before; from first.s1p\n"
        'side  =  "31.2 mm"    # over the outside # twice\nwire = "1 mm"\n'
    )


def test_a_second_measurement_replaces_the_firsts_remark() -> None:
    once = edited(starter("spare"), [SIDE])
    twice = edited(once, [Put(table="radiator", key="side", value='"31.3 mm"', remark="from second.s1p")])
    assert "before; from first.s1p" not in twice
    assert len(twice.splitlines()) == len(once.splitlines())


def test_a_key_goes_below_its_commented_line() -> None:
    lines = edited(starter("spare"), [SIDE]).splitlines()
    at = lines.index('side = "31.2 mm"')
    assert lines[at - 2].startswith('# side = "auto"')


def test_a_missing_table_comes_at_the_end() -> None:
    put = Put(table="measured", key="frequency", value="0.99", remark="from first.s1p")
    after = edited('name = "x"\n', [put])
    assert after == 'name = "x"\n\n[measured]\n# frequency: from first.s1p\nfrequency = 0.99\n'


@pytest.mark.parametrize(
    "text",
    [
        'radiator = {family = "biquad", side = "3 mm"}\n',
        'radiator.side = "3 mm"\n',
        "[radiator]\nside = [\n  1,\n  2,\n]\n",
        '[radiator]\nside = """\n31 mm"""\n',
        '[radiator]\nnote = """\nside = "30 mm"\n"""\n',
    ],
    ids=["inline table", "dotted key", "list over lines", "text over lines", "key within a text"],
)
def test_what_cannot_be_changed_safely_is_left_to_the_hand(text: str) -> None:
    tomllib.loads(text)
    with pytest.raises(EditError, match=r"31\.2 mm"):
        edited(text, [SIDE])


ROWS = ["", "# remark", 'wire = "1 mm"', 'metal = "copper" # x = 1', "standoff='2 mm'"]
RESTS = ["", "\n", "\n[feed]\nstyle = 'tube'\n", "\n[[reflector.holes]]\nx = '1 mm'\n"]


@given(st.lists(st.sampled_from(ROWS), max_size=6, unique=True), st.sampled_from(RESTS))
def test_any_layout_is_changed_in_that_key_only(rows: list[str], rest: str) -> None:
    text = "[radiator]\n" + "\n".join(rows) + rest
    before, after = tomllib.loads(text), tomllib.loads(edited(text, [SIDE]))
    assert after["radiator"].pop("side") == "31.2 mm"
    assert after == before


@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"])
@pytest.mark.parametrize("end", ["\n", "\r\n"])
def test_files_keep_their_line_ends_and_mark(tmp_path: Path, mark: bytes, end: str) -> None:
    path = tmp_path / "r.toml"
    path.write_bytes(mark + f'[radiator]{end}side = "30 mm"{end}'.encode())
    edit_file(path, [SIDE])
    raw = path.read_bytes()
    assert raw.startswith(mark + b"[radiator]")
    assert raw.count(b"\r\n") == (3 if end == "\r\n" else 0)
    assert list(tmp_path.iterdir()) == [path]


def test_a_refused_edit_leaves_the_file(tmp_path: Path) -> None:
    path = tmp_path / "r.toml"
    path.write_text('radiator.side = "3 mm"\n', encoding="utf-8")
    with pytest.raises(EditError):
        edit_file(path, [SIDE])
    assert path.read_text(encoding="utf-8") == 'radiator.side = "3 mm"\n'
    assert list(tmp_path.iterdir()) == [path]
