"""SECOND FLOOR. What comes in: rows of the one table, a palette of named inks, words and numbers through a language
record. What goes out: frozen `Drawing`s in millimetres (textless marks as SVG, labels as records) and alt texts.

Must not know: physics, rounding, editions, files, pages, sheets, a language's catalogue (only the `Words` protocol).
A bar is drawn from the unrounded value, its label is the printed one; nothing here computes or rounds a distance.

Modules: `inks` (palettes, contrast), `fonts` (faces and widths), `drawing` (the records), `measures` (sizes by
medium), `words` (what a label says), `columns_data` (rows to bars), `columns_frame` (where columns stand),
`columns_ruler`,
`columns_totals`, `columns_text`, `columns_names`, `columns_verdicts` (where words stand), `columns_marks` (what is
inked), `columns` (the way in), `canvas` (matplotlib to clean SVG), `overlap` (collisions), `describe` (alt texts),
`raster` (pictures for tests and for looking at).
"""
