# SPDX-License-Identifier: GPL-3.0-or-later
"""Who may include whom.  rooms.py TOP BUILD

The table below is the plan of the house (DEVELOPERS.md shows it).  It is held against what the rooms declare to the
build, against every #include of ours, and, for system headers, against what the compiler says that each file depends
on: a header that reaches a room through another room's header counts as well.
"""

import concurrent.futures
import json
import os
import pathlib
import re
import shlex
import subprocess
import sys

import source

MAY_USE = {
    "base": [],
    "water": ["base"],
    "numerics": ["base"],
    "column": ["base", "water", "numerics"],
    "region": ["base", "numerics"],
    "statistics": ["base", "water", "numerics", "region"],
    "cf": ["base"],
    "input": ["base", "cf"],
    "casts": ["base", "water", "numerics", "region"],
    "regrid": ["base", "numerics", "region"],
    "result": ["base", "cf"],
    "report": ["base", "result"],
    "job": ["base"],
}
# The room in which each public header is made real.
PUBLIC = {"status.h": "base", "water.h": "water", "column.h": "column", "region.h": "region"}

# Header as the compiler names it: the rooms that may know it.  Signals may be blocked anywhere (pthread_sigmask comes
# with signal.h); threads are started in job alone.  numerics takes pthread_once from pthread.h and nothing else, which
# is looked at apart.
SYSTEM = {
    r"/netcdf(_\w+)?\.h$": ["cf"],
    r"/(hdf5|H5\w*)\.h$": ["cf"],
    r"/udunits2\.h$": ["cf"],
    r"/gsl/": ["numerics"],
    r"/(pthread|threads|omp)\.h$": ["job", "numerics"],
    r"/jansson\.h$": ["result", "job", "commands"],
    r"/cmocka\.h$": [],
}


def declared(top, report):
    """The rooms and what they USE, as their CMakeLists.txt say."""
    rooms = {}
    for path in sorted((top / "src").glob("*/CMakeLists.txt")):
        for name, rest in re.findall(r"stericol_room\(\s*(\w+)([^)]*)\)", path.read_text()):
            uses = re.search(r"\bUSES\b(.*?)(?:\bLINKS\b|\bSOURCES\b|$)", rest, re.DOTALL)
            rooms[name] = uses.group(1).split() if uses else []
            if name != path.parent.name:
                report.say(path, f"declares the room {name}")
    return rooms


def check_uses(rooms, report):
    for name, uses in rooms.items():
        for other in uses:
            if name != "commands" and other not in MAY_USE.get(name, []):
                report.say(f"src/{name}/CMakeLists.txt", f"uses {other}, which the plan does not allow")


def check_includes(top, rooms, report):
    for path in source.files(top, ["src"], {".c", ".h"}):
        room = path.relative_to(top / "src").parts[0]
        report.looked += 1
        for mark, name in re.findall(r'^\s*#\s*include\s*([<"])([^>"]+)[>"]', path.read_text(), re.MULTILINE):
            if mark == "<":
                continue
            folder, _, rest = name.partition("/")
            other = PUBLIC.get(rest) if folder == "stericol" else folder
            if other is None or not re.fullmatch(r"\w+", folder) or not rest:
                report.say(path, f'"{name}" is neither "room/header.h" nor "stericol/header.h"')
            elif other != room and room != "commands" and other not in MAY_USE.get(room, []):
                report.say(path, f'includes "{name}", and {room} may not use {other}')


def check_once(top, report):
    for path in source.files(top, ["src/numerics"], {".c", ".h"}):
        for name in re.findall(r"\bpthread_\w+", source.code(path.read_text())):
            if name not in ("pthread_once", "pthread_once_t"):
                report.say(path, f"uses {name}: numerics may make sure that something is done once, no more")


def check_public(top, report):
    for path in source.files(top, ["include"], {".h"}):
        report.looked += 1
        if path.name not in PUBLIC:
            report.say(path, "belongs to no room: add it to the table PUBLIC")
        for name in re.findall(r"^\s*#\s*include\s*[<\"]([^>\"]+)", path.read_text(), re.MULTILINE):
            if name not in ("stddef.h", "stdbool.h", "stdint.h") and not name.startswith("stericol/"):
                report.say(path, f"a public header includes {name}")


def dependencies(command, folder):
    """Every header that a compilation reads."""
    words = shlex.split(command)
    kept = []
    skip = False
    for word in words:
        if skip or word in ("-c", "-MD"):
            skip = False
        elif word in ("-o", "-MT", "-MF"):
            skip = True
        else:
            kept.append(word)
    made = subprocess.run(kept + ["-M"], cwd=folder, capture_output=True, text=True, check=True).stdout
    return made.replace("\\\n", " ").split()[1:]


def check_system(top, build, report):
    seen = {pattern: set() for pattern in SYSTEM}
    entries = [entry for entry in json.loads((build / "compile_commands.json").read_text())
               if top / "src" in pathlib.Path(entry["file"]).resolve().parents]
    with concurrent.futures.ThreadPoolExecutor(os.cpu_count()) as pool:
        depends = list(pool.map(lambda entry: dependencies(entry["command"], entry["directory"]), entries))
    for entry, found in zip(entries, depends):
        path = pathlib.Path(entry["file"]).resolve()
        room = path.relative_to(top / "src").parts[0]
        report.looked += 1
        for pattern, rooms in SYSTEM.items():
            for header in found:
                if re.search(pattern, header):
                    seen[pattern].add(room)
                    if room not in rooms:
                        report.say(path, f"depends on {header}, which only {rooms or 'tests'} may know")
    for pattern in (r"/netcdf(_\w+)?\.h$", r"/gsl/", r"/(pthread|threads|omp)\.h$"):
        if not seen[pattern]:
            report.say(build, f"no file depends on {pattern}: the check sees nothing")


def main():
    top, build = source.top_of(sys.argv), pathlib.Path(sys.argv[2])
    report = source.Report()
    rooms = declared(top, report)
    check_uses(rooms, report)
    check_includes(top, rooms, report)
    check_public(top, report)
    check_once(top, report)
    check_system(top, build, report)
    report.end("files")


main()
