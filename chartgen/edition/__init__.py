"""The front door: an edition file comes in, a frozen `Edition` in SI goes out, or every fault at once.

In: a folder, a file or a name; TOML, a roster in CSV, own wording in PO. Out: `model.Edition`. The only room that reads
a publisher's files and, with `figures`, one of the two doors at which units are converted. It must not know how a
distance is worked out, drawn, worded or printed.
"""
