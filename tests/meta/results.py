# SPDX-License-Identifier: GPL-3.0-or-later
"""docs/results.md names everything that a result file holds.  results.py TOP PROGRAM MAKE_SEA FOLDER

Makes results of every sort from the demonstration data and looks each variable, dimension and attribute up in the
document; and names that the document promises in its table of variables must be in one of the files.
"""

import pathlib
import re
import shutil
import subprocess
import sys

import netCDF4

import source

RUNS = {
    "whole": ["change", "--earlier", "velmar_1990s.nc", "--later", "velmar_2010s.nc"],
    "layers": ["change", "--earlier", "velmar_1990s.nc", "--later", "velmar_2010s.nc", "--bathymetry",
               "velmar_depth.nc", "--layers", "0..700,700..bottom", "--attribution", "linear", "--fill-coverage"],
    "heat": ["change", "--earlier", "velmar_1990s.nc", "--later", "velmar_2010s.nc", "--constant-salinity", "35"],
    "scenario": ["scenario", "--field", "velmar_1990s.nc", "--warming", "1"],
}


def names_of(path):
    """Every name that a file holds, with its sort."""
    with netCDF4.Dataset(path) as file:
        for name in file.dimensions:
            yield "dimension", name
        for name in file.ncattrs():
            yield "attribute", name
        for name, variable in file.variables.items():
            yield "variable", name
            for attribute in variable.ncattrs():
                yield "attribute", attribute


def main():
    top = source.top_of(sys.argv)
    program, make_sea, folder = (pathlib.Path(word).resolve() for word in sys.argv[2:5])
    report = source.Report()
    text = (top / "docs" / "results.md").read_text()
    written = set(re.findall(r"`([A-Za-z_]\w*)`", text))
    shutil.rmtree(folder, ignore_errors=True)
    folder.mkdir(parents=True)
    subprocess.run([make_sea, str(folder)], check=True)
    found = set()
    for name, arguments in RUNS.items():
        subprocess.run([program] + arguments + ["--output", f"{name}.nc", "--quiet"], cwd=folder, check=True,
                       stdout=subprocess.DEVNULL)
        found |= set(names_of(folder / f"{name}.nc"))
    for sort, name in sorted(found):
        report.looked += 1
        # What a prefix makes of a name of the table needs no row of its own.
        plain = re.sub(r"^(region_layer_|layer_)", "", name)
        if not {name, plain, f"region_{plain}"} & written:
            report.say("docs/results.md", f"does not name the {sort} {name}")
    variables = {name for sort, name in found if sort == "variable"}
    for row in re.findall(r"^\| (`[^|]*) \|", text, re.MULTILINE):
        for name in re.findall(r"`(\w+)`", row):
            if name not in variables and name not in {other for _, other in found}:
                report.say("docs/results.md", f"promises {name}, which no result holds")
    report.end("names")


main()
