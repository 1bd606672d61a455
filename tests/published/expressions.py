"""Sums written in a claims file: plain arithmetic over a row's numbers, and the program's own mechanics by name.

Nothing else can be written there: no attribute, no text, no name that is not given.
"""

from __future__ import annotations

import ast
import math
import operator
from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

from chartgen.figures.rounding import down, nearest, up
from chartgen.motion.reaction import lognormal, lognormal_percentile
from chartgen.motion.stopping import stop

UNITS: Mapping[str, float] = {
    "MPH": 1609.344 / 3600.0,  # m/s in one mph, exact
    "KMH": 1.0 / 3.6,
    "FT": 0.3048,  # m in one foot, exact
    "G": 9.81,  # the value that manuals print; the mechanics use 9.80665
}


def _stop(v: float, t: float = 0.0, a: float = 5.0, lag: float = 0.0, ramp: float = 0.0) -> Any:
    return stop(v, reaction_time_s=t, max_deceleration_mps2=a, brake_lag_s=lag, build_up_s=ramp)


# SI throughout: v in m/s, t in s, a in m/s², distances in m.
FUNCTIONS: Mapping[str, Callable[..., Any]] = {
    "up": up,
    "nearest": nearest,
    "down": down,
    "sqrt": math.sqrt,
    "log": math.log,
    "exp": math.exp,
    "reaction": lambda v, t: _stop(v, t).reaction_distance_m,
    "lag": lambda v, t: _stop(v, lag=t).lag_distance_m,
    "braking": lambda v, a, ramp=0.0: _stop(v, a=a, ramp=ramp).braking_distance_m,
    "stopping": lambda v, t, a: _stop(v, t, a).stopping_distance_m,
    # Lognormals of reaction times: mu and sigma are of ln(t/s); `spread` is the sigma that two percentiles come to.
    "percentile": lambda mu, sigma, p: lognormal_percentile(mu, sigma, p / 100.0),
    "spread": lambda t1, p1, t2, p2: lognormal(p1 / 100.0, t1, p2 / 100.0, t2)[1],
}

_SIGNS: Mapping[type[ast.operator], Callable[[float, float], float]] = {
    ast.Add: operator.add,
    ast.Sub: operator.sub,
    ast.Mult: operator.mul,
    ast.Div: operator.truediv,
    ast.Pow: operator.pow,
}


def evaluate(text: str | float, names: Mapping[str, float]) -> float:
    """The value of `text` (a plain number stands for itself). Raises ValueError naming what cannot be understood."""
    if not isinstance(text, str):
        return float(text)
    return _value(ast.parse(text, mode="eval").body, {**UNITS, **names}, text)


def _value(node: ast.expr, names: Mapping[str, float], text: str) -> float:
    match node:
        case ast.Constant(value=int() | float() as number):
            return float(number)
        case ast.Name(id=name) if name in names:
            return names[name]
        case ast.UnaryOp(op=ast.USub(), operand=operand):
            return -_value(operand, names, text)
        case ast.BinOp(left=left, op=op, right=right) if type(op) in _SIGNS:
            return _SIGNS[type(op)](_value(left, names, text), _value(right, names, text))
        case ast.Call(func=ast.Name(id=name), args=args, keywords=[]) if name in FUNCTIONS:
            return float(np.asarray(FUNCTIONS[name](*(_value(a, names, text) for a in args))))
    raise ValueError(
        f"{text!r}: cannot work out {ast.unparse(node)!r}; known are {sorted(names)} and {sorted(FUNCTIONS)}"
    )
