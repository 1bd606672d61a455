"""Printable stopping-distance reference charts from one edition file.

The way through: edition -> figures -> drawings -> sheets and pages -> build/. Imports go down only.
"""

__version__ = "0.1.0"
