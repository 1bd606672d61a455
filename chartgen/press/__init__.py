"""The printer. In: a finished sheet (HTML, its size, what it says). Out: the bytes of a tagged PDF, or its faults.

The only importer of the PDF engine. It must not know editions, mechanics, drawings or word lists beyond what a sheet
and the table of figures tell it, and it writes no file: `output` does.
"""
