"""Where the word lists stand: what each misses, holds too much, or has wrong.

Run from the checkout: python tools/words_status.py

Exit code 1 on a mismatch of placeholders, a text that is too long or a list that cannot be read; missing and obsolete
keys are listed, and fail the run only with --strict.
"""

from __future__ import annotations

import argparse
import sys

from chartgen.errors import MachineFault
from chartgen.language.catalogue import MASTER, WordList, available, drawn_length, placeholders, read_words


def report(words: WordList, master: WordList) -> tuple[list[str], list[str]]:
    """Lines about what is not done yet, and lines about what is wrong."""
    undone, wrong = [], []
    for key, entry in master.entries.items():
        mine = words.entries.get(key)
        if mine is None or not mine.text:
            undone.append(f"missing   {key}: {entry.english}")
        elif mine.english != entry.english:
            undone.append(f"outdated  {key}: {mine.english!r} is now {entry.english!r}")
        elif placeholders(mine.text) != placeholders(entry.english):
            wrong.append(f"braces    {key}: {mine.text!r} for {entry.english!r}")
        elif entry.max_chars and drawn_length(mine.text) > entry.max_chars:
            wrong.append(f"too long  {key}: {drawn_length(mine.text)} > {entry.max_chars} characters: {mine.text}")
    undone += [f"obsolete  {key}" for key in words.entries if key not in master.entries]
    return undone, wrong


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--strict", action="store_true", help="missing and obsolete keys fail the run too")
    strict = parser.parse_args().strict
    failed = False
    for tag in available():
        try:
            words = read_words(tag)
            undone, wrong = report(words, read_words(MASTER))
        except MachineFault as fault:
            undone, wrong = [], [fault.problem]
            words = WordList(tag=tag, entries={}, native_reader=None, back_translated=None)
        failed |= bool(wrong) or (strict and bool(undone))
        doubtful = sum(entry.doubtful is not None for entry in words.entries.values())
        sys.stdout.write(
            f"{tag}: {len(words.entries)} entries, {len(undone)} to do, {len(wrong)} wrong, {doubtful} doubtful, "
            f"native reader: {words.native_reader or 'none yet'}\n"
        )
        sys.stdout.writelines(f"  {line}\n" for line in wrong + undone)
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
