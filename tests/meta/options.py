# SPDX-License-Identifier: GPL-3.0-or-later
"""docs/options.md lists the options as the program's own tables have them.  options.py TOP WRITE_OPTIONS [--write]

With --write the list in the document is renewed.
"""

import difflib
import subprocess
import sys

import source

MARK = "<!-- The rest of this page is made from the option tables; see DEVELOPERS.md. -->\n"


def main():
    top = source.top_of(sys.argv)
    page = top / "docs" / "options.md"
    listed = subprocess.run([sys.argv[2]], capture_output=True, text=True, check=True).stdout
    head, mark, rest = page.read_text().partition(MARK)
    if not mark:
        sys.exit(f"{page}: has lost the line {MARK.strip()}")
    if "--write" in sys.argv:
        page.write_text(head + MARK + listed)
        return
    if listed.count("\n| `--") < 40:
        sys.exit("the tables list next to nothing: the check sees nothing")
    if rest != listed:
        sys.stdout.writelines(difflib.unified_diff(rest.splitlines(True), listed.splitlines(True), "docs/options.md",
                                                   "the option tables"))
        sys.exit("docs/options.md differs from the option tables; run tests/meta/options.py with --write")
    print(f"{listed.count(chr(10) + '| `')} options agree")


main()
