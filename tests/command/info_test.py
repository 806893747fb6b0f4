#!/usr/bin/env python3
"""info: counts, charge, motion and what stands in the way of a solve."""
import os
import unittest

import h5py
import numpy as np

from command_case import E_CHARGE, CommandCase, cloud, write_file


class Info(CommandCase):
    def test_counts_charge_extent_and_motion(self):
        self.run_farsum("generate", "proton_bunch", "in.h5", "--count", 2000)
        done = self.run_farsum("info", "in.h5", "--json", "report.json")
        for word in ("2 000 charges", "proton_core", "proton_halo", "1 900", "extent", "mean beta gamma", "801.088 pC", "openPMD 1.1.0"):
            self.assertIn(word, done.out)
        report = self.report()
        self.assertEqual(report["count"], 2000)
        self.assertEqual([s["name"] for s in report["info"]["species"]], ["proton_core", "proton_halo"])
        self.assertAlmostEqual(report["total_charge"]["value"] / (5e9 * E_CHARGE), 1, 12)

    def test_lost_particles_are_counted(self):
        places, charges = cloud(30)
        status = np.ones(30, dtype=int)
        status[:4] = 3
        write_file(self.path("in.h5"), {"0": {"ions": dict(places=places, charge=charges, status=status)}})
        done = self.run_farsum("info", "in.h5", "--json", "report.json")
        self.assertIn("26 live, 4 lost", done.out.replace("  ", " "))
        self.assertEqual((self.report()["count"], self.report()["info"]["lost"]), (26, 4))

    def test_iterations_are_listed_in_numeric_order(self):
        places, charges = cloud(10)
        write_file(self.path("in.h5"), {step: {"ions": dict(places=places, charge=charges)} for step in ("10", "9", "100")})
        done = self.run_farsum("info", "in.h5", "--json", "report.json")
        self.assertIn("9, 10, 100", done.out)
        self.assertIn("--iteration", done.out)
        self.assertEqual(self.report()["info"]["iterations"], ["9", "10", "100"])
        self.assertIn("10 charges", self.run_farsum("info", "in.h5", "--iteration", "9").out)

    def test_missing_charge_is_told(self):
        places, _ = cloud(10)
        write_file(self.path("in.h5"), {"0": {"dust": dict(places=places, charge=None)}})
        self.assertRegex(self.run_farsum("info", "in.h5").out, "missing +.*charge")

    def test_strict_passes_own_files(self):
        self.run_farsum("generate", "ion_cloud", "in.h5", "--count", 500)
        self.solve("in.h5", "out.h5")
        for name in ("in.h5", "out.h5"):
            self.assertIn("0 errors", self.run_farsum("info", name, "--strict").out)

    def test_strict_finds_faults(self):
        self.run_farsum("generate", "cube", "in.h5", "--count", 50)
        with h5py.File(self.path("in.h5"), "a") as file:
            file["data/0/particles/positive/position"].attrs["unitDimension"] = np.zeros(7)
        done = self.run_farsum("info", "in.h5", "--strict", expect=1)
        self.assertIn("in.h5", done.err)

    def test_sample_beams_of_other_authors(self):
        folder = os.environ.get("FARSUM_SAMPLE_BEAMS")
        if not folder:
            self.skipTest("FARSUM_SAMPLE_BEAMS names no folder")
        for name, arguments, live, charge in (("beam_a_two_screens_998.h5", ("--iteration", "1"), 992, -9.92992e-11),
                                              ("beam_b_fixed_z_10000.h5", (), 10000, -7.7e-11),
                                              ("beam_c_root_group_10000.h5", (), 10000, -1e-11)):
            path = os.path.join(folder, name)
            self.run_farsum("info", path, *arguments, "--json", "report.json")
            report = self.report()
            self.assertEqual(report["count"], live, name)
            self.assertAlmostEqual(report["total_charge"]["value"] / charge, 1, 5, name)
            done = self.solve(path, "out.h5", *arguments, "--overwrite", expect=1)
            self.assertRegex(done.err, "--as-snapshot|--static")
            self.solve(path, "out.h5", *arguments, "--as-snapshot", "--static", "--overwrite")
            self.run_farsum("verify", path, "out.h5")


if __name__ == "__main__":
    unittest.main()
