"""Whole edition files against published tables: a file in through the front door, printed figures out.

Every table with its score is in tests/published (claims, made as data); these few hold that a file that a publisher
could write gives the same. Rows from memory say so in the tables' last columns.
"""

from __future__ import annotations

import csv
from pathlib import Path

import pandas as pd
import pytest

from chartgen.edition.load import load_edition
from chartgen.figures.table import figures, select

DATA = Path(__file__).parent / "data"


def printed_in(path: Path) -> list[dict[str, str]]:
    """The rows of a published table."""
    with path.open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(line for line in file if not line.startswith("#")))


def column(rows: list[dict[str, str]], name: str) -> list[float]:
    return [float(row[name]) for row in rows]


def made(name: str) -> pd.DataFrame:
    """The table of a test edition."""
    return figures(load_edition(DATA / name)).table


def test_rule_126_parts_and_totals(published: Path) -> None:
    """The Highway Code, rule 126 (stored page): thinking, braking and total in metres, 6 of 6 rows each."""
    theirs = printed_in(published / "uk_highway_code_126.csv")
    ours = made("rule126")
    assert ours["printed_speed"].tolist() == column(theirs, "speed_mph")
    assert ours["printed_reaction"].tolist() == column(theirs, "thinking_m")
    assert ours["printed_braking"].tolist() == column(theirs, "braking_m")
    assert ours["printed_stopping"].tolist() == column(theirs, "total_m")
    assert ours["printed_lag"].tolist() == [0.0] * 6


@pytest.mark.parametrize(("name", "file", "unit"), [
    ("sight-us", "aashto_ssd_level_us.csv", "ft"),
    ("sight-metric", "aashto_ssd_level_metric.csv", "m"),
])  # fmt: skip
def test_green_book_design_values(name: str, file: str, unit: str, published: Path) -> None:
    """AASHTO Green Book, table 3-1, level: every design value, 14 of 14 in feet and 12 of 12 in metres."""
    theirs = printed_in(published / file)
    assert made(name)["printed_stopping"].tolist() == column(theirs, f"ssd_design_{unit}")
    assert len(theirs) == {"ft": 14, "m": 12}[unit]


def test_licence_manual_at_55_mph(published: Path) -> None:
    """Model Commercial Driver License Manual, sections 2.6.1 and 5.4.2 (stored pages), at 55 mph.

    The stated times, 1.75 s and 0.75 s, rounded up, are the printed 142 and 61 ft. The lag of 32 ft is 0.4 s to the
    nearest foot (the text's half second would be 40). The braking is no check: its deceleration is fitted to the
    printed 216 ft, and the edition says so.
    """
    theirs = {row["component"]: float(row["distance_ft"]) for row in printed_in(published / "us_cdl_manual_55mph.csv")}
    edition = load_edition(DATA / "licence-manual")
    found = figures(edition)

    def one(driver: str, vehicle: str) -> pd.Series:
        return select(found, driver=driver, vehicle=vehicle).iloc[0]

    perception, reaction = one("perception", "air"), one("reaction", "air")
    assert perception["printed_reaction"] == theirs["perception"]
    assert reaction["printed_reaction"] == theirs["reaction"]
    assert reaction["printed_lag"] == theirs["air_brake_lag"]
    assert reaction["printed_braking"] == theirs["braking"]
    source = edition.vehicle("air").source
    assert source is not None
    assert "fitted" in source.text
    # Three printed parts of the manual, added: 142 + 61 + 216; with the lag 451, which it prints as "at least 450".
    hydraulic = perception["printed_reaction"] + one("reaction", "hydraulic")["printed_stopping"]
    assert hydraulic == theirs["total_hydraulic"]
    assert perception["printed_reaction"] + reaction["printed_stopping"] == 451.0
    assert theirs["total_air_brakes"] == 450.0
    # 2.5 s in one piece are 201.7 ft, printed 202: the manual's 203 is a sum of two rounded parts.
    assert one("both", "air")["printed_reaction"] == 202.0


@pytest.mark.parametrize("condition", ["surprise", "expected"])
def test_two_percentiles_of_a_reaction_time_give_the_third(condition: str, published: Path, tmp_path: Path) -> None:
    """Koppa, Traffic Flow Theory, chapter 3 (in part from memory): the printed p95 from p50 and p85, within 0.01 s."""
    theirs = next(
        row
        for row in printed_in(published / "prt_distributions.csv")
        if row["study"].startswith("Koppa") and row["condition"] == condition
    )
    text = (DATA / "rule126" / "edition.toml").read_text(encoding="utf-8")
    stated = f'{{ p50 = "{theirs["p50"]} s", p85 = "{theirs["p85"]} s" }}\npercentile = "p95"'
    assert text.count('"0.6818 s"') == 1
    (tmp_path / "edition.toml").write_text(text.replace('"0.6818 s"', stated), encoding="utf-8")
    reaction = load_edition(tmp_path).driver("thinking").reaction
    assert reaction.time_s == pytest.approx(float(theirs["p95"]), abs=0.01)
    assert reaction.mu == pytest.approx(float(theirs["lognormal_lambda"]), abs=0.01)
    assert reaction.sigma == pytest.approx(float(theirs["lognormal_zeta"]), abs=0.01)
