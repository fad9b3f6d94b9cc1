# SPDX-License-Identifier: GPL-3.0-or-later
"""A check that cannot fail is none: plants faults in a small tree and sees that each check finds them.

checks.py TOP FOLDER
"""

import json
import pathlib
import shutil
import subprocess
import sys

import source

LICENCE = "/* SPDX-License-Identifier: GPL-3.0-or-later */\n"
LONG = "int stericol_long(void)\n{\n" + "    stericol_x();\n" * 90 + "    return 0;\n}\n"

# What is planted: path, text; and what the check's report must hold.
FAULTS = {
    "rooms": [
        ("src/water/CMakeLists.txt", "stericol_room(water USES base cf SOURCES a.c)\n", "uses cf"),
        ("src/water/a.c", '#include "column/sweep.h"\n', "water may not use column"),
        ("src/column/sweep.h", '#include "stericol/region.h"\n', "column may not use region"),
        ("src/region/b.c", '#include "../water/a.h"\n', "is neither"),
        ("src/numerics/c.c", "int f(void)\n{\n    return pthread_create();\n}\n", "uses pthread_create"),
        ("include/stericol/new.h", "#include <netcdf.h>\n", "includes netcdf.h"),
        ("src/base/d.c", "#include <pthread.h>\n", "which only"),
    ],
    "silence": [
        ("src/water/a.c", 'void f(void)\n{\n    printf("x");\n}\n', "prints"),
        ("src/water/b.c", "void f(void)\n{\n    exit(1);\n}\n", "ends the process"),
        ("src/water/c.c", "static int calls = 0;\n", "can change"),
        ("src/water/d.c", "static double table[3];\n", "can change"),
        ("src/water/e.c", "void f(void)\n{\n    static unsigned long seed;\n}\n", "can change"),
        ("src/water/f.c", "void f(char *a)\n{\n    strtok(a, a);\n}\n", "state of the process"),
    ],
    "sizes": [
        ("src/water/a.c", LONG, "stericol_long has 9"),
        ("src/water/b.c", "int x;\n" * 801, "802 lines"),
    ],
    "habits": [
        ("src/water/a.c", "/* TO" + "DO */\n", "promise"),
        ("src/water/b.c", "int x; \n", "blanks"),
        ("tests/c.c", "assert_floa" + "t_equal(1, 2, 3);\n", "NaN"),
        ("tests/d.c", "ski" + "p();\n", "leaves a test out"),
        ("docs/e.md", "[there](nowhere.md)\n", "not there"),
        ("docs/f.md", "see /hom" + "e/someone/data\n", "one machine"),
        ("src/water/g.c", "\nint without_licence;\n", "licence"),
    ],
}


def plant(folder, faults):
    shutil.rmtree(folder, ignore_errors=True)
    for name, text, _ in faults:
        path = folder / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text if text.startswith("\n") or path.suffix != ".c" else LICENCE + text)
    (folder / "include").mkdir(exist_ok=True)
    commands = [{"directory": str(folder), "file": str(folder / name), "command": f"cc -c {name}"}
                for name, text, _ in faults if "<" in text and name.endswith(".c")]
    (folder / "compile_commands.json").write_text(json.dumps(commands))


def main():
    top, folder = source.top_of(sys.argv), pathlib.Path(sys.argv[2])
    report = source.Report()
    for check, faults in FAULTS.items():
        place = folder / check
        plant(place, faults)
        made = subprocess.run([sys.executable, "-B", top / "tests" / "meta" / f"{check}.py", place, place],
                              capture_output=True, text=True)
        if made.returncode != 1:
            report.say(check, f"ended with {made.returncode}\n{made.stderr}")
        for name, _, words in faults:
            report.looked += 1
            if not any(name in line and words in line for line in made.stdout.split("\n")):
                report.say(check, f"does not find '{words}' in {name}\n{made.stdout}")
    report.end("planted faults")


main()
