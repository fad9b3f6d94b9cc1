# SPDX-License-Identifier: GPL-3.0-or-later
"""Small habits that a text search can hold.  habits.py TOP"""

import re
import sys

import source

# Each pattern is written so that it does not find itself.
EVERYWHERE = [
    (r"\b(?:TO[D]O|FIX[M]E|X[X]X|HAC[K])\b", "is a promise, not code"),
    (r"(?<![\w.$}])/(?:hom[e]|roo[t]|Use[r]s|wor[k]|mn[t]|medi[a])/\w", "is a path of one machine"),
    (r"[ \t]+$", "ends in blanks"),
    (r"\r", "has a carriage return"),
]
TESTS = [
    (r"\bassert_(?:not_)?floa[t]_|\bassert_float_[n]ot|\bassert_(?:not_)?doubl[e]_",
     "is a macro of cmocka that lets NaN pass"),
    (r"\bski[p]\s*\(\s*\)", "leaves a test out"),
    (r"#include\s*<cmock[a]\.h>", "goes past support/testing.h"),
]
# Files whose very subject is what a pattern looks for.
ALLOWED = {("tests/support/testing.h", "goes past support/testing.h")}
# Files that say nothing of their licence themselves.
WITHOUT_LICENCE_LINE = {".md", ".txt", ".csv", ".in", ".supp", ""}


def check_lines(path, short, patterns, report):
    for number, line in enumerate(path.read_text(encoding="utf-8").split("\n"), 1):
        for pattern, what in patterns:
            found = re.search(pattern, line)
            if found and (short, what) not in ALLOWED:
                report.say(f"{short}:{number}", f"'{found.group(0).strip()}' {what}")


def check_licence(path, short, report):
    plain = path.suffix in WITHOUT_LICENCE_LINE and path.name != "CMakeLists.txt"
    if not plain and "SPDX-License-Identifier: GPL-3.0-or-later" not in path.read_text()[:200]:
        report.say(short, "does not name its licence at its head")


def check_links(path, short, top, report):
    """Links of the documents lead to files of this tree."""
    for target in re.findall(r"\]\(([^)#\s]+)[^)]*\)", path.read_text()):
        if re.match(r"[a-z]+:", target):
            continue
        goal = (path.parent / target).resolve()
        if top not in goal.parents or not goal.exists():
            report.say(short, f"links to {target}, which is not there")


def main():
    top = source.top_of(sys.argv)
    report = source.Report()
    for path in source.everything(top):
        short = path.relative_to(top).as_posix()
        if path.suffix in {".nc", ".png"}:
            continue
        report.looked += 1
        check_lines(path, short, EVERYWHERE + (TESTS if short.startswith("tests/") else []), report)
        check_licence(path, short, report)
        if path.suffix == ".md":
            check_links(path, short, top, report)
    report.end("files")


main()
