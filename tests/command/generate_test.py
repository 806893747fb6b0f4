#!/usr/bin/env python3
"""Scenes: the same charges from every compiler, and physically what they say they are."""
import hashlib
import unittest

import h5py
import numpy as np

from command_case import E_CHARGE, CommandCase, component, vector

COUNT, SEED = 3000, 7
# SHA-256 of places and momenta of all species (little-endian doubles, x y z interleaved) at COUNT and SEED, first 16 digits. Made by
# this test; equal for GCC 12 -O0, -O2, -O3 -march=native and Clang 14 -O3 -march=native.
CHECKSUMS = {
    "electron_bunch": "dcdbacb6eb5344ea",
    "proton_bunch": "72690d4e6263a6a0",
    "ion_cloud": "6179fe3c4aa92a89",
    "crystallite": "2b9db78cc5a3fd26",
    "droplets": "079f8e6703e05315",
    "cube": "c21d011c89782281",
    "shell": "f5b442da3bd78b83",
    "line": "ffbb6c357ef3e1c8",
    "plane": "1e7a05557c5ae182",
    "droplets+signs": "e8fa9d089d50119b",
    "cube+signs": "a6486a8ceb7e4a4b",
}


def species_of(path):
    with h5py.File(path, "r") as file:
        found = {}
        for name, group in file["data/0/particles"].items():
            found[name] = {
                "places": vector(group["position"]),
                "momenta": vector(group["momentum"]) if "momentum" in group else None,
                "charge": component(group["charge"]),
                "mass": component(group["mass"]),
                "weighting": component(group["weighting"]) if "weighting" in group else np.ones(len(component(group["charge"]))),
                "id": component(group["id"]),
            }
        return found


def checksum(species):
    digest = hashlib.sha256()
    for name in sorted(species):
        for column in ("places", "momenta"):
            if species[name][column] is not None:
                digest.update(np.ascontiguousarray(species[name][column], dtype="<f8").tobytes())
    return digest.hexdigest()[:16]


class Scenes(CommandCase):
    def make(self, scene, *arguments, count=COUNT, seed=SEED, name="s.h5"):
        self.run_farsum("generate", scene, name, "--count", count, "--seed", seed, "--overwrite", *arguments)
        return species_of(self.path(name))

    def test_same_bits_from_every_build(self):
        found = {}
        for scene in CHECKSUMS:
            name, _, signs = scene.partition("+")
            found[scene] = checksum(self.make(name, *(["--both-signs"] if signs else [])))
        self.assertEqual(found, CHECKSUMS)

    def test_another_seed_gives_other_charges(self):
        for scene in CHECKSUMS:
            name = scene.partition("+")[0]
            other = checksum(self.make(name, seed=SEED + 1))
            (self.assertEqual if name == "crystallite" else self.assertNotEqual)(other, CHECKSUMS[name], name)

    def test_count_is_exact_ids_run_on_and_places_are_distinct(self):
        for scene in CHECKSUMS:
            name = scene.partition("+")[0]
            for count in (0, 1, 2, COUNT):
                species = self.make(name, count=count)
                ids = np.concatenate([s["id"] for s in species.values()]) if species else np.array([])
                self.assertEqual(sorted(ids), list(range(count)), name)
            places = np.concatenate([s["places"] for s in species.values()])
            self.assertEqual(len(np.unique(places, axis=0)), COUNT, name)

    def test_electron_bunch_has_its_charge_and_size_and_is_at_rest(self):
        bunch = self.make("electron_bunch")["electron"]
        self.assertAlmostEqual((bunch["charge"] * bunch["weighting"]).sum() / -200e-12, 1, 12)
        np.testing.assert_allclose(bunch["places"].std(axis=0), [0.3e-3, 0.3e-3, 3e-3], rtol=0.05)
        speed = np.abs(bunch["momenta"].mean(axis=0)) / bunch["mass"][0] / 299792458.0
        self.assertLess(speed.max(), 1e-3)

    def test_halo_is_a_twentieth_and_four_times_as_wide(self):
        bunch = self.make("proton_bunch")
        core, halo = bunch["proton_core"], bunch["proton_halo"]
        self.assertEqual(len(halo["places"]) * 20, COUNT)
        self.assertAlmostEqual(halo["places"][:, 0].std() / core["places"][:, 0].std(), 4, delta=0.8)

    def test_ion_cloud_is_a_spheroid_of_the_density_of_its_trap(self):
        ions = self.make("ion_cloud", count=20000)["calcium_40"]["places"]
        half = np.abs(ions).max(axis=0)
        self.assertAlmostEqual(half[2] / half[0], 2, delta=0.1)
        radius = (20000 / (4 / 3 * np.pi * 2 * 5.206e13)) ** (1 / 3)  # m, from the density in the scene's comment
        self.assertAlmostEqual(half[0] / radius, 1, delta=0.05)

    def test_crystallite_alternates_and_is_neutral(self):
        grain = self.make("crystallite", count=1000)
        self.assertEqual(len(grain["sodium"]["places"]), 500)
        self.assertEqual(len(grain["chloride"]["places"]), 500)
        first = grain["sodium"]["places"][0]
        nearest = np.sqrt(((grain["chloride"]["places"] - first) ** 2).sum(axis=1)).min()
        self.assertAlmostEqual(nearest / 2.8201e-10, 1, 12)

    def test_shapes_lie_where_they_should(self):
        self.assertAlmostEqual(np.abs(np.linalg.norm(self.make("shell")["positive"]["places"], axis=1) / 5e-3 - 1).max(), 0, 14)
        self.assertEqual(np.abs(self.make("line")["positive"]["places"][:, 1:]).max(), 0)
        self.assertEqual(np.abs(self.make("plane")["positive"]["places"][:, 2]).max(), 0)
        cube = self.make("cube")["positive"]["places"]
        self.assertGreaterEqual(cube.min(), 0)
        self.assertLessEqual(cube.max(), 0.01)
        self.assertAlmostEqual(cube.mean() / 0.005, 1, delta=0.03)

    def test_both_signs_are_neutral(self):
        species = self.make("cube", "--both-signs")
        self.assertEqual(species["positive"]["charge"][0], E_CHARGE)
        self.assertEqual(species["negative"]["charge"][0], -E_CHARGE)
        self.assertEqual(len(species["positive"]["places"]), len(species["negative"]["places"]))

    def test_count_may_be_written_as_a_power_of_ten(self):
        self.run_farsum("generate", "cube", "p.h5", "--count", "1e2")
        self.assertEqual(len(species_of(self.path("p.h5"))["positive"]["places"]), 100)

    def test_existing_file_is_kept_without_overwrite(self):
        self.make("cube", count=10, name="k.h5")
        with open(self.path("k.h5"), "rb") as file:
            before = file.read()
        done = self.run_farsum("generate", "cube", "k.h5", "--count", 20, expect=1)
        self.assertIn("--overwrite", done.err)
        with open(self.path("k.h5"), "rb") as file:
            self.assertEqual(file.read(), before)


if __name__ == "__main__":
    unittest.main()
