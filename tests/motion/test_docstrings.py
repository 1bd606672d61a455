"""Docstrings of what other floors call: formula, every argument, result, errors, source, and examples that run."""

from __future__ import annotations

import doctest
import importlib
import inspect
import pkgutil
import re
from collections.abc import Iterator
from types import FunctionType, ModuleType

import pytest

import chartgen.motion
from chartgen.sources import BIBLIOGRAPHY

MODULES = [importlib.import_module(f"chartgen.motion.{m.name}") for m in pkgutil.iter_modules(chartgen.motion.__path__)]


def public_functions() -> Iterator[tuple[ModuleType, FunctionType]]:
    for module in MODULES:
        for name, item in vars(module).items():
            if inspect.isfunction(item) and item.__module__ == module.__name__ and not name.startswith("_"):
                yield module, item


# Helpers between the files of this floor: checks of arguments, and picking rows. Their docstrings are plain.
PLAIN = {"checked", "checked_friction", "checked_tables", "some", "rows_of"}
CALLED = [f for _, f in public_functions() if f.__name__ not in PLAIN]


def test_the_list_is_complete() -> None:
    assert {f.__name__ for f in CALLED} == {
        *("stop", "lag", "build_up", "full_braking", "friction_at", "penn_state", "speed_constant"),
        *("braking_distance_and_time", "dropped_rule_time", "lognormal", "lognormal_percentile"),
        "course",
        *("residual_speed", "greatest_speed", "greatest_speed_in_gap", "stopping_percentiles"),
        *("square_metric", "square_half_metric", "square_feet"),
        *("sight_metric", "sight_us", "slide_metric", "slide_us", "gap_seconds", "gap_distance_m"),
    }


@pytest.mark.parametrize("function", CALLED, ids=lambda f: f.__name__)
def test_docstring_has_its_parts(function: FunctionType) -> None:
    text = inspect.getdoc(function)
    assert text is not None
    at = [text.index(part) for part in ("Formula: ", "Args:", "Returns:", "Raises:", "Source: ", ">>> ")]
    assert at == sorted(at)
    arguments = text[text.index("Args:") : text.index("Returns:")]
    documented = re.findall(r"^    \*{0,2}(\w+): ", arguments, flags=re.MULTILINE)
    assert documented == list(inspect.signature(function).parameters)


@pytest.mark.parametrize("module", MODULES, ids=lambda m: m.__name__)
def test_examples_run(module: ModuleType) -> None:
    failed, _ = doctest.testmod(module)
    assert failed == 0


def test_every_called_function_has_an_example() -> None:
    finder = doctest.DocTestFinder(recurse=False)
    for function in CALLED:
        assert any(test.examples for test in finder.find(function)), function.__name__


def test_works_are_cited_from_the_bibliography() -> None:
    """`sources:KEY` in a docstring is a work of the one bibliography; manuals, norms and studies are cited so."""
    cited = {key for f in CALLED for key in re.findall(r"sources:([a-z0-9.-]+[a-z0-9])", inspect.getdoc(f) or "")}
    assert cited <= set(BIBLIOGRAPHY)
    assert {"green-book-level", "astm-e1960", "koppa-1997", "highway-code-126"} <= cited
