# SPDX-License-Identifier: GPL-3.0-or-later
"""What the checks of the tree share: which files there are, source text without comments, a report at the end."""

import pathlib
import re
import sys

# The parts of the tree that are ours to keep; a build folder may lie anywhere below it.
PARTS = ["include", "src", "tests", "docs", "sample_profiles", ".ci"]
LOOSE = ["CMakeLists.txt", "README.md", "DEVELOPERS.md"]


def files(top, parts=PARTS, suffixes=None):
    """Every text file of ours below the named parts, in order."""
    found = []
    for part in parts:
        for path in sorted((top / part).rglob("*")):
            if path.is_file() and "__pycache__" not in path.parts and (suffixes is None or path.suffix in suffixes):
                found.append(path)
    return found


def everything(top):
    """The above and the files at the top."""
    return files(top) + [top / name for name in LOOSE if (top / name).exists()]


TOKEN = re.compile(r'//[^\n]*|/\*.*?\*/|"(?:\\.|[^"\\\n])*"|\'(?:\\.|[^\'\\\n])*\'', re.DOTALL)


def code(text, keep_strings=False):
    """C source with comments (and strings) blanked, line for line."""

    def blank(match):
        token = match.group(0)
        if keep_strings and token[0] in "\"'":
            return token
        if token[0] in "\"'":
            return token[0] * 2
        return "\n" * token.count("\n")

    return TOKEN.sub(blank, text)


class Report:
    """Collects what is wrong; `end` prints it and leaves with 1 where there is anything, or nothing was looked at."""

    def __init__(self):
        self.wrong = []
        self.looked = 0

    def say(self, where, what):
        self.wrong.append(f"{where}: {what}")

    def end(self, what):
        for line in self.wrong:
            print(line)
        print(f"{self.looked} {what} looked at, {len(self.wrong)} wrong")
        sys.exit(1 if self.wrong or self.looked == 0 else 0)


def top_of(arguments):
    return pathlib.Path(arguments[1]).resolve()
