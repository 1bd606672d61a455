"""FIRST FLOOR. What comes in: a frozen `Edition`. What goes out: one tidy table of every figure, unrounded SI beside
what is printed, with its notices, its trace and its public JSON and CSV.

Must not know: languages, drawings, pages, sheets, files. Nothing above this floor computes or rounds a distance.

Modules: `table` (the table), `rounding` (how a figure is printed), `units` (metres to the printed unit), `notices`
(what is odd about the figures), `assume` (what a row rests on), `export` (JSON, CSV), `terminal` (the table as text).
"""
