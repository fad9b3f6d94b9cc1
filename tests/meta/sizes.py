# SPDX-License-Identifier: GPL-3.0-or-later
"""Functions stop at 80 lines, files at 800 (tables apart).  sizes.py TOP"""

import re
import sys

import source

MOST_FUNCTION, MOST_FILE = 80, 800
# Rows and nothing else.
TABLES = {"src/job/tables.c"}


def functions(text):
    """(name, first line, lines) of every function: its brace stands alone at the margin, as .clang-format puts it."""
    lines = source.code(text).split("\n")
    start = None
    for number, line in enumerate(lines):
        if line == "{":
            start = number
        elif line == "}" and start is not None:
            head = start
            while head > 0 and re.search(r"\S", lines[head - 1]) and not re.search(r"[;}]\s*$", lines[head - 1]):
                head -= 1
            found = re.search(r"(\w+)\s*\(", " ".join(lines[head:start]))
            yield (found.group(1) if found else "?"), head + 1, number - head + 1
            start = None


def main():
    top = source.top_of(sys.argv)
    report = source.Report()
    for path in source.files(top, ["include", "src", "tests", "sample_profiles"], {".c", ".h", ".py", ".sh"}):
        short = path.relative_to(top).as_posix()
        text = path.read_text()
        count = text.count("\n")
        if count > MOST_FILE and short not in TABLES:
            report.say(short, f"has {count} lines, more than {MOST_FILE}")
        if path.suffix not in {".c", ".h"}:
            continue
        for name, line, length in functions(text):
            report.looked += 1
            if length > MOST_FUNCTION:
                report.say(f"{short}:{line}", f"{name} has {length} lines, more than {MOST_FUNCTION}")
    report.end("functions")


main()
