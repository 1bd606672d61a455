"""The templates: one environment, strict about what it is given."""

from __future__ import annotations

from functools import lru_cache
from typing import Any

from jinja2 import Environment, FileSystemLoader, StrictUndefined

from chartgen.resources import templates


@lru_cache(maxsize=1)
def _environment() -> Environment:
    return Environment(
        loader=FileSystemLoader(templates() / "site"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )


def render(template: str, **values: Any) -> bytes:
    """One finished page. A value the template asks for and is not given is an error, never an empty place."""
    return _environment().get_template(template).render(**values).encode("utf-8")
