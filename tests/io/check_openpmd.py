#!/usr/bin/env python3
"""Reads an openPMD particle file with h5py, independently of the C++ reader, and holds it against our list of semantic rules.

Usage: check_openpmd.py RESULT.h5 [INPUT.h5]
Prints one line a finding; exit status 0 = none, 1 = some. With INPUT.h5 the rows of the result must be rows of the input, bit for bit.
"""
import re
import sys

import h5py
import numpy as np

LENGTH, CHARGE, NONE = (1, 0, 0, 0, 0, 0, 0), (0, 0, 1, 1, 0, 0, 0), (0,) * 7
# Record -> dimension, components, macroWeighted, weightingPower (None: either).
KNOWN = {
    "position": (LENGTH, "xyz", 0, 0.0),
    "positionOffset": (LENGTH, "xyz", 0, 0.0),
    "momentum": ((1, 1, -1, 0, 0, 0, 0), "xyz", None, 1.0),
    "charge": (CHARGE, "", None, 1.0),
    "mass": ((0, 1, 0, 0, 0, 0, 0), "", None, 1.0),
    "weighting": (NONE, "", 1, 1.0),
    "id": (NONE, "", 0, 0.0),
    "potential": ((2, 1, -3, -1, 0, 0, 0), "", 0, 0.0),
    "electricField": ((1, 1, -3, -1, 0, 0, 0), "xyz", 0, 0.0),
    "force": ((1, 1, -2, 0, 0, 0, 0), "xyz", 1, 1.0),
    "potentialEnergy": ((2, 1, -2, 0, 0, 0, 0), "", 1, 1.0),
}
ROOT = {"openPMD": "1.1.0", "basePath": "/data/%T/", "iterationEncoding": "groupBased", "iterationFormat": "/data/%T/",
        "particlesPath": "particles/", "software": None, "softwareVersion": None, "date": None, "author": None}

findings = []


def find(item, message):
    findings.append(f"{item}: {message}")


def text(node, name):
    """A text attribute, which must be of fixed length and scalar."""
    if name not in node.attrs:
        find(node.name, f"attribute {name} is missing")
        return ""
    identity = node.attrs.get_id(name)
    kind = identity.get_type()
    if not isinstance(kind, h5py.h5t.TypeStringID) or kind.is_variable_str() or identity.shape != ():
        find(node.name, f"attribute {name} is no scalar text of fixed length")
    value = node.attrs[name]
    return value.decode() if isinstance(value, bytes) else str(value)


def number(node, name, kind, shape=()):
    """A numeric attribute of exactly this type and shape."""
    if name not in node.attrs:
        find(node.name, f"attribute {name} is missing")
        return None
    identity = node.attrs.get_id(name)
    if identity.dtype != np.dtype(kind) or identity.shape != shape:
        find(node.name, f"attribute {name} is {identity.dtype}{identity.shape}, expected {np.dtype(kind)}{shape}")
    return node.attrs[name]


def is_component(node):
    return isinstance(node, h5py.Dataset) or "value" in node.attrs


def values_of(node, rows):
    """SI values of a component; checks what belongs to every component."""
    unit = number(node, "unitSI", "<f8")
    if isinstance(node, h5py.Dataset):
        if node.shape != (rows,):
            find(node.name, f"shape {node.shape}, expected ({rows},)")
        values = node[...]
    else:
        shape = number(node, "shape", "<u8", (1,))
        if shape is not None and int(shape[0]) != rows:
            find(node.name, f"shape {shape}, expected {rows}")
        values = np.full(rows, node.attrs["value"])
    if not np.all(np.isfinite(values)):
        find(node.name, "holds values that are not finite")
    return values if values.dtype.kind in "iu" or unit is None else values * unit


def check_record(name, node, rows):
    if not re.fullmatch(r"\w+", name):
        find(node.name, "bad name")
    dimension = number(node, "unitDimension", "<f8", (7,))
    number(node, "timeOffset", "<f8")
    weighted, power = number(node, "macroWeighted", "<u4"), number(node, "weightingPower", "<f8")
    known = KNOWN.get(name)
    if known:
        if dimension is not None and tuple(dimension) != known[0]:
            find(node.name, f"dimension {tuple(dimension)}, expected {known[0]}")
        if known[2] is not None and weighted != known[2] or power != known[3]:
            find(node.name, f"macroWeighted {weighted}, weightingPower {power}")
        if (known[1] == "") != is_component(node):
            find(node.name, "scalar and vector are confused")
    if is_component(node):
        return values_of(node, rows)
    if known and sorted(node) != list(known[1]):
        find(node.name, f"components {sorted(node)}")
    return {axis: values_of(node[axis], rows) for axis in node}


def check_patches(group, places, rows):
    counts, starts = group["numParticles"][...], group["numParticlesOffset"][...]
    if counts.dtype != np.uint64 or counts.sum() != rows:
        find(group.name, f"numParticles {counts} for {rows} particles")
    for axis in "xyz":
        low, size = group["offset"][axis][...], group["extent"][axis][...]
        for i, (count, start) in enumerate(zip(counts.astype(int), starts.astype(int))):
            part = places[axis][start:start + count]
            if count and not (np.all(part >= low[i]) and np.all(part < low[i] + size[i])):
                find(group.name, f"patch {i} does not enclose its particles along {axis}")
    for name in ("offset", "extent"):
        if tuple(group[name].attrs["unitDimension"]) != LENGTH:
            find(group[name].name, "unitDimension is no length")


def macro_charge(records, group):
    charge = records["charge"]
    if "weighting" in records and not group["charge"].attrs["macroWeighted"]:
        charge = charge * records["weighting"]
    return charge


def check_results(group, records):
    """force = Q E and potentialEnergy = Q phi / 2, up to rounding."""
    charge = macro_charge(records, group)
    if "force" in records and "electricField" in records:
        for axis in "xyz":
            if not np.allclose(records["force"][axis], charge * records["electricField"][axis], rtol=1e-14, atol=0):
                find(group.name, f"force {axis} is not charge times electricField")
    if "potentialEnergy" in records and "potential" in records:
        if not np.allclose(records["potentialEnergy"], 0.5 * charge * records["potential"], rtol=1e-14, atol=0):
            find(group.name, "potentialEnergy is not half of charge times potential")


def check_species(group):
    if not re.fullmatch(r"\w+", group.name.split("/")[-1]):
        find(group.name, "bad name")
    rows = group["position/x"].shape[0]
    records = {name: check_record(name, node, rows) for name, node in group.items() if name != "particlePatches"}
    for name in ("position", "positionOffset", "charge", "id"):
        if name not in records:
            find(group.name, f"record {name} is missing")
    places = {axis: records["position"][axis] + records["positionOffset"][axis] for axis in "xyz"}
    if records["id"].dtype != np.uint64 or np.unique(records["id"]).size != rows:
        find(group.name, "ids are not unique unsigned 64-bit integers")
    if "particlePatches" in group:
        check_patches(group["particlePatches"], places, rows)
    else:
        find(group.name, "particlePatches are missing")
    check_results(group, records)
    return records, places


def check_file(path):
    """All species of a file as {iteration/name: (records, places)}."""
    species = {}
    with h5py.File(path, "r") as file:
        for name, expected in ROOT.items():
            value = text(file, name)
            if expected is not None and value != expected:
                find("/", f"{name} is '{value}', expected '{expected}'")
        number(file, "openPMDextension", "<u4")
        for iteration, group in file["data"].items():
            if not re.fullmatch(r"0|[1-9][0-9]*", iteration):
                find(group.name, "bad iteration name")
            for name in ("time", "dt", "timeUnitSI"):
                number(group, name, "<f8")
            for name, node in group["particles"].items():
                species[name] = check_species(node)
    if not species:
        find(path, "holds no species")
    return species


def compare(result, source):
    """Rows of the result against the rows of the input with the same id."""
    for name, (records, places) in result.items():
        if name not in source:
            find(name, "is not in the input")
            continue
        inputs, origin = source[name]
        rows = {int(identity): i for i, identity in enumerate(inputs["id"])}
        order = np.array([rows.get(int(identity), -1) for identity in records["id"]], dtype=int)
        if np.any(order < 0) or np.any(np.diff(order) <= 0):
            find(name, "rows are not rows of the input in its order")
            continue
        for axis in "xyz":
            if not np.array_equal(places[axis], origin[axis][order]):
                find(name, f"places along {axis} differ from the input")
        for record in ("charge", "weighting", "mass"):
            if record in inputs and not np.array_equal(records.get(record), inputs[record][order]):
                find(name, f"{record} differs from the input")


def main():
    if len(sys.argv) not in (2, 3):
        sys.exit(__doc__)
    result = check_file(sys.argv[1])
    if len(sys.argv) == 3:
        compare(result, check_file(sys.argv[2]))
    for finding in findings:
        print(finding)
    print(f"{sys.argv[1]}: {len(result)} species, {len(findings)} findings")
    return 1 if findings else 0


if __name__ == "__main__":
    sys.exit(main())
