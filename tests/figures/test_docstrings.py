"""Docstrings of what other floors call here: formula, every argument, result, errors, source; examples run.

A source is named by its words; a work of the bibliography by its key, which must be there.
"""

from __future__ import annotations

import doctest
import importlib
import inspect
import pkgutil
import re
from collections.abc import Iterator
from types import FunctionType, ModuleType

import pytest

import chartgen.figures
from chartgen.sources import BIBLIOGRAPHY

MODULES = [
    importlib.import_module(f"chartgen.figures.{m.name}") for m in pkgutil.iter_modules(chartgen.figures.__path__)
]
WRITERS = re.compile(r"(?:_text|export|terminal|plain_table)$")
"""Modules that only lay out what is there: they compute nothing, so their docstrings have no formula."""


def public_functions() -> Iterator[FunctionType]:
    for module in MODULES:
        for name, item in vars(module).items():
            function = getattr(item, "__wrapped__", item)
            if inspect.isfunction(function) and function.__module__ == module.__name__ and not name.startswith("_"):
                yield function


COMPUTING = [f for f in public_functions() if not WRITERS.search(f.__module__)]


def test_there_is_something_to_hold() -> None:
    assert len(COMPUTING) >= 20


@pytest.mark.parametrize("function", COMPUTING, ids=lambda f: f"{f.__module__.rpartition('.')[2]}.{f.__name__}")
def test_docstring_has_its_parts(function: FunctionType) -> None:
    text = inspect.getdoc(function)
    assert text is not None
    arguments = list(inspect.signature(function).parameters)
    wanted = ["Formula: ", *(["Args:"] if arguments else []), "Returns:", "Raises:", "Source: "]
    at = [text.find(part) for part in wanted]
    assert -1 not in at, [part for part, place in zip(wanted, at, strict=True) if place < 0]
    assert at == sorted(at)
    if arguments:
        told = text[text.index("Args:") : text.index("Returns:")]
        assert re.findall(r"^    \*{0,2}(\w+): ", told, flags=re.MULTILINE) == arguments


@pytest.mark.parametrize("function", list(public_functions()), ids=lambda f: f.__name__)
def test_every_public_function_says_what_it_does(function: FunctionType) -> None:
    assert len(inspect.getdoc(function) or "") > 20


@pytest.mark.parametrize("module", MODULES, ids=lambda m: m.__name__)
def test_examples_run(module: ModuleType) -> None:
    failed, _ = doctest.testmod(module)
    assert failed == 0


def test_works_are_cited_from_the_bibliography() -> None:
    """`sources:KEY` in a docstring is a work of the bibliography."""
    for function in public_functions():
        for key in re.findall(r"sources:([a-z0-9.-]+[a-z0-9])", inspect.getdoc(function) or ""):
            assert key in BIBLIOGRAPHY, (function.__name__, key)
