#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""Reads a result of `change` or `scenario` with the netCDF4 library of Python and holds it against what is promised
of it and against itself: names, shapes, units, masks; parts add up; totals are the sums of the maps.

    read_result.py RESULT WORDS      WORDS, parted by commas: salinity, remainder, filled, dated (each absent: not so)
"""
import sys

import netCDF4
import numpy

PATH, WORDS = sys.argv[1], set(sys.argv[2].split(","))
FLOAT = 2.0 ** -24  # relative rounding of a float
checks = 0

MAPS = {"steric_height_change": "m", "thermosteric_height_change": "m", "halosteric_height_change": "m",
        "attribution_remainder": "m", "heat_content_change": "J m-2", "expansion_efficiency": "m3 J-1",
        "mean_thermal_expansion": "K-1", "integrated_depth": "m"}
PARTS = {"steric": "m3", "thermosteric": "m3", "halosteric": "m3"}
FLAGS = ["complete", "sea_floor", "end_of_data", "unequal", "gap", "no_data", "outside_range"]


def check(condition, *what):
    global checks
    checks += 1
    if not condition:
        sys.exit(PATH + ": " + " ".join(str(part) for part in what))


def wanted(name):
    """Without a salinity of its own nothing but the thermosteric part is known; a symmetric sharing leaves nothing."""
    if "remainder" in name:
        return "remainder" in WORDS
    return "salinity" in WORDS or "thermosteric" in name or "steric" not in name


result = netCDF4.Dataset(PATH)
variables = result.variables


def values(name):
    return numpy.ma.filled(numpy.ma.asarray(variables[name][:], dtype=float), numpy.nan)


def shape_of_maps():
    layers = len(result.dimensions["layer"])
    for name, unit in MAPS.items():
        for full, dims in ((name, ("lat", "lon")), ("layer_" + name, ("layer", "lat", "lon"))):
            there = wanted(name) and (layers > 1 or not full.startswith("layer_"))
            check((full in variables) == there, full, "should" if there else "should not", "be there")
            if not there:
                continue
            variable = variables[full]
            check(variable.dimensions == dims, full, variable.dimensions)
            check(variable.dtype == numpy.float32, full, "holds", variable.dtype)
            check(variable.units == unit, full, variable.units)
    check(variables["cell_area"].units == "m2" and variables["cell_area"].standard_name == "cell_area", "cell_area")
    check(variables["layer_bounds"].shape == (layers, 2), "layer_bounds")


def flags():
    variable = variables["column_flag"]
    check(variable.dtype == numpy.int8, "column_flag is", variable.dtype)
    check(variable.flag_meanings.split() == FLAGS, variable.flag_meanings)
    check(list(variable.flag_values) == list(range(len(FLAGS))), variable.flag_values)
    seen = variable[:]
    check(not numpy.ma.getmaskarray(seen).any(), "a column has no flag")
    dry = numpy.asarray(seen) == FLAGS.index("no_data")
    check(numpy.isnan(values("thermosteric_height_change")[dry]).all(), "a column without data has a height")
    check(numpy.isfinite(values("thermosteric_height_change")).any(), "nothing is there")


def close(one, other, tolerance, *what):
    check(one.shape == other.shape, *what, one.shape, other.shape)
    check((numpy.isnan(one) == numpy.isnan(other)).all(), *what, "missing in different places")
    apart = numpy.abs(one - other)[~numpy.isnan(one)]
    allowed = numpy.broadcast_to(tolerance, one.shape)[~numpy.isnan(one)]
    check((apart <= allowed).all(), *what, "off by", apart.max() if apart.size else 0, "allowed", allowed)


def parts_add():
    """total = thermosteric + halosteric (+ remainder); each map is rounded to float once."""
    for prefix in ("", "layer_"):
        if "salinity" not in WORDS or prefix + "steric_height_change" not in variables:
            continue
        names = ["thermosteric_height_change", "halosteric_height_change"]
        names += ["attribution_remainder"] if "remainder" in WORDS else []
        parts = [values(prefix + name) for name in names]
        total = values(prefix + "steric_height_change")
        close(sum(parts), total, FLOAT * (sum(numpy.abs(p) for p in parts) + numpy.abs(total)), prefix, "parts")
    if "remainder" in WORDS:
        check(numpy.nanmax(numpy.abs(values("attribution_remainder"))) > 0, "no remainder anywhere")
    for kind in ("mean_{}_height_change", "{}_volume_change"):
        if "salinity" not in WORDS or "remainder" in WORDS:
            continue
        total, heat, salt = (values("region_" + kind.format(p)) for p in ("steric", "thermosteric", "halosteric"))
        close(heat + salt, total, 1e-14 * (abs(heat) + abs(salt)), kind)


def layers_add():
    """Layers from the surface to the bottom without a hole add to the column; one that is below the floor counts 0."""
    if "layer_steric_height_change" not in variables and "layer_thermosteric_height_change" not in variables:
        return
    for name in MAPS:
        if not wanted(name) or name in ("expansion_efficiency", "mean_thermal_expansion"):
            continue
        layer, column = values("layer_" + name), values(name)
        there = numpy.isfinite(column)
        added = numpy.where(there, numpy.nansum(layer, axis=0), numpy.nan)
        close(added, column, FLOAT * (numpy.nansum(numpy.abs(layer), axis=0) + numpy.abs(column)), name, "layers")
    for name in list(variables):
        if name.startswith("region_layer_") and (name.endswith("volume_change") or name.endswith("content_change")):
            if "filled" in name:
                continue
            layer, column = values(name), values(name.replace("region_layer_", "region_"))
            check(variables[name].dimensions == ("region", "layer"), name, variables[name].dimensions)
            close(numpy.nansum(layer, axis=1), column, 1e-13 * numpy.nansum(numpy.abs(layer), axis=1), name)


def totals():
    """Totals of the whole domain are sums of the maps; the maps are floats, the sums are not."""
    names = list(variables["region_name"][:])
    whole = names.index("whole_domain")
    area = values("cell_area")
    used = numpy.isfinite(values("thermosteric_height_change"))
    covered = values("region_covered_area")
    close(numpy.array(area[used].sum()), numpy.array(covered[whole]), FLOAT * covered[whole], "covered area")
    pairs = [("heat_content_change", "region_heat_content_change")]
    pairs += [(p + "_height_change", "region_" + p + "_volume_change") for p in PARTS]
    for name, total in pairs:
        check((total in variables) == wanted(name), total)
        if not wanted(name):
            continue
        product = numpy.where(used, values(name) * area, 0.0)
        close(numpy.array(product.sum()), numpy.array(values(total)[whole]),
              2 * FLOAT * numpy.abs(product).sum(), total)
        check(variables[total].dtype == numpy.float64, total, variables[total].dtype)
        check(variables[total].dimensions == ("region",), total, variables[total].dimensions)
    for part in PARTS:
        if wanted(part + "_height"):
            mean, volume = values("region_mean_{}_height_change".format(part)), values("region_{}_volume_change".format(part))
            close(mean * covered, volume, 1e-14 * numpy.abs(volume), part, "mean times covered area")
    north, south = names.index("northern_hemisphere"), names.index("southern_hemisphere")
    for name in ("region_area", "region_covered_area", "region_thermosteric_volume_change", "region_heat_content_change"):
        v = values(name)
        close(v[north] + v[south], v[whole], 1e-14 * (abs(v[north]) + abs(v[south])), name, "north and south")
    oceans = [i for i, name in enumerate(names) if name.endswith("_ocean")]
    check(len(oceans) >= 4 and values("region_area")[oceans].sum() <= values("region_area")[whole] * (1 + 1e-14), "oceans")
    equivalent = values("region_thermosteric_volume_change") / result.ocean_area
    close(equivalent, values("region_sea_level_equivalent"), 1e-14 * abs(equivalent), "sea-level equivalent")
    if "filled" in WORDS:
        scaled = values("region_heat_content_change") * values("region_area") / covered
        close(values("region_filled_heat_content_change"), scaled, 1e-14 * abs(scaled), "filled")
        check((values("region_area") > covered).any(), "nothing was left to fill")
    else:
        check(not any("filled" in name for name in variables), "filled sums are there")


def words():
    check(result.Conventions.startswith("CF-1.10"), result.Conventions)
    for name in ("history", "settings", "inputs", "equation_of_state", "assumptions", "source"):
        check(len(result.getncattr(name)) > 10, name)
    check(("time_coverage_start" in result.ncattrs()) == ("dated" in WORDS), "time coverage")
    if "dated" in WORDS:
        check(result.time_coverage_start.startswith("2000-01-01"), result.time_coverage_start)
        check(result.time_coverage_end >= result.time_coverage_start, result.time_coverage_end)


for part in (shape_of_maps, flags, parts_add, layers_add, totals, words):
    part()
print(checks, "checks passed")
