"""Are widths and heights those of the glyphs, and is a missing glyph never silent?"""

from __future__ import annotations

import pytest
from matplotlib.ft2font import FT2Font, LoadFlags

from chartgen.charts import fonts
from chartgen.errors import MachineFault

FACES = ("numeral-bold", "numeral", "text", "text-bold")


def shaped_width(text: str, face: str) -> float:
    """Width of `text` at font size 1 as FreeType and HarfBuzz (in matplotlib) set it: the outside measure."""
    font = FT2Font(str(fonts.face_for(text, face).path))
    font.set_size(100, 72)
    font.set_text(text, 0.0, flags=LoadFlags.NO_HINTING)
    width, _ = font.get_width_height()
    return float(width) / 64 / 100


@pytest.mark.parametrize("face", FACES)
@pytest.mark.parametrize("text", ["97", "does not stop", "réaction", "oedi’r brêc ŵŷ"])
def test_width_agrees_with_the_typesetter(face: str, text: str) -> None:
    reach = fonts.extent(text, face)
    # The typesetter counts from the pen's start to the last ink or the last advance, and kerns.
    assert reach.width - reach.after - 0.06 <= shaped_width(text, face) <= reach.width + 0.02


@pytest.mark.parametrize("face", FACES)
@pytest.mark.parametrize("text", ["رد الفعل", "تأخر المكابح", "الكبح", "لا تتوقف", "كم/س"])
def test_arabic_is_never_measured_narrower_than_it_is_set(face: str, text: str) -> None:
    assert fonts.extent(text, face).width >= shaped_width(text, face) - 0.02


@pytest.mark.parametrize("face", FACES)
def test_digits_are_tabular_and_as_high_as_measured(face: str) -> None:
    assert len({fonts.extent(digit, face).width for digit in "0123456789"}) == 1
    font = FT2Font(str(fonts.face_for("0", face).path))
    font.set_size(1000, 72)
    heights = [font.load_char(ord(digit), flags=LoadFlags.NO_HINTING).height / 64 / 1000 for digit in "0123456789"]
    assert fonts.digit_ratio(face) == pytest.approx(min(heights), abs=0.015)
    assert fonts.digit_ratio(face) <= min(heights) + 0.001  # never said to be higher than it is


def test_a_text_is_set_in_the_first_family_that_has_all_of_it() -> None:
    assert fonts.face_for("Gŵyl ŷd 97", "text").family == fonts.LATIN
    assert fonts.face_for("رد الفعل 97", "text").family == fonts.ARABIC
    assert fonts.face_for("\u200f97", "numeral").family == fonts.LATIN  # a direction mark needs no glyph


def test_a_missing_glyph_is_a_fault_that_names_it() -> None:
    with pytest.raises(MachineFault, match=r"停 97.*U\+505C"):
        fonts.face_for("停 97", "text")


def test_width_grows_with_the_size_and_has_no_direction_marks_in_it() -> None:
    assert fonts.width_mm("97", "numeral", 10) == pytest.approx(10 * fonts.extent("97", "numeral").width)
    assert fonts.extent("\u206697\u2069", "numeral") == fonts.extent("97", "numeral")
