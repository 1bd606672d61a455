"""The sheets' templates: one environment, strict about what it is given."""

from __future__ import annotations

from functools import lru_cache
from typing import Any

from jinja2 import Environment, FileSystemLoader, StrictUndefined

from chartgen.resources import templates


@lru_cache(maxsize=1)
def _environment() -> Environment:
    return Environment(
        loader=FileSystemLoader(templates() / "sheets"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )


def fill(template: str, **values: Any) -> str:
    """A template with its values. One that it asks for and is not given is an error, never an empty place."""
    return _environment().get_template(template).render(**values)
