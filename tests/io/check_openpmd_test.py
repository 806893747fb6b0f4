#!/usr/bin/env python3
"""Usage: check_openpmd_test.py WRITE_SAMPLE. The library's files pass check_openpmd.py, and files with one fault each do not."""
import os
import shutil
import subprocess
import sys
import tempfile

import h5py
import numpy as np

CHECK = os.path.join(os.path.dirname(os.path.abspath(__file__)), "check_openpmd.py")
IONS = "data/0/particles/ions"


def replace(file, path, values):
    attributes = dict(file[path].attrs)
    del file[path]
    file[path] = values
    for name, value in attributes.items():
        file[path].attrs[name] = value


FAULTS = {
    "wrong sign of the force": lambda f: f[IONS + "/force/x"].write_direct(-f[IONS + "/force/x"][...]),
    "swapped components": lambda f: f[IONS].move("force/y", "force/w"),
    "energy without the half": lambda f: f[IONS + "/potentialEnergy"].write_direct(2 * f[IONS + "/potentialEnergy"][...]),
    "not a number": lambda f: f[IONS + "/potential"].__setitem__(3, np.nan),
    "short record": lambda f: replace(f, IONS + "/potential", np.ones(7)),
    "wrong dimension": lambda f: f[IONS + "/potential"].attrs.__setitem__("unitDimension", np.zeros(7)),
    "twin ids": lambda f: replace(f, IONS + "/id", np.zeros(1000, dtype=np.uint64)),
    "wrong shape": lambda f: f[IONS + "/mass"].attrs.__setitem__("shape", np.array([1], dtype=np.uint64)),
    "text of variable length": lambda f: f.attrs.__setitem__("software", "farsum"),
    "moved particle": lambda f: f[IONS + "/position/x"].__setitem__(5, 0.25),
}


def check(*paths):
    return subprocess.run([sys.executable, CHECK, *paths], capture_output=True, text=True)


def main():
    failed = 0
    with tempfile.TemporaryDirectory() as folder:
        source, result, broken = (os.path.join(folder, name) for name in ("in.h5", "out.h5", "broken.h5"))
        subprocess.run([sys.argv[1], source, result], check=True)
        good = check(result, source)
        print(good.stdout + good.stderr)
        failed += good.returncode != 0
        for name, fault in FAULTS.items():
            shutil.copy(result, broken)
            with h5py.File(broken, "r+") as file:
                fault(file)
            if check(broken, source).returncode != 1:
                print(f"not noticed: {name}")
                failed += 1
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
