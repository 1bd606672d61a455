"""Third floor. In: an edition, its table of figures, its languages. Out: print pages (`Sheet`: HTML and what it says).

Posters, cab cards and their imposition. It must not know the PDF engine, files, or mechanics; it computes and rounds no
figure.
"""
