# SPDX-License-Identifier: GPL-3.0-or-later
"""Every symbol of ours carries the prefix, and the shared library exports what the headers promise, no more.

symbols.py TOP SHARED STATIC [OBJECT...]
"""

import re
import subprocess
import sys

import source

# What the compiler adds for sanitizers, coverage and the linker's own ends.
NOT_OURS = re.compile(r"^(?:__|_init$|_fini$|_edata$|_end$|_Z|gcov)")


def defined(arguments):
    """(file, name) of the symbols that nm calls defined and global."""
    made = subprocess.run(["nm", "--defined-only", "--extern-only", "--format=posix", "--print-file-name"] + arguments,
                          capture_output=True, text=True, check=True).stdout
    found = re.findall(r"^(.*): (\S+) [A-Za-z] ", made, re.MULTILINE)
    return {(path, name) for path, name in found if not NOT_OURS.match(name)}


def promised(top):
    """The functions that the public headers mark STERICOL_API."""
    names = set()
    for path in source.files(top, ["include"], {".h"}):
        text = re.sub(r"#define[^\n]*(?:\\\n[^\n]*)*", "", source.code(path.read_text()))
        names |= set(re.findall(r"STERICOL_API\b[^;()]*?\b(\w+)\s*\(", text))
    return names


def main():
    top, shared, static = source.top_of(sys.argv), sys.argv[2], sys.argv[3]
    report = source.Report()
    exported, promises = {name for _, name in defined(["--dynamic", shared])}, promised(top)
    for name in sorted(exported - promises):
        report.say(shared, f"exports {name}, which no public header promises")
    for name in sorted(promises - exported):
        report.say(shared, f"does not export {name}, which a public header promises")
    for path, name in sorted(defined([static] + sys.argv[4:])):
        report.looked += 1
        if not name.startswith("stericol_"):
            report.say(path, f"defines {name} without the prefix")
    if not promises:
        report.say("include", "promises nothing: the check sees nothing")
    report.end("symbols")


main()
