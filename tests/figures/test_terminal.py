"""The table in a terminal: every printed figure, units in the heads, words where there is no figure, any width."""

from __future__ import annotations

import re
from collections.abc import Callable

import pytest

from chartgen.edition.model import Cards, Case, Edition, Friction, Paper, Rounding, Source, Surface, Vehicle
from chartgen.figures.export import whole
from chartgen.figures.table import figures
from chartgen.figures.terminal import table_text

Make = Callable[..., Edition]
HERE = Source(text="invented for this test")


@pytest.fixture
def icy(make_edition: Make) -> Edition:
    lorry = Vehicle(
        id="lorry", kind="lorry", name={"en-GB": "Lorry"}, load="laden", max_deceleration_mps2=5.0, brake_lag_s=0.4,
        length_m=16.5,
    )  # fmt: skip
    surfaces = tuple(
        Surface(id=i, name={"en-GB": n}, friction=Friction(mu=mu), source=HERE, state=i)  # type: ignore[arg-type]  # as written
        for i, n, mu in (("dry", "Dry road", 0.7), ("ice", "Black ice", 0.05))
    )
    a6 = Paper(name="A6", width_mm=105, height_mm=148)
    return make_edition(
        also_unit="ft",
        vehicles=(lorry,),
        surfaces=surfaces,
        cases=(Case(drivers=("ready",), vehicles=("lorry",), surfaces=("dry", "ice"), grades=(-0.09,)),),
        cards=Cards(size=a6, sheet=a6, roster=(), driver="ready", surfaces=("dry",), grade=-0.09, gap="gap/per-length"),
    )


def test_the_whole_text_of_a_small_edition(make_edition: Make) -> None:
    edition = make_edition()
    assert (
        table_text(figures(edition), edition, width=100)
        == """\
Tried (tried)
Tarnholt Vale Road Safety Forum, issue 1, 2026-01-02
Speeds in mph, distances in m; method: first-principles.
Rounded up to 1 m, total the sum of the printed parts.

Ready · Car · Dry · level
  reaction 0.8 s; no brake lag; deceleration 6.57 m/s² as full braking begins, friction 0.67;
  surface dry; level; load not stated.

Speed   Reaction   Braking   Stopping
(mph)        (m)       (m)        (m)
─────────────────────────────────────
   20          8         7         15
   30         11        14         25
"""
    )


def test_does_not_stop_is_said_in_words_with_the_reason(icy: Edition) -> None:
    text = table_text(figures(icy), icy, width=120)
    assert "does not stop: the slope pulls at least as hard as the brakes can hold" in text
    assert text.count("does not  ") == 2 * 3  # two speeds: braking, stopping, stopping in feet
    assert "nan" not in text
    assert "Black ice · 9 % downhill" in text
    assert "deceleration −0.39 m/s²" in text


def test_rounding_that_may_be_short_is_said(make_edition: Make) -> None:
    rules = {"reaction": "nearest", "lag": "nearest", "braking": "up"}
    edition = make_edition(rounding=Rounding(rules=rules), also_unit="ft")  # type: ignore[arg-type]  # as written
    text = " ".join(table_text(figures(edition), edition, width=100).split())
    assert "Rounded to 1 m (1 ft) by part (reaction nearest, lag nearest, braking up)" in text
    assert "may be up to 0.2 m or 0.5 ft short." in text


@pytest.mark.parametrize("width", [20, 30, 40, 55, 60, 65, 70, 75, 80, 85, 100, 140])
def test_any_width_shows_all_columns_and_cuts_nothing(width: int, icy: Edition) -> None:
    """No line is too long, no column is dropped, no figure is missing, no word is cut with dots."""
    found = figures(icy)
    text = table_text(found, icy, width=width)
    assert max(len(line) for line in text.splitlines()) <= width
    assert "…" not in text
    words: list[str] = re.findall(r"[\w.−]+", text)
    printed = [f"printed_{c}" for c in ("speed", "reaction", "lag", "braking", "stopping", "gap_s", "gap_distance")]
    for column in [*printed, "printed_also_stopping"]:
        for value in found.table[column].dropna():
            assert str(whole(value)) in words, f"{column} {value} is not shown at width {width}"
    for head, times in {"Speed": 2, "Reaction": 2, "Lag": 2, "Braking": 2, "Stopping": 4, "Gap": 4}.items():
        assert words.count(head) >= times, f"{head} at width {width}"


def test_plain_text_has_no_control_characters_and_colour_has(icy: Edition) -> None:
    found = figures(icy)
    plain, colour = table_text(found, icy), table_text(found, icy, colour=True)
    assert "\x1b" not in plain
    assert "\x1b[" in colour
    bare = re.sub(r"\x1b\[[0-9;]*m", "", colour)
    assert [line.rstrip() for line in bare.splitlines()] == plain.splitlines()


def test_the_surroundings_do_not_matter(icy: Edition, monkeypatch: pytest.MonkeyPatch) -> None:
    found = figures(icy)
    before = table_text(found, icy)
    for name, value in {"COLUMNS": "33", "NO_COLOR": "", "FORCE_COLOR": "1", "TERM": "dumb"}.items():
        monkeypatch.setenv(name, value)
    assert table_text(found, icy) == before


def test_names_are_english_where_there_are_any(make_edition: Make) -> None:
    edition = make_edition(languages=("cy", "en-GB"), title={"cy": "Lle i stopio", "en-GB": "Room to stop"})
    assert table_text(figures(edition), edition).startswith("Room to stop (tried)")
    welsh = make_edition(languages=("cy",), title={"cy": "Lle i stopio"})
    assert table_text(figures(welsh), welsh).startswith("Lle i stopio (tried)")


def test_square_brackets_in_a_name_are_no_markup(make_edition: Make) -> None:
    edition = make_edition(title={"en-GB": "[bold]Room[/bold]"})
    assert table_text(figures(edition), edition).startswith("[bold]Room[/bold] (tried)")
