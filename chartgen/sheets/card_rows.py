"""The rows of the table that a cab card prints: an unladen vehicle is never given less room than the laden one."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
import pandas as pd

_EQUAL = 1e-9


@dataclass(frozen=True, slots=True, kw_only=True)
class Series:
    """Rows of the table in speed order: one vehicle on one surface."""

    vehicle: str
    surface: str
    rows: pd.DataFrame

    @property
    def reach(self) -> np.ndarray:
        """Exact stopping distances in m; one that never stops is longer than all."""
        return np.where(self.rows["stops"].to_numpy(dtype=bool), self.rows["stopping_distance_m"].to_numpy(), math.inf)

    @property
    def printed(self) -> np.ndarray:
        """Printed stopping distances, likewise."""
        return self.rows["printed_stopping"].fillna(math.inf).to_numpy()


def never_less(unladen: Series, laden: Series) -> Series:
    """The unladen vehicle's rows, but the laden one's wherever the unladen would be given less: an empty vehicle may
    need more room than a loaded one, and a card must never allow it less."""
    # A part in 10⁹ either way is the same distance worked out twice.
    less = (unladen.reach < laden.reach * (1 - _EQUAL)) | (unladen.printed < laden.printed)
    if not less.any():
        return unladen
    kept = pd.concat([unladen.rows[~less], laden.rows[less]])
    return replace(unladen, rows=kept.sort_values("speed_mps", kind="stable"))


def longest(series: Series) -> int | None:
    """Index of the longest distance that is one; None where it never stops. A bar that long fills the width."""
    finite = np.where(np.isfinite(series.printed), series.printed, -1.0)
    best = int(finite.argmax())
    return best if finite[best] > 0 else None
