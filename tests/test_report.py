"""The wording of a fault, whole."""

from __future__ import annotations

import pytest

from chartgen.errors import Fault
from chartgen.report import fault_line


@pytest.mark.parametrize(
    ("fault", "line"),
    [
        (
            Fault("e.toml", "vehicle[2].kind", "this is wrong", "car or van", '"vam"', "van"),
            (
                'e.toml: vehicle[2].kind = "vam" (in the 2nd [[vehicle]]): this is wrong. Right: car or van. '
                'Did you mean "van"?'
            ),
        ),
        (Fault("e.toml", "units.also", "this is wrong"), "e.toml: units.also: this is wrong."),
        (Fault("e.toml", "", "the file is empty", "a file"), "e.toml: the file is empty. Right: a file."),
        (Fault("e.toml", "", "this is not known", given='"fr"'), 'e.toml: "fr": this is not known.'),
    ],
)
def test_a_fault_says_where_what_and_what_would_be_right(fault: Fault, line: str) -> None:
    assert fault_line(fault) == line


@pytest.mark.parametrize(
    ("number", "ordinal"), [(1, "1st"), (2, "2nd"), (3, "3rd"), (4, "4th"), (11, "11th"), (12, "12th"), (21, "21st")]
)
def test_sections_are_counted_in_words(number: int, ordinal: str) -> None:
    line = fault_line(Fault("e.toml", f"driver[{number}].name", "this is wrong"))
    assert line == f"e.toml: driver[{number}].name (in the {ordinal} [[driver]]): this is wrong."
