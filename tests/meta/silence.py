# SPDX-License-Identifier: GPL-3.0-or-later
"""The library never prints, never ends the process and keeps no state that changes.  silence.py TOP

Only commands/ prints and decides how the program ends.
"""

import re
import sys

import source

FORBIDDEN = [
    (r"\b(?:v?printf|puts|putchar|perror|psignal)\s*\(", "prints"),
    (r"\b(?:stdout|stderr)\b", "knows standard output or standard error"),
    (r"\b(?:exit|_exit|_Exit|quick_exit|abort|longjmp|raise)\s*\(", "ends the process"),
    (r"\b(?:system|popen|execl\w*|execv\w*|gets|strcpy|strcat|sprintf)\s*\(", "calls what is better not called"),
    (r"\b(?:strtok|localtime|gmtime|ctime|asctime|rand|srand|setlocale|setenv|putenv)\s*\(",
     "calls what changes the state of the process"),
    # A static variable without const, in a function or outside.
    (r"^\s*static\s+(?!.*\bconst\b)(?!inline\b)(?:[\w*]+\s+)*\**\w+(?:\[[^]]*\])*\s*(?:=|;)",
     "can change and outlives a call"),
]
# What is meant, and why.
ALLOWED = {
    ("cf/guard.c", "ends the process"): "the child that looks at a header ends with its answer",
    ("job/signals.c", "ends the process"): "a signal is raised again so that the shell sees it",
    ("job/signals.c", "can change and outlives a call"): "a signal handler can reach nothing else",
    ("numerics/begin.c", "can change and outlives a call"): "what makes GSL's handler be switched off once",
}


def main():
    top = source.top_of(sys.argv)
    report = source.Report()
    used = set()
    for path in source.files(top, ["src", "include"], {".c", ".h"}):
        short = "/".join(path.relative_to(top).parts[1:])
        if short.startswith("commands/"):
            continue
        report.looked += 1
        for number, line in enumerate(source.code(path.read_text()).split("\n"), 1):
            for pattern, what in FORBIDDEN:
                if re.search(pattern, line):
                    if (short, what) in ALLOWED:
                        used.add((short, what))
                    else:
                        report.say(f"{path}:{number}", f"{what}: {line.strip()}")
    for left in set(ALLOWED) - used:
        report.say(left[0], "has an exception that nothing needs any more")
    report.end("files")


main()
