"""Broken editions, each with the whole of what it says: where, what was given, what is wrong, what would be right.

An untested message rots. Every case changes the sound edition of `conftest.py` in one way and expects exactly these
messages, so that one mistake gives one message (or those that truly follow).
"""

# ruff: noqa: E501 - a message stands on one line, as it is printed

from __future__ import annotations

from collections.abc import Callable

import pytest

BROKEN: dict[str, tuple[list[tuple[str, str]], list[str]]] = {
    "missing unit": (
        [('"0.8 s"', '"0.8"')],
        ['driver[1].reaction_time = "0.8" (in the 1st [[driver]]): the unit is missing. Right: "0.8 s".'],
    ),
    "bare number": (
        [('"0.8 s"', "0.8")],
        [
            'driver[1].reaction_time = 0.8 (in the 1st [[driver]]): a bare number has no unit. Right: number and unit in quotes: "0.8 s".'
        ],
    ),
    "decimal comma": (
        [('"0.8 s"', '"0,8 s"')],
        [
            'driver[1].reaction_time = "0,8 s" (in the 1st [[driver]]): a comma is not read as a decimal point, nor as a thousands mark. Right: "0.8 s".'
        ],
    ),
    "U+2212": (
        [('surface = ["dry", "wet"]', 'surface = ["dry", "wet"]\ngrade = ["−9 %"]')],
        [
            'case[1].grade[1] = "−9 %" (in the 1st [[case]]): the minus sign is a dash or U+2212, not the hyphen-minus of the keyboard. Right: "-9 %".'
        ],
    ),
    "range": (
        [('"0.8 s"', '"0.8-1.2 s"')],
        [
            'driver[1].reaction_time = "0.8-1.2 s" (in the 1st [[driver]]): this is a range, and one value is needed. Right: "0.8 s" or "1.2 s".'
        ],
    ),
    "thousands space": (
        [('"10 m"', '"1 000 m"')],
        [
            'vehicle[2].length = "1 000 m" (in the 2nd [[vehicle]]): thousands are written without a space or mark. Right: "1000 m".'
        ],
    ),
    "operator": (
        [('"0.8 s"', '"2*0.4 s"')],
        [
            'driver[1].reaction_time = "2*0.4 s" (in the 1st [[driver]]): nothing is worked out here; the result is written. Right: such as "0.67 s".'
        ],
    ),
    "two units": (
        [('"10 m"', '"10 m 20 cm"')],
        [
            'vehicle[2].length = "10 m 20 cm" (in the 2nd [[vehicle]]): there are two units; one number with one unit is needed. Right: such as "16.5 m".'
        ],
    ),
    "wrong unit": (
        [('"10 m"', '"10 kg"')],
        [
            'vehicle[2].length = "10 kg" (in the 2nd [[vehicle]]): "kg" is not a unit for a length here. Right: a length in m or ft.'
        ],
    ),
    "misspelt unit": (
        [('"20 mph"', '"20 mhp"')],
        ['speeds.steps[1] = "20 mhp": "mhp" is not a unit for a speed here. Right: "20 mph". Did you mean "mph"?'],
    ),
    "nan": (
        [('"0.8 s"', '"nan s"')],
        ['driver[1].reaction_time = "nan s" (in the 1st [[driver]]): this is not a number. Right: such as "0.67 s".'],
    ),
    "infinite friction": (
        [("friction = 0.64", "friction = inf")],
        [
            "surface[1].friction = inf (in the 1st [[surface]]): this is not a number. Right: a number above 0, up to 1.5."
        ],
    ),
    "negative time": (
        [('"0.8 s"', '"-0.8 s"')],
        ['driver[1].reaction_time = "-0.8 s" (in the 1st [[driver]]): this is out of range. Right: 0.2 s to 10 s.'],
    ),
    "speed of 0": (
        [('"20 mph"', '"0 mph"')],
        ['speeds.steps[1] = "0 mph": a speed must be above 0. Right: such as "30 mph".'],
    ),
    "speed in other unit": (
        [('"20 mph"', '"20 km/h"')],
        ['speeds.steps[1] = "20 km/h": the edition\'s speeds are in mph. Right: such as "30 mph".'],
    ),
    "a thousand million speeds": (
        [('steps = ["20 mph", "30 mph", "70 mph"]', 'from = "1 mph"\nto = "100 mph"\nby = "0.0000001 mph"')],
        ['speeds.by = "0.0000001 mph": these are 990,000,001 speeds. Right: at most 200.'],
    ),
    "to not a step": (
        [('steps = ["20 mph", "30 mph", "70 mph"]', 'from = "20 mph"\nto = "75 mph"\nby = "10 mph"')],
        ['speeds.to = "75 mph": the last speed is not one of the steps. Right: "70 mph" or "80 mph".'],
    ),
    "twice a speed": (
        [('"30 mph"', '"20 mph"')],
        ['speeds.steps[2] = "20 mph": this speed stands there twice. Right: each speed once.'],
    ),
    "falling speeds": (
        [('"30 mph", "70 mph"', '"70 mph", "30 mph"')],
        ['speeds.steps[3] = "30 mph": the speeds do not rise. Right: from slow to fast.'],
    ),
    "unknown key": (
        [("brake_lag", "break_lag")],
        [
            'vehicle[2].break_lag = "0.4 s" (in the 2nd [[vehicle]]): this key is not known. Right: id, use, kind, name, load, unladen_of, max_deceleration, brake_lag, build_up, brake_efficiency, length or source. Did you mean "brake_lag"?'
        ],
    ),
    "unknown section": (
        [("[units]\n", "[unit]\n")],
        [
            'unit = { system = "uk" }: this key is not known. Right: edition, languages, units, speeds, figures, driver, surface, vehicle, case, poster, cards or press. Did you mean "units"?'
        ],
    ),
    "misspelt surface": (
        [('surface = ["dry", "wet"]', 'surface = ["dry", "wett"]')],
        [
            'case[1].surface[2] = "wett" (in the 1st [[case]]): there is no surface with this id. Right: dry or wet. Did you mean "wet"?'
        ],
    ),
    "wrong date": (
        [("issued = 2026-11-02", 'issued = "2 November 2026"')],
        [
            'edition.issued = "2 November 2026": a date is needed here. Right: year-month-day without quotes: 2026-11-02.'
        ],
    ),
    "quoted date": (
        [("issued = 2026-11-02", 'issued = "2026-11-02"')],
        ['edition.issued = "2026-11-02": a date is needed here. Right: without quotes: 2026-11-02.'],
    ),
    "review before issue": (
        [("review_by = 2027-11-02", "review_by = 2025-11-02")],
        [
            "edition.review_by = 2025-11-02: the review is due before the issue of 2026-11-02. Right: a date on or after edition.issued."
        ],
    ),
    "duplicate id": (
        [('id = "wet"', 'id = "dry"')],
        [
            'surface[2].id = "dry" (in the 2nd [[surface]]): surface[1] has this id already. Right: an id of its own.',
            'case[1].surface[2] = "wet" (in the 1st [[case]]): there is no surface with this id. Right: dry.',
        ],
    ),
    "id with ../": (
        [('id = "vale"', 'id = "../vale"')],
        [
            'edition.id = "../vale": this is not an id. Right: small letters a to z, digits and hyphens, at most 64: "vale".'
        ],
    ),
    "controlled, no text": (
        [('"uncontrolled"', '"controlled"'), (', cy = "Sych"', "")],
        [
            'surface[1].name.cy (in the 1st [[surface]]): the text in this language is missing; only a draft may miss it. Right: cy = "…".',
            'edition.owner: a controlled edition needs this. Right: owner = "…".',
            'edition.approver: a controlled edition needs this. Right: approver = "…".',
        ],
    ),
    "lorry without limit": (
        [('max_deceleration = "5 m/s^2"\n', "")],
        [
            'vehicle[2].max_deceleration (in the 2nd [[vehicle]]): a vehicle of kind lorry needs its own braking limit: the road alone would make it stop too short. Right: max_deceleration = "5 m/s^2".'
        ],
    ),
    "deceleration out of range": (
        [('"5 m/s^2"', '"50 m/s^2"')],
        [
            'vehicle[2].max_deceleration = "50 m/s^2" (in the 2nd [[vehicle]]): this is out of range. Right: 0.5 m/s^2 to 15 m/s^2.'
        ],
    ),
    "misspelt status": (
        [('"uncontrolled"', '"Controled"')],
        [
            'edition.status = "Controled": this is not one of the choices. Right: draft, controlled, uncontrolled or superseded. Did you mean "controlled"?'
        ],
    ),
    "another word for a kind": (
        [('kind = "lorry"', 'kind = "truck"')],
        [
            'vehicle[2].kind = "truck" (in the 2nd [[vehicle]]): this is not one of the choices. Right: car, van, bus, lorry, articulated, motorcycle or bicycle. Did you mean "lorry"?'
        ],
    ),
    "digit in headline": (
        [("At {speed:70 mph}, {stopping:70 mph}.", "At 70 mph, {stopping:70 mph}.")],
        [
            'poster[1].headline.en-GB = "At 70 mph, {stopping:70 mph}." (in the 1st [[poster]]): the number "70" is typed; numbers in a headline come from the table. Right: a placeholder such as {stopping:70 mph} or {speed:70 mph}.'
        ],
    ),
    "misspelt placeholder": (
        [("At {speed:70 mph}, {stopping:70 mph}.", "At {speed:70 mph}, {stoping:70 mph}.")],
        [
            'poster[1].headline.en-GB = "{stoping:70 mph}" (in the 1st [[poster]]): this placeholder is not known. Right: speed, reaction, lag, braking or stopping. Did you mean "stopping"?'
        ],
    ),
    "placeholder speed": (
        [("At {speed:70 mph}, {stopping:70 mph}.", "At {speed:75 mph}, {stopping:70 mph}.")],
        [
            "poster[1].headline.en-GB = \"{speed:75 mph}\" (in the 1st [[poster]]): the placeholder's speed is not one of the edition's speeds. Right: 20 mph, 30 mph or 70 mph."
        ],
    ),
    "placeholder id": (
        [("At {speed:70 mph}, {stopping:70 mph}.", "At {speed:70 mph}, {stopping:70 mph, surface=wett}.")],
        [
            'poster[1].headline.en-GB = "{stopping:70 mph, surface=wett}" (in the 1st [[poster]]): there is no surface with this id. Right: dry or wet. Did you mean "wet"?'
        ],
    ),
    "lone bracket": (
        [("At {speed:70 mph}, {stopping:70 mph}.", "At {speed:70 mph, {stopping:70 mph}.")],
        [
            'poster[1].headline.en-GB = "At {speed:70 mph, {stopping:70 mph}." (in the 1st [[poster]]): a curly bracket stands alone. Right: placeholders such as {stopping:70 mph}.'
        ],
    ),
    "friction zero": (
        [("friction = 0.64", "friction = 0")],
        ["surface[1].friction = 0 (in the 1st [[surface]]): this is out of range. Right: above 0, up to 1.5."],
    ),
    "friction quoted": (
        [("friction = 0.64", 'friction = "0,64"')],
        [
            'surface[1].friction = "0,64" (in the 1st [[surface]]): a number is needed here. Right: a number without quotes: 0.64.'
        ],
    ),
    "friction range": (
        [("friction = 0.64", "friction = 0.64\nfriction_range = [0.7, 0.8]")],
        [
            "surface[1].friction_range = [0.7, 0.8] (in the 1st [[surface]]): the friction 0.64 does not lie in its range. Right: [lowest, highest] around it."
        ],
    ),
    "language unknown": (
        [('use = ["en-GB", "cy"]', 'use = ["en-GB", "cy", "tlh"]')],
        [
            'languages.use[3] = "tlh": there is no word list for this language. Right: ar, cy, en-GB, en-US, es-US or fr.'
        ],
    ),
    "language not in use": (
        [('cy = "Sych"', 'cz = "Sych"')],
        [
            'surface[1].name.cz = "Sych" (in the 1st [[surface]]): this language is not among languages.use. Right: en-GB or cy.',
            'surface[1].name.cy (in the 1st [[surface]]): the text in this language is missing; only a draft may miss it. Right: cy = "…".',
        ],
    ),
    "controlled total of parts rounded up": (
        [("[[driver]]", '[figures.rounding]\ntotal = "controlled"\n\n[[driver]]')],
        [
            'figures.rounding.total = "controlled": parts that round up cannot be adjusted to a controlled total. Right: total = "sum-of-parts", or rule = "nearest".'
        ],
    ),
    "lag with a sight method": (
        [("[[driver]]", '[figures]\nmethod = "sight-us"\n\n[[driver]]')],
        [
            'vehicle[1].max_deceleration (in the 1st [[vehicle]]): the method sight-us works with the vehicle\'s deceleration. Right: max_deceleration = "3.4 m/s^2".',
            'vehicle[2].brake_lag = "0.4 s" (in the 2nd [[vehicle]]): the method sight-us cannot use this. Right: leave it out, or method = "first-principles".',
        ],
    ),
    "limit with a slide method": (
        [("[[driver]]", '[figures]\nmethod = "slide-us"\n\n[[driver]]')],
        [
            'vehicle[2].max_deceleration = "5 m/s^2" (in the 2nd [[vehicle]]): the method slide-us cannot use this. Right: leave it out, or method = "first-principles".',
            'vehicle[2].brake_lag = "0.4 s" (in the 2nd [[vehicle]]): the method slide-us cannot use this. Right: leave it out, or method = "first-principles".',
        ],
    ),
    "adopt a table": (
        [("[[driver]]", '[figures]\nadopt = "table.csv"\n\n[[driver]]')],
        ['figures.adopt = "table.csv": not yet: a published table cannot be adopted yet. Right: leave it out.'],
    ),
    "another layout": (
        [("[[poster]]", '[[poster]]\nlayout = "trail"')],
        ['poster[1].layout = "trail" (in the 1st [[poster]]): not yet: "trail" is not made yet. Right: columns.'],
    ),
    "friction table": (
        [("friction = 0.64", 'friction = { table = "mu.csv" }')],
        [
            'surface[1].friction.table = "mu.csv" (in the 1st [[surface]]): not yet: friction from a table of speeds is not made yet. Right: leave it out.'
        ],
    ),
    "friction list": (
        [("friction = 0.64", "friction = [[20, 0.7], [60, 0.6]]")],
        [
            "surface[1].friction = [[20, 0.7], [60, 0.6]] (in the 1st [[surface]]): not yet: friction from a list of speeds is not made yet. Right: a number above 0, up to 1.5."
        ],
    ),
    "drop a combination": (
        [('surface = ["dry", "wet"]', 'surface = ["dry", "wet"]\ndrop = ["car"]')],
        [
            'case[1].drop = ["car"] (in the 1st [[case]]): not yet: leaving single combinations out is not made yet. Right: leave it out.'
        ],
    ),
    "misspelt preset": (
        [('reaction_time = "0.8 s"', 'use = "reaction/suprise"')],
        [
            'driver[1].use = "reaction/suprise" (in the 1st [[driver]]): the catalogue has no such preset. Right: reaction/alert, reaction/teaching, reaction/brake-lights, reaction/mean-surprise, reaction/surprise, reaction/road-design or reaction/sight-design. Did you mean "reaction/surprise"?'
        ],
    ),
    "percentiles in the wrong order": (
        [('"0.8 s"', '{ p50 = "1.6 s", p85 = "1.1 s" }')],
        [
            'driver[1].reaction_time = { p50 = "1.6 s", p85 = "1.1 s" } (in the 1st [[driver]]): p50 is not shorter than p85. Right: a time for p85 that is longer than the one for p50.'
        ],
    ),
    "one percentile": (
        [('"0.8 s"', '{ p85 = "1.1 s" }')],
        [
            'driver[1].reaction_time = { p85 = "1.1 s" } (in the 1st [[driver]]): exactly two percentiles describe the spread. Right: { p50 = "1.1 s", p85 = "1.6 s" }.'
        ],
    ),
    "paper size unknown": (
        [("[[poster]]", '[[poster]]\npaper = "A33"')],
        [
            'poster[1].paper = "A33" (in the 1st [[poster]]): this paper size is not known. Right: A0, A1, A2, A3, A4, A5, A6, DL, ID-1, Letter, Tabloid, or width x height such as "600 mm x 900 mm". Did you mean "A3"?'
        ],
    ),
    "paper size without units": (
        [("[[poster]]", '[[poster]]\npaper = "600 x 900 mm"')],
        [
            'poster[1].paper = "600 x 900 mm" (in the 1st [[poster]]): each side needs its unit. Right: "600 mm x 900 mm".'
        ],
    ),
    "single bracket": ([("[[case]]", "[case]")], ["case: the section has single brackets. Right: [[case]]."]),
    "no sections": (
        [('[units]\nsystem = "uk"\n', "")],
        ["units: this is needed and missing. Right: a section [units]."],
    ),
    "units twice": (
        [('system = "uk"', 'system = "uk"\nspeed = "mph"')],
        [
            'units.speed = "mph": the units are given twice, by system and by hand. Right: system = "uk", or both speed = "mph" and distance = "m".'
        ],
    ),
    "case twice": (
        [("[[poster]]", '[[case]]\ndriver = ["ready"]\nvehicle = ["car"]\nsurface = ["dry"]\n\n[[poster]]')],
        [
            "case[2] (in the 2nd [[case]]): the combination ready, car, dry, 0 % stands in case[1] already. Right: each combination once."
        ],
    ),
    "show an unknown vehicle": (
        [("[[poster]]", '[[poster]]\nshow = { vehicle = "lory" }')],
        [
            'poster[1].show.vehicle = "lory" (in the 1st [[poster]]): there is no vehicle with this id. Right: car or lorry. Did you mean "lorry"?'
        ],
    ),
    "show a grade no case has": (
        [("[[poster]]", '[[poster]]\nshow = { grade = "-6 %" }')],
        [
            "poster[1].show (in the 1st [[poster]]): no [[case]] has the combination ready, car, dry, -6 %. Right: a case with all four of them."
        ],
    ),
    "no roster": (
        [("[[poster]]", '[cards]\nroster = "roster.csv"\ngap = "gap/two-seconds"\n\n[[poster]]')],
        ['cards.roster = "roster.csv": there is no such file beside edition.toml. Right: a file roster.csv.'],
    ),
    "roster path": (
        [("[[poster]]", '[cards]\nroster = "../roster.csv"\ngap = "gap/two-second"\n\n[[poster]]')],
        [
            'cards.gap = "gap/two-second": the catalogue has no such rule. Right: gap/per-length, gap/two-seconds or gap/two-seconds-law. Did you mean "gap/two-seconds"?',
            'cards.roster = "../roster.csv": this is not the name of a file beside edition.toml. Right: "roster.csv".',
        ],
    ),
    "not TOML": (
        [("[units]", "[units")],
        [
            "this is not TOML: expected ']' at the end of a table declaration (at line 14, column 7). Right: sections such as [units], keys such as system = \"uk\", texts in double quotes."
        ],
    ),
    "twice key": (
        [('issue = "1"', 'issue = "1"\nissue = "2"')],
        [
            'this is not TOML: a key or a section stands there twice (at line 8, column 12). Right: sections such as [units], keys such as system = "uk", texts in double quotes.'
        ],
    ),
    "issue number": (
        [('issue = "1"', "issue = 1")],
        ['edition.issue = 1: a text is needed here. Right: in quotes: "1".'],
    ),
    "one title for two languages": (
        [('title = { en-GB = "Room", cy = "Lle" }', 'title = "Room"')],
        ['edition.title = "Room": a text for each language is needed here. Right: { en-GB = "Room", cy = "…" }.'],
    ),
    "line break": (
        [('"Room"', '"Room\\nto stop"')],
        [
            'edition.title.en-GB = "Room\\nto stop": the text has line breaks or control characters. Right: one line of text.'
        ],
    ),
    "no web address": (
        [('issue = "1"', 'issue = "1"\nweb_address = "vale.example"')],
        ['edition.web_address = "vale.example": this is not a web address. Right: "https://…".'],
    ),
    "grade out of range, grade twice": (
        [('surface = ["dry", "wet"]', 'surface = ["dry", "wet"]\ngrade = ["-45 %", "3 %", "3 %"]')],
        ['case[1].grade[1] = "-45 %" (in the 1st [[case]]): this is out of range. Right: -30 % to 30 %.'],
    ),
    "friction without a cap": (
        [('sp = "110 km/h"', 'sp = "20 km/h"')],
        [
            'surface[2].friction = { f60 = 0.35, sp = "20 km/h" } (in the 2nd [[surface]]): near standstill this friction reaches 7.03. Right: max = … beside f60 and sp, above 0, up to 1.5.'
        ],
    ),
}


@pytest.mark.parametrize("name", BROKEN)
def test_a_broken_edition_says_what_to_do(name: str, messages: Callable[..., list[str]]) -> None:
    changes, said = BROKEN[name]
    assert messages(*changes) == [f"vale/edition.toml: {line}" for line in said]


def test_all_faults_are_said_at_once(messages: Callable[..., list[str]]) -> None:
    said = messages(
        ('"0.8 s"', '"0,8 s"'),
        ("friction = 0.64", "friction = 2"),
        ('kind = "car"', 'kind = "cat"'),
        ('"70 mph"]', '"70 kmh"]'),
        ("At {speed:70 mph}", "At 70"),
    )
    keys = [line.split(": ")[1].split(" ")[0] for line in said]
    assert keys == [
        "speeds.steps[3]",
        "driver[1].reaction_time",
        "surface[1].friction",
        "vehicle[1].kind",
        "poster[1].headline.en-GB",
    ]


def test_a_fault_in_an_id_brings_no_others(messages: Callable[..., list[str]]) -> None:
    assert messages(('id = "wet"', 'id = "Wet road"')) == [
        (
            'vale/edition.toml: surface[2].id = "Wet road" (in the 2nd [[surface]]): this is not an id. '
            'Right: small letters a to z, digits and hyphens, at most 64: "wet-road".'
        )
    ]
