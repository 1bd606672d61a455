"""Which file an edition is, and what a sound one becomes."""

from __future__ import annotations

import shutil
import subprocess
import sys
from collections.abc import Callable
from datetime import date
from math import exp
from pathlib import Path

import pytest
from scipy.stats import norm

from chartgen.edition.find import names
from chartgen.edition.load import load_edition
from chartgen.edition.model import Case, Edition, Rounding
from chartgen.errors import CommandFault, EditionFaults
from chartgen.report import sentences

EXAMPLE = Path(__file__).parent / "data" / "example"
STARTERS = Path(__file__).parents[2] / "site_config"
Changed = Callable[..., Edition]
Messages = Callable[..., list[str]]


# ---- the whole example ---------------------------------------------------------------------------------------------


def test_the_whole_example_becomes_an_edition() -> None:
    made = load_edition(EXAMPLE)
    assert (made.id, made.issue, made.issued) == ("tarnholt", "3", date(2026, 11, 2))
    assert made.languages == ("en-GB", "cy")
    choices = [made.status, made.emphasis, made.unit_style, made.speed_unit, made.distance_unit, made.also_unit]
    assert choices == ["draft", "equal", "si", "mph", "m", "ft"]
    assert list(made.speeds) == [20, 30, 40, 50, 60, 70]
    assert made.speeds_mps[0] == 8.9408
    assert made.rounding == Rounding(step=1, also_step=1)
    assert [d.id for d in made.drivers] == ["ready", "surprised", "survey"]
    assert made.driver("survey").reaction.time_s == 1.6
    assert made.driver("surprised").preset == "reaction/surprise"
    assert (made.surface("dry").friction.low, made.surface("dry").friction.high) == (0.60, 0.80)
    assert (made.surface("wet").friction.f60, made.surface("wet").friction.sp_kmh) == (0.35, 110)
    lorry = made.vehicle("lorry")
    assert (lorry.max_deceleration_mps2, lorry.brake_lag_s, lorry.build_up_s, lorry.length_m) == (5, 0.4, 0.3, 16.5)
    assert made.cases == (
        Case(drivers=("ready", "survey"), vehicles=("car", "lorry"), surfaces=("dry", "wet"), grades=(0.0,)),
    )
    assert made.posters[0].paper.width_mm == 297
    assert made.cards is not None
    assert [row.vehicle_id for row in made.cards.roster] == ["TV 07", "TV 12", "TV 19"]


def test_what_the_example_asks_for_beyond_this_version_is_named() -> None:
    made = load_edition(EXAMPLE)
    reason = "the press edition (inks, bleed, marks, profile) is not made yet"
    assert made.unmade == tuple(f"press.{key}: {reason}" for key in ("bleed", "marks", "inks", "profile"))
    assert made.warnings == ('cards.gap: no following-gap rule is chosen; "gap/two-seconds" is used.',)


# ---- which file ----------------------------------------------------------------------------------------------------


def test_an_edition_is_a_folder_a_file_or_a_name(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    shutil.copytree(EXAMPLE, tmp_path / "site_config" / "own")
    assert load_edition("site_config/own") == load_edition(Path("site_config/own/edition.toml")) == load_edition("own")
    assert list(names()) == ["own"]


def test_without_editions_of_ones_own_the_starters_have_names(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    assert list(names()) == ["quillane", "sarvelle", "tarnholt"]
    assert load_edition("quillane").id == "quillane"


def test_no_such_edition(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    with pytest.raises(CommandFault) as caught:
        load_edition("tarnhold")
    assert sentences(caught.value) == (
        'There is no edition "tarnhold"; did you mean "tarnholt"?',
        "Right: a folder that holds edition.toml, that file, or one of: quillane, sarvelle, tarnholt.",
    )
    assert caught.value.exit_code == 2


def test_a_folder_without_an_edition(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    (tmp_path / "empty").mkdir()
    with pytest.raises(CommandFault) as caught:
        load_edition("empty")
    assert sentences(caught.value) == (
        'The folder "empty" holds no edition.toml.',
        "Right: a folder with a file edition.toml.",
    )
    assert caught.value.exit_code == 2


@pytest.mark.parametrize(
    ("data", "said"),
    [
        (b"", "the file is empty. Right: at least [edition], [languages], [units] and so on."),
        (
            b'[edition]\nid = "caf\xe9"\n',
            "the file is not UTF-8: the byte 0xe9 in line 2 does not belong there. Right: save the file as UTF-8.",
        ),
        (b"#" * 1_000_001, "the file is larger than 1 MB. Right: at most 1,000,000 bytes."),
        (
            b"a = " + b"[" * 5000 + b"]" * 5000,
            "lists or tables stand too deep in one another. Right: a flat file.",
        ),
    ],
)
def test_a_file_that_cannot_be_read(data: bytes, said: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    (tmp_path / "vale").mkdir()
    (tmp_path / "vale" / "edition.toml").write_bytes(data)
    with pytest.raises(EditionFaults) as caught:
        load_edition("vale")
    assert sentences(caught.value) == (f"vale/edition.toml: {said}", "1 fault; nothing was made.")


def test_a_byte_order_mark_is_dropped(write: Callable[..., str]) -> None:
    file = Path(write()) / "edition.toml"
    file.write_bytes(b"\xef\xbb\xbf" + file.read_bytes())
    assert load_edition("vale").id == "vale"


def test_an_almost_empty_file_says_everything_that_is_needed(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    (tmp_path / "edition.toml").write_text("# nothing yet\n")
    with pytest.raises(EditionFaults) as caught:
        load_edition("edition.toml")
    assert [fault.key for fault in caught.value.faults] == [
        "edition", "languages", "units", "speeds", "driver", "surface", "vehicle",
    ]  # fmt: skip


# ---- what it becomes -----------------------------------------------------------------------------------------------


def test_speeds_by_steps_are_exact(edition: Changed) -> None:
    made = edition(
        ('steps = ["20 mph", "30 mph", "70 mph"]', 'from = "10 mph"\nto = "70 mph"\nby = "2.5 mph"'),
    )
    assert made.speeds == tuple(10 + 2.5 * i for i in range(25))


def test_too_many_speeds_in_a_list(messages: Messages) -> None:
    steps = ", ".join(f'"{i} mph"' for i in range(1, 202))
    said = messages(('"20 mph", "30 mph", "70 mph"', steps))
    assert said[0].endswith(": the list has 201 entries. Right: 1 to 200 entries.")


def test_too_many_rows_are_counted_not_made(messages: Messages) -> None:
    ids = [f"d{i}" for i in range(150)]
    drivers = "".join(
        f'\n[[driver]]\nid = "{i}"\nname = {{ en-GB = "A", cy = "B" }}\nreaction_time = "1 s"\n' for i in ids
    )
    grades = ", ".join(f'"{i / 10} %"' for i in range(-90, 90))
    said = messages(('driver = ["ready"]', f"driver = {ids}".replace("'", '"') + f"\ngrade = [{grades}]"), more=drivers)
    assert said == [
        (
            "vale/edition.toml: case: the cases and speeds make 324,000 rows. "
            "Right: at most 5,000 rows: fewer speeds or shorter lists."
        )
    ]


def test_without_cases_everything_goes_together_on_the_level(edition: Changed) -> None:
    case = '[[case]]\ndriver = ["ready"]\nvehicle = ["car", "lorry"]\nsurface = ["dry", "wet"]\n'
    made = edition((case, ""))
    assert made.cases == (Case(drivers=("ready",), vehicles=("car", "lorry"), surfaces=("dry", "wet")),)


def test_units_by_hand(edition: Changed) -> None:
    made = edition(('system = "uk"', 'speed = "mile/hour"\ndistance = "feet"\nalso = "m"'))
    assert (made.speed_unit, made.distance_unit, made.also_unit) == ("mph", "ft", "m")


def test_a_rounding_rule_by_part(edition: Changed) -> None:
    made = edition(("[[driver]]", '[figures.rounding]\nstep = "5 m"\nrule = { reaction = "nearest" }\n\n[[driver]]'))
    assert made.rounding == Rounding(step=5, rules={"reaction": "nearest", "lag": "up", "braking": "up"})


@pytest.mark.parametrize(("p85", "p95"), [("1.5 s", None), (None, "2.2 s")])
def test_a_lognormal_goes_through_its_two_percentiles(edition: Changed, p85: str | None, p95: str | None) -> None:
    other = f'p85 = "{p85}"' if p85 else f'p95 = "{p95}"'
    reaction = edition(('"0.8 s"', f'{{ p50 = "1.1 s", {other} }}')).driver("ready").reaction
    assert reaction.mu is not None
    assert reaction.sigma is not None
    # Against SciPy's normal quantiles.
    q, stated = (0.85, 1.5) if p85 else (0.95, 2.2)
    assert exp(reaction.mu) == pytest.approx(1.1)
    assert exp(reaction.mu + reaction.sigma * norm.ppf(q)) == pytest.approx(stated)
    assert reaction.percentile == "p85"
    assert reaction.time_s == pytest.approx(exp(reaction.mu + reaction.sigma * norm.ppf(0.85)))


def test_the_median_is_printed_only_with_a_warning(edition: Changed) -> None:
    made = edition(('"0.8 s"', '{ p50 = "1.1 s", p85 = "1.6 s" }\npercentile = "p50"'))
    assert made.driver("ready").reaction.time_s == 1.1
    assert made.warnings == (
        "driver[1].percentile: the median is printed: half of drivers need longer than the figures allow.",
    )


def test_a_preset_lends_its_source_only_to_its_own_value(edition: Changed) -> None:
    own = edition(('reaction_time = "0.8 s"', 'reaction_time = "1.2 s"\nuse = "reaction/road-design"')).driver("ready")
    assert (own.reaction.time_s, own.source.text) == (1.2, "")
    both = edition(('reaction_time = "0.8 s"', 'use = "reaction/road-design"')).driver("ready")
    assert (both.reaction.time_s, both.source.kind, both.name["en-GB"]) == (2.0, "design value", "Ready")


@pytest.mark.parametrize(
    ("change", "warning"),
    [
        (
            ('"0.8 s"', '"5 s"'),
            'driver[1].reaction_time: "5 s" is accepted but unusual; usual is 0.3 s to 4 s.',
        ),
        (
            ("friction = 0.64", "friction = 1.3"),
            "surface[1].friction: 1.3 is accepted but unusual; usual is up to 1.2.",
        ),
        (
            ('"0.4 s"', '"1.5 s"'),
            "vehicle[2].brake_lag: a lag of 1.5 s is accepted but unusual for air brakes; usual is 0.2 s to 1 s.",
        ),
        (
            ('surface = ["dry", "wet"]', 'surface = ["dry", "wet"]\ngrade = ["0 %", "-14 %"]'),
            'case[1].grade[2]: "-14 %" is accepted but unusual; usual is -12 % to 12 %.',
        ),
    ],
)
def test_the_unusual_is_a_warning(edition: Changed, change: tuple[str, str], warning: str) -> None:
    assert edition(change).warnings == (warning,)


def test_a_draft_may_miss_a_text(edition: Changed) -> None:
    made = edition(('"uncontrolled"', '"draft"'), (', cy = "Sych"', ""))
    assert made.surface("dry").name == {"en-GB": "Dry"}
    assert made.warnings == ("surface[1].name.cy: the text in this language is missing; only a draft may miss it.",)


def test_the_laden_partner_is_found_by_its_id(edition: Changed) -> None:
    empty = """
[[vehicle]]
id = "lorry-unladen"
kind = "lorry"
load = "unladen"
name = { en-GB = "Lorry, unladen", cy = "Lori wag" }
max_deceleration = "4.5 m/s^2"
brake_lag = "0.4 s"
"""
    assert edition(more=empty).vehicle("lorry-unladen").unladen_of == "lorry"


def test_a_sight_method_needs_no_friction(edition: Changed) -> None:
    made = edition(
        ("[[driver]]", '[figures]\nmethod = "sight-metric"\n\n[[driver]]'),
        ("friction = 0.64\n", ""),
        ('kind = "car"', 'kind = "car"\nmax_deceleration = "3.4 m/s^2"'),
        ('brake_lag = "0.4 s"\n', ""),
    )
    assert made.surface("dry").friction.mu is None
    assert made.warnings == (
        "surface[2].friction: the method sight-metric does not use friction; the value has no effect.",
    )


def test_a_size_of_card_that_is_not_made_yet_is_named(edition: Changed) -> None:
    cards = '\n[cards]\nsize = "ID-1"\nroster = "roster.csv"\ngap = "gap/two-seconds"\n'
    Path("vale/roster.csv").write_text("vehicle_id,vehicle,languages,copy_no\nV 1,car,cy,1\n")
    assert edition(more=cards).unmade == ("cards.size: cards are made on A6 only; ID-1 is not made yet",)


# ---- what loading costs --------------------------------------------------------------------------------------------


def test_loading_brings_in_no_heavy_library() -> None:
    """The units library brings numpy and Babel along, which all that follows needs too; nothing else may come."""
    code = (
        "import sys; from chartgen.edition.load import load_edition; "
        f"load_edition({str(STARTERS / 'tarnholt')!r}); "
        "print(*sorted({m.partition('.')[0] for m in sys.modules} & "
        "{'matplotlib', 'pandas', 'weasyprint', 'jinja2', 'pikepdf', 'rich'}))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == ""
