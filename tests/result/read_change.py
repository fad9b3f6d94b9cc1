#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""Reads the result files that test_change.c writes, with the netCDF4 library of Python, and holds them against the names
and units that the program promises and against CF-1.10: sections 2.5.1 (missing values), 3.1 (units that UDUNITS reads),
3.5 (flags), 5 and 6.1.1 (coordinates, region labels), 7.1 (bounds), 7.2 (cell measures), 7.3 (cell methods)."""
import ctypes
import os
import sys

import netCDF4
import numpy

FOLDER = sys.argv[1]
MAPS = {  # name: unit, standard name or None
    "steric_height_change": ("m", "steric_change_in_mean_sea_level"),
    "thermosteric_height_change": ("m", "thermosteric_change_in_mean_sea_level"),
    "halosteric_height_change": ("m", "halosteric_change_in_mean_sea_level"),
    "attribution_remainder": ("m", None),
    "heat_content_change": ("J m-2", None),
    "expansion_efficiency": ("m3 J-1", None),
    "mean_thermal_expansion": ("K-1", None),
    "integrated_depth": ("m", None),
}
REGIONS = {
    "area": "m2", "covered_area": "m2",
    "mean_steric_height_change": "m", "mean_thermosteric_height_change": "m", "mean_halosteric_height_change": "m",
    "steric_volume_change": "m3", "thermosteric_volume_change": "m3", "halosteric_volume_change": "m3",
    "heat_content_change": "J", "sea_level_equivalent": "m", "expansion_efficiency": "m YJ-1",
    "filled_steric_volume_change": "m3", "filled_thermosteric_volume_change": "m3",
    "filled_halosteric_volume_change": "m3", "filled_heat_content_change": "J", "filled_sea_level_equivalent": "m",
}
METHODS = {"sum", "mean"}
SHAPE = (3, 4)

udunits = ctypes.CDLL("libudunits2.so.0")
udunits.ut_read_xml.restype = ctypes.c_void_p
udunits.ut_parse.restype = ctypes.c_void_p
udunits.ut_parse.argtypes = [ctypes.c_void_p, ctypes.c_char_p, ctypes.c_int]
udunits.ut_set_error_message_handler.argtypes = [ctypes.c_void_p]
udunits.ut_set_error_message_handler(ctypes.cast(udunits.ut_ignore, ctypes.c_void_p))
SYSTEM = udunits.ut_read_xml(None)
assert SYSTEM, "UDUNITS-2 finds no database"

checks = 0

def check(condition, *what):
    global checks
    checks += 1
    if not condition:
        raise AssertionError(" ".join(str(part) for part in what))


def is_unit(text):
    return bool(udunits.ut_parse(SYSTEM, text.encode(), 0))


check(not is_unit("no_such_unit"), "UDUNITS reads anything")


def value_at(quantity, layer, places):
    """The formula of test_change.c; layer None is the whole column."""
    values = 1000.0 * (quantity + 1) + (0.0 if layer is None else 100.0 * (layer + 1)) + numpy.arange(places) + 0.1
    return numpy.ma.array(values, mask=numpy.arange(places) == 1)


def same(variable, values, shape, dtype):
    values = values.reshape(shape)
    got = variable[:]
    check(got.shape == values.shape, variable.name, "has the shape", got.shape)
    check((numpy.ma.getmaskarray(got) == numpy.ma.getmaskarray(values)).all(), variable.name, "is masked elsewhere")
    check((got.compressed() == values.compressed().astype(dtype)).all(), variable.name, got, values)


def is_known(name, salinity, remainder, filled):
    return ((salinity or not ("halosteric" in name or "remainder" in name or
                              ("steric" in name and "thermosteric" not in name)))
            and (remainder or "remainder" not in name) and (filled or "filled" not in name))


def check_map(file, name, unit, standard_name, layers, dims):
    variable = file.variables[name]
    check(variable.dtype == numpy.float32 and variable.units == unit, name, variable)
    check(variable.dimensions == (("layer",) if layers else ()) + dims, name, variable.dimensions)
    check(getattr(variable, "standard_name", None) == standard_name, name, "standard_name")
    check(variable.ancillary_variables == "column_flag" and variable.cell_measures == "area: cell_area", name)
    check(variable.filters()["zlib"] and variable.filters()["shuffle"], name, "is not compressed")
    index = list(MAPS).index(name[len("layer_"):] if layers else name)
    if layers:
        wanted = numpy.ma.concatenate([value_at(index, layer, 12) for layer in range(len(file.dimensions["layer"]))])
        same(variable, wanted, variable.shape, numpy.float32)
    else:
        same(variable, value_at(index, None, 12), SHAPE, numpy.float32)


def check_region(file, name, stem, unit, layers):
    variable = file.variables[name]
    check(variable.dtype == numpy.float64 and variable.units == unit, name, variable)
    check(variable.dimensions == (("region", "layer") if layers else ("region",)), name, variable.dimensions)
    check("region_name" in variable.coordinates.split(), name, "coordinates")
    index = list(REGIONS).index(stem)
    count = len(file.dimensions["layer"])
    if layers:
        wanted = numpy.ma.stack([value_at(index, layer, 2) for layer in range(count)], axis=1)
        same(variable, wanted, (2, count), numpy.float64)
    else:
        same(variable, value_at(index, None, 2), (2,), numpy.float64)


def check_names(file, salinity, remainder, filled, dims):
    """Exactly the variables promised, and nothing that is not known."""
    wanted = {"lat", "lon", "layer_depth", "layer_bounds", "column_flag", "cell_area"}
    layered = len(file.dimensions["layer"]) > 1
    for name, (unit, standard_name) in MAPS.items():
        if is_known(name, salinity, remainder, filled):
            wanted.add(name)
            check_map(file, name, unit, standard_name, False, dims)
            if layered:
                wanted.add("layer_" + name)
                check_map(file, "layer_" + name, unit, standard_name, True, dims)
    if "region" in file.dimensions:
        wanted.add("region_name")
        for stem, unit in REGIONS.items():
            if is_known(stem, salinity, remainder, filled):
                wanted.add("region_" + stem)
                check_region(file, "region_" + stem, stem, unit, False)
                if layered and stem != "area":
                    wanted.add("region_layer_" + stem)
                    check_region(file, "region_layer_" + stem, stem, unit, True)
    extra = set(file.variables) - wanted - {"lat_bounds", "lon_bounds", "column_depth", "column_bounds"}
    check(not extra and wanted <= set(file.variables), extra, wanted - set(file.variables))


def check_conventions(file):
    """What CF asks of any file."""
    names = set(file.variables)
    bounds = {v.bounds for v in file.variables.values() if "bounds" in v.ncattrs()}
    for name, variable in file.variables.items():
        for other in getattr(variable, "coordinates", "").split():
            check(other in names, name, "coordinates", other)
            check(set(file.variables[other].dimensions) <= set(variable.dimensions), name, "coordinates", other)
        for other in getattr(variable, "ancillary_variables", "").split():
            check(other in names, name, "ancillary_variables", other)
        if "cell_measures" in variable.ncattrs():
            measure, other = variable.cell_measures.split(": ")
            check(measure == "area" and set(file.variables[other].dimensions) <= set(variable.dimensions), name)
        words = getattr(variable, "cell_methods", "").replace(" where sea", "").split()
        for axis, method in zip(words[::2], words[1::2]):
            check(axis in ("depth:", "area:") and method in METHODS, name, "cell_methods", words)
        if "bounds" in variable.ncattrs():
            edges = file.variables[variable.bounds]
            check(edges.dimensions[:-1] == variable.dimensions, name, "bounds")
            check("units" not in edges.ncattrs() or edges.units == variable.units, name, "bounds' units")
            low, high = edges[:].min(axis=-1), edges[:].max(axis=-1)
            check((low <= variable[:]).all() and (variable[:] <= high).all(), name, "lies outside its bounds")
        if name not in bounds and name != "region_name":
            check(is_unit(variable.units), name, "has a unit that UDUNITS does not read:", variable.units)
        check(name in bounds or variable.long_name != "", name, "has no long_name")
        if name in file.dimensions:
            steps = numpy.diff(variable[:])
            check((steps > 0).all() or (steps < 0).all(), name, "is not monotonic")
            check("_FillValue" not in variable.ncattrs(), name, "is a coordinate with a fill value")
        for limit in ("valid_min", "flag_values", "_FillValue"):
            if limit in variable.ncattrs():
                check(numpy.asarray(getattr(variable, limit)).dtype == variable.dtype, name, limit, "of another type")
    for name in ("Conventions", "title", "summary", "keywords", "source", "history", "comment", "settings",
                 "geospatial_lat_min", "geospatial_lon_max", "geospatial_vertical_max"):
        check(name in file.ncattrs(), "no global attribute", name)
    check(file.Conventions == "CF-1.10, ACDD-1.3", file.Conventions)
    check("design, navigation or flood" in file.comment, file.comment)
    check(file.title == "Miradel Sea" and file.heat_capacity == 3991.86795711963, "attributes given later")


def check_flags(file, dims):
    flag = file.variables["column_flag"]
    check(flag.dtype == numpy.int8 and flag.dimensions == dims and flag.standard_name == "status_flag", flag)
    check(list(flag.flag_values) == list(range(7)), flag.flag_values)
    check(flag.flag_meanings.split() == ["complete", "sea_floor", "end_of_data", "unequal", "gap", "no_data",
                                         "outside_range"], flag.flag_meanings)
    check(flag[:].reshape(-1).tolist() == [0, None, 1, 2, 3, 4, 5, 6, 0, 0, 1, 1], flag[:])
    area = file.variables["cell_area"]
    check(area.units == "m2" and area.standard_name == "cell_area" and area.dimensions == dims, area)
    check((area[:].reshape(-1) == (1e11 + numpy.arange(12)).astype(numpy.float32)).all(), area[:])


def whole(name, salinity, remainder, filled, dims):
    with netCDF4.Dataset(os.path.join(FOLDER, name)) as file:
        check(file.data_model == "NETCDF4", file.data_model)
        check_names(file, salinity, remainder, filled, dims)
        check_conventions(file)
        check_flags(file, dims)
        return {key: file.variables[key][:] for key in file.variables}, {key: file.getncattr(key)
                                                                         for key in file.ncattrs()}


values, attributes = whole("regular.nc", True, False, True, ("lat", "lon"))
check(values["lon"].tolist() == [165, 175, 185, 195], values["lon"])
check(values["lon_bounds"].tolist() == [[160, 170], [170, 180], [180, 190], [190, 200]], values["lon_bounds"])
check(values["lat_bounds"].tolist() == [[-15, -5], [-5, 5], [5, 15]], values["lat_bounds"])
check(values["layer_bounds"].tolist() == [[0, 700], [700, 2000], [2000, 5432.5]], values["layer_bounds"])
check(values["layer_depth"].tolist() == [350, 1350, 3716.25], values["layer_depth"])
check(values["column_bounds"].tolist() == [0, 5432.5], values["column_bounds"])
check(list(values["region_name"]) == ["Miradel Basin", "Outer Åland Shelf"], values["region_name"])
check(attributes["history"].startswith("2031-05-04T12:00:00Z: stericol change --earlier a.nc"), attributes["history"])
check(attributes["date_created"] == "2031-05-04T12:00:00Z" and attributes["ocean_area"] == 3.625e14, attributes)
check(attributes["earlier_epoch"] == "2005-01..2009-12" and attributes["time_coverage_end"] == "2020-01-01", attributes)
check((attributes["geospatial_lon_min"], attributes["geospatial_lon_max"]) == (160, 200), attributes)
check((attributes["geospatial_lat_min"], attributes["geospatial_lat_max"]) == (-15, 15), attributes)
check(attributes["geospatial_vertical_max"] == 5432.5, attributes)

values, attributes = whole("heat_alone.nc", False, False, False, ("lat", "lon"))
check("lat_bounds" not in values and "region_name" not in values, values.keys())
check(values["layer_bounds"].tolist() == [[2000, 5432.5]], values["layer_bounds"])
for absent in ("date_created", "earlier_epoch", "ocean_area", "time_coverage_start"):
    check(absent not in attributes, absent)

values, attributes = whole("curvilinear.nc", True, True, False, ("y", "x"))
check(values["lat"].shape == SHAPE and values["lat_bounds"].shape == SHAPE + (4,), "curvilinear shapes")
check(bool(values["lat"].mask[0, 1]) and values["lat"].count() == 11, "a cell without a position")
check("column_depth" not in values, "two layers with a gap are no column")
with netCDF4.Dataset(os.path.join(FOLDER, "curvilinear.nc")) as file:
    check(file.variables["layer_steric_height_change"].coordinates == "lat lon layer_depth", "coordinates")
    check(file.variables["column_flag"].coordinates == "lat lon", "coordinates")

print(checks, "checks hold")
