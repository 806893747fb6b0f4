"""Base of the tests of the command: runs it, makes input files, sums exactly.

The command's path is in FARSUM_COMMAND. Input files are written with h5py alone and results are read with h5py alone, so that no code
of the project stands on both sides of a check.
"""
import json
import math
import os
import shutil
import subprocess
import tempfile
import unittest

import h5py
import numpy as np

COMMAND = os.environ.get("FARSUM_COMMAND", "farsum")
E_CHARGE = 1.602176634e-19  # C, exact in the SI
EPS0 = 8.8541878188e-12  # F/m, CODATA 2022
COULOMB = np.longdouble(1) / (4 * np.longdouble(math.pi) * np.longdouble(EPS0))
LIGHT = 299792458.0

DIMENSIONS = {
    "position": (1, 0, 0, 0, 0, 0, 0),
    "positionOffset": (1, 0, 0, 0, 0, 0, 0),
    "momentum": (1, 1, -1, 0, 0, 0, 0),
    "charge": (0, 0, 1, 1, 0, 0, 0),
    "mass": (0, 1, 0, 0, 0, 0, 0),
    "weighting": (0, 0, 0, 0, 0, 0, 0),
    "id": (0, 0, 0, 0, 0, 0, 0),
    "particleStatus": (0, 0, 0, 0, 0, 0, 0),
    "time": (0, 0, 1, 0, 0, 0, 0),
}


def text(value):
    """A fixed-length string attribute."""
    return np.bytes_(value)


def write_root(file):
    for name, value in (("openPMD", "1.1.0"), ("basePath", "/data/%T/"), ("iterationEncoding", "groupBased"),
                        ("iterationFormat", "/data/%T/"), ("particlesPath", "particles/")):
        file.attrs[name] = text(value)
    file.attrs["openPMDextension"] = np.uint32(0)


def record_attributes(target, name, macro=0, power=0.0):
    target.attrs["unitDimension"] = np.array(DIMENSIONS[name], dtype=np.float64)
    target.attrs["timeOffset"] = 0.0
    target.attrs["macroWeighted"] = np.uint32(macro)
    target.attrs["weightingPower"] = float(power)


def write_scalar(group, name, values, count, power=0.0, macro=0):
    """A scalar record: constant when `values` is a number."""
    if np.ndim(values) == 0:
        item = group.create_group(name)
        item.attrs["value"] = values
        item.attrs["shape"] = np.array([count], dtype=np.uint64)
    else:
        item = group.create_dataset(name, data=values)
    record_attributes(item, name, macro, power)
    item.attrs["unitSI"] = 1.0


def write_vector(group, name, values, count, power=0.0):
    record = group.create_group(name)
    record_attributes(record, name, 0, power)
    for axis in range(3):
        column = values[:, axis]
        if name == "positionOffset":
            item = record.create_group("xyz"[axis])
            item.attrs["value"] = 0.0
            item.attrs["shape"] = np.array([count], dtype=np.uint64)
        else:
            item = record.create_dataset("xyz"[axis], data=column)
        item.attrs["unitSI"] = 1.0


def write_species(particles, name, places, charge, weighting=None, momentum=None, mass=None, ids=None, status=None, times=None):
    places = np.asarray(places, dtype=np.float64).reshape(-1, 3)
    count = len(places)
    group = particles.create_group(name)
    write_vector(group, "position", places, count)
    write_vector(group, "positionOffset", places, count)
    if charge is not None:
        write_scalar(group, "charge", charge, count, 1.0)
    if weighting is not None:
        write_scalar(group, "weighting", weighting, count, 1.0, 1)
    if momentum is not None:
        write_vector(group, "momentum", np.asarray(momentum, dtype=np.float64), count, 1.0)
    if mass is not None:
        write_scalar(group, "mass", mass, count, 1.0)
    if ids is not None:
        write_scalar(group, "id", np.asarray(ids, dtype=np.uint64), count)
    if status is not None:
        write_scalar(group, "particleStatus", np.asarray(status, dtype=np.int32), count)
    if times is not None:
        write_scalar(group, "time", np.asarray(times, dtype=np.float64), count)
    return group


def write_file(path, iterations):
    """iterations: {name: {species: arguments of write_species}}."""
    with h5py.File(path, "w") as file:
        write_root(file)
        for iteration, species in iterations.items():
            group = file.create_group("data/" + iteration)
            group.attrs["time"] = 0.0
            group.attrs["dt"] = 0.0
            group.attrs["timeUnitSI"] = 1.0
            particles = group.create_group("particles")
            for name, arguments in species.items():
                write_species(particles, name, **arguments)


def cloud(count, seed=1, size=1e-3):
    """Places in a cube and charges of both signs, C."""
    random = np.random.default_rng(seed)
    return size * random.random((count, 3)), E_CHARGE * random.choice([-1.0, 1.0, 2.0], count)


def exact_sums(targets, sources, charges):
    """Potential in V and field in V/m in extended precision; a source at the place of a target is left out."""
    targets, sources = np.asarray(targets, np.longdouble), np.asarray(sources, np.longdouble)
    charges = np.asarray(charges, np.longdouble)
    potential = np.zeros(len(targets), np.longdouble)
    field = np.zeros((len(targets), 3), np.longdouble)
    for i, place in enumerate(targets):
        difference = place - sources
        square = (difference**2).sum(axis=1)
        other = square > 0
        inverse = 1 / np.sqrt(square[other])
        potential[i] = (charges[other] * inverse).sum()
        field[i] = (difference[other] * (charges[other] * inverse**3)[:, None]).sum(axis=0)
    return COULOMB * potential, COULOMB * field


def relative_rms(found, exact):
    difference = np.asarray(found, np.longdouble) - exact
    return float(np.sqrt((difference**2).sum() / (np.asarray(exact)**2).sum()))


def component(item):
    """Values of a data set or of a constant component."""
    if isinstance(item, h5py.Dataset):
        return item[:]
    return np.full(int(np.ravel(item.attrs["shape"])[0]), item.attrs["value"])


def vector(group):
    return np.stack([component(group[axis]) for axis in "xyz"], axis=1)


def data_sets(path):
    """{name: bytes} of every data set of a file."""
    found = {}

    def visit(name, item):
        if isinstance(item, h5py.Dataset):
            found[name] = (item.dtype.str, item.shape, item[()].tobytes())

    with h5py.File(path, "r") as file:
        file.visititems(visit)
    return found


class CommandCase(unittest.TestCase):
    def setUp(self):
        self.folder = tempfile.mkdtemp(prefix="farsum-test-")
        self.addCleanup(self.remove_folder)

    def remove_folder(self):
        for folder, folders, _ in os.walk(self.folder):
            for name in folders:
                os.chmod(os.path.join(folder, name), 0o700)
        shutil.rmtree(self.folder, ignore_errors=True)

    def path(self, name):
        return os.path.join(self.folder, name)

    def run_farsum(self, *arguments, expect=0, **options):
        """Runs the command in the test's folder and checks its exit status; a failure must be one line on standard error."""
        done = subprocess.run([COMMAND, *map(str, arguments)], cwd=self.folder, stdout=subprocess.PIPE, stderr=subprocess.PIPE,
                              stdin=subprocess.DEVNULL, timeout=240, **options)
        done.out = done.stdout.decode("utf-8", "replace")
        done.err = done.stderr.decode("utf-8", "replace")
        self.assertEqual(done.returncode, expect, f"farsum {arguments}\n{done.out}\n{done.err}")
        if expect:
            self.assertRegex(done.err, r"\Afarsum: .+\n\Z", arguments)
            self.assertEqual(done.err.count("\n"), 1, done.err)
        return done

    def solve(self, source, result="result.h5", *arguments, **options):
        return self.run_farsum("solve", source, "-o", result, *arguments, **options)

    def report(self, name="report.json"):
        with open(self.path(name), encoding="utf-8") as file:
            return json.load(file)

    def write_cloud(self, name="in.h5", count=200, seed=1, **more):
        places, charges = cloud(count, seed)
        write_file(self.path(name), {"0": {"ions": dict(places=places, charge=charges, **more)}})
        return places, charges

    def assert_no_leftovers(self, *expected):
        """The folder holds these names and no temporary files."""
        self.assertEqual(sorted(os.listdir(self.folder)), sorted(expected))
