# SPDX-License-Identifier: GPL-3.0-or-later
"""Runs the examples of the documents.  run_examples.py TOP PROGRAM MAKE_SEA FOLDER

A block fenced as ```sh is run by sh -eu in a folder that holds the demonstration data and the tables of
sample_profiles/, with the program on the PATH.  "```sh exit=3" must end with that code.  If the block right after it
is fenced as ```text, its lines must be what came on standard output; as "```text stderr", on standard error.  The
blocks of one document run in order in one folder.  ```console shows what is not run here: building and installing.
"""

import difflib
import os
import pathlib
import re
import shutil
import subprocess
import sys

import source

BLOCK = re.compile(r"^```(\S*)([^\n]*)\n(.*?)^```$", re.MULTILINE | re.DOTALL)
KNOWN = {"sh", "text", "console", "c", "cmake", "json"}


def prepare(top, program, make_sea, folder):
    shutil.rmtree(folder, ignore_errors=True)
    folder.mkdir(parents=True)
    (folder / "bin").mkdir()
    (folder / "bin" / "stericol").symlink_to(program)
    data = folder / "data"
    data.mkdir()
    subprocess.run([make_sea, str(data)], check=True)
    for table in sorted((top / "sample_profiles").glob("*.txt")):
        if table.name != "CMakeLists.txt":
            shutil.copy(table, data)
    return data


def compare(where, what, expected, found, report):
    if expected == found:
        return
    lines = difflib.unified_diff(expected.splitlines(True), found.splitlines(True), "document", "program")
    report.say(where, f"{what} differs\n" + "".join(lines))


def run_document(page, short, data, folder, report):
    place = folder / short.replace("/", "_")
    shutil.copytree(data, place)
    environment = dict(os.environ, PATH=f"{folder / 'bin'}:{os.environ['PATH']}", LC_ALL="C.UTF-8")
    text = page.read_text()
    last, last_end = None, -1
    for block in BLOCK.finditer(text):
        kind, words, body = block.group(1), block.group(2).split(), block.group(3)
        where = f"{short}:{text.count(chr(10), 0, block.start()) + 1}"
        if kind not in KNOWN:
            report.say(where, f"a block of the kind '{kind}', which is none of {sorted(KNOWN)}")
        if kind == "text" and last is not None and not text[last_end:block.start()].strip():
            stream = "stderr" if "stderr" in words else "stdout"
            compare(where, stream, body, getattr(last, stream), report)
        if kind == "sh":
            expected = next((int(word[5:]) for word in words if word.startswith("exit=")), 0)
            last = subprocess.run(["sh", "-euc", body], cwd=place, env=environment, capture_output=True, text=True,
                                  timeout=300)
            report.looked += 1
            if last.returncode != expected:
                report.say(where, f"ended with {last.returncode}, not {expected}\n{body}{last.stderr}")
        elif kind != "text":
            last = None
        last_end = block.end()


def main():
    top = source.top_of(sys.argv)
    program, make_sea, folder = (pathlib.Path(word).resolve() for word in sys.argv[2:5])
    report = source.Report()
    data = prepare(top, program, make_sea, folder)
    pages = [top / "README.md", top / "DEVELOPERS.md"] + sorted((top / "docs").glob("*.md"))
    for page in pages:
        run_document(page, page.relative_to(top).as_posix(), data, folder, report)
    report.end("examples")


main()
