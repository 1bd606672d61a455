"""Ground floor: how far a vehicle goes before it stands still, and how long that takes.

In: plain float arrays in SI (metres, seconds, m/s, fractions), broadcast against one another.
Out: plain float arrays in SI, in frozen records; "does not stop" is a result with a reason, not an error.
Must not know: editions, files, units other than SI (but for the printed constants of a manual's own formula),
languages, rounding for print, drawings. It imports numpy and nothing else of this program.

`stopping` exact mechanics from first principles; `methods` printed formulas of manuals; `gap` following gaps.
On them stand `course` (one stop over time), `inverse` (which speed?) and `spread` (percentiles); beside them `thumb`
(rules of thumb) and `reaction` (times from what a group measures).
Below them `braking` (full braking), `phases` (lag and build-up), `friction` and `limits` (constants, accepted ranges).
"""
