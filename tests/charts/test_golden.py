"""Do the drawings still look as they did when somebody last looked at them?"""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path
from typing import Any

import pandas as pd
import pytest

from chartgen.charts import columns, raster
from chartgen.charts.drawing import Drawing, Label
from chartgen.charts.inks import Palette, palette
from chartgen.charts.rungs import Rung, rungs
from chartgen.errors import MachineFault
from tests.charts import golden
from tests.charts.made import AR, CY, EN, FR, rows

MPH = (20, 30, 40, 50, 60, 70)
NAMES = (
    {"en-GB": "Typical driver", "cy": "Gyrrwr arferol"},
    {"en-GB": "Cautious", "cy": "Gofalus"},
    {"en-GB": "Tired", "cy": "Blinedig"},
)
POSTER: dict[str, Any] = {
    "languages": (EN, CY), "palette": palette("gorse"), "width_mm": 260, "height_mm": 290, "direction": "ltr",
    "distance_unit": "m", "speed_unit": "mph",
}  # fmt: skip
WEB: dict[str, Any] = {**POSTER, "languages": (EN,), "width_mm": 180, "height_mm": 104, "medium": "web"}


def spread(frame: pd.DataFrame) -> pd.DataFrame:
    """The rows with whiskers, invented: from a fifth under the stopping distance to a quarter over it."""
    shares = {"stopping_p50_m": 0.8, "stopping_p85_m": 1.0, "stopping_p95_m": 1.25}
    return frame.assign(**{name: frame["stopping_distance_m"] * share for name, share in shares.items()})


PICTURES: dict[str, dict[str, Any]] = {
    "columns": {**POSTER, "series": [rows(MPH)]},
    "columns-lag": {**POSTER, "series": [rows(MPH, lag_s=0.4, deceleration=5)], "palette": palette("lichen")},
    "columns-rtl": {
        **POSTER, "series": [rows((30, 50, 70, 80, 90, 110, 130), lag_s=0.4, deceleration=5, speed_unit="km/h")],
        "languages": (AR, FR), "palette": palette("bracken"), "direction": "rtl", "speed_unit": "km/h",
    },
    "columns-endless": {**POSTER, "series": [rows(MPH, lag_s=0.4, deceleration=[0.8, 0.6, 0.5, 0, 0, 0])]},
    "columns-three": {
        **POSTER, "series": [rows(MPH), rows(MPH, reaction_s=1.5), rows(MPH, reaction_s=2.5)],
        "names_of_series": NAMES, "palette": palette("bracken"),
    },
    "columns-web": {**WEB, "series": [rows(MPH, lag_s=0.4)]},
    "columns-web-rtl": {
        **WEB, "series": [rows((30, 50, 70, 90, 110), lag_s=0.4, deceleration=[5, 5, 0.6, 0, 0], speed_unit="km/h")],
        "languages": (AR,), "direction": "rtl", "speed_unit": "km/h",
    },
    "columns-spread": {**POSTER, "series": [spread(rows(MPH))]},
    "columns-spread-web-rtl": {
        **WEB, "series": [spread(rows((30, 50, 70, 90), speed_unit="km/h", reaction_s=t)) for t in (0.7, 1.5)],
        "names_of_series": ({"ar": "سائق نموذجي"}, {"ar": "سائق متفاجئ"}),
        "languages": (AR,), "direction": "rtl", "speed_unit": "km/h",
    },
}  # fmt: skip
RUNGS: dict[str, dict[str, Any]] = {
    "rungs": {"language": EN, "bars": ("from 40 mph", "from 50 mph", "from 60 mph")},
    "rungs-rtl": {"language": AR, "bars": ("سيارة على طريق جاف", "سيارة على طريق مبلل", "حافلة على جليد في منحدر")},
}


def picture(name: str) -> tuple[Drawing, Palette, float]:
    asked = PICTURES[name]
    return columns.columns(**asked, name=name), asked["palette"], 80.0 if asked.get("medium") == "web" else 42.0


@pytest.mark.parametrize("name", PICTURES)
def test_picture(name: str) -> None:
    drawing, inks, dpi = picture(name)
    assert golden.compare(name, raster.png(drawing, inks, dpi)) is None


def test_kept_pictures_are_small_and_all_in_use() -> None:
    kept = [path for path in golden.FOLDER.glob("columns*.png") if len(path.suffixes) == 1]
    assert {path.stem for path in kept} == set(PICTURES)
    assert all(path.stat().st_size < 20_000 for path in kept)


def test_a_moved_number_is_seen_and_shown(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv("CHARTGEN_RENEW_GOLDEN", raising=False)
    drawing, inks, dpi = picture("columns")
    (tmp_path / "columns.png").write_bytes(golden.small(raster.png(drawing, inks, dpi)))
    assert golden.compare("columns", raster.png(drawing, inks, dpi), tmp_path) is None

    def wrong(label: Label) -> Label:
        return replace(label, text="79") if label.role == "total" and label.text == "75" else label

    altered = replace(drawing, labels=tuple(map(wrong, drawing.labels)))
    told = golden.compare("columns", raster.png(altered, inks, dpi), tmp_path)
    assert told is not None
    assert "differs clearly; look at columns.actual.png and columns.difference.png" in told
    assert (tmp_path / "columns.actual.png").is_file()
    assert (tmp_path / "columns.difference.png").is_file()


def test_a_missing_picture_is_no_silent_pass(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv("CHARTGEN_RENEW_GOLDEN", raising=False)
    drawing, inks, dpi = picture("columns-web")
    told = golden.compare("columns-web", raster.png(drawing, inks, dpi), tmp_path)
    assert told == "there is no columns-web.png; look at columns-web.actual.png"


def test_a_missing_glyph_is_an_error() -> None:
    drawing, inks, dpi = picture("columns-web")
    first, *others = drawing.labels
    with pytest.raises(MachineFault, match=r"U\+505C"):
        raster.png(replace(drawing, labels=(replace(first, text="停"), *others)), inks, dpi)


@pytest.mark.parametrize("name", RUNGS)
def test_rungs(name: str) -> None:
    language, inks = RUNGS[name]["language"], palette("gorse")
    pairs = zip(RUNGS[name]["bars"], (9, 21, 34), strict=True)
    bars = [Rung(name=text, length=length, figure=f"{length:g}") for text, length in pairs]
    verdict = language.t("verdict.does_not_stop")
    never = Rung(name=bars[0].name, length=math.nan, figure=verdict, words=True)
    drawing = rungs([*bars, never], name=name, language=language, palette=inks, width_mm=180)
    assert golden.compare(name, raster.png(drawing, inks, 80.0)) is None
