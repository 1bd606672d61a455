"""Web pages of an edition: an opening page, one page a surface and a vehicle, method, downloads, and the data files.

In: an `Edition`, its `Figures`, its `Language`s and the sheets that lie beside the pages. Out: finished files as bytes
(`pages.pages`, `opening.opening`) and what is wrong with them (`check.check_pages`). Writes nothing.
It must not know: physics, rounding, how a chart is drawn, or where the build folder lies.
"""
