#!/usr/bin/env python3
"""verify: holds good results, finds changed ones, and matches rows by id."""
import unittest

import h5py
import numpy as np

from command_case import CommandCase


class Verify(CommandCase):
    def setUp(self):
        super().setUp()
        self.run_farsum("generate", "proton_bunch", "in.h5", "--count", 2000)
        self.solve("in.h5", "out.h5", "--json", "report.json")

    def change(self, item, row, factor=None, value=None):
        with h5py.File(self.path("out.h5"), "a") as file:
            data = file["data/0/particles/" + item]
            data[row] = data[row] * factor if value is None else value

    def largest_field_row(self):
        with h5py.File(self.path("out.h5"), "r") as file:
            field = file["data/0/particles/proton_core/electricField"]
            return int(np.argmax(sum(field[axis][:] ** 2 for axis in "xyz")))

    def refused(self, *words, arguments=()):
        done = self.run_farsum("verify", "in.h5", "out.h5", *arguments, "--json", "check.json", expect=3)
        for word in ("out.h5", *words):
            self.assertIn(word, done.err)
        self.assertEqual(self.report("check.json")["failure"]["code"], "accuracy_not_reached")

    def test_good_result_holds(self):
        done = self.run_farsum("verify", "in.h5", "out.h5", "--json", "check.json")
        self.assertRegex(done.out.splitlines()[0], r"\A2 000 results hold; field error .* \(asked 1e-6\), measured at 2 ?000 charges\Z")
        check, solved = self.report("check.json"), self.report()
        self.assertIs(check["error"]["met"], True)
        self.assertAlmostEqual(check["energy"]["value"] / solved["energy"]["value"], 1, 9)
        self.assertAlmostEqual(check["error"]["field_rms"] / solved["error"]["field_rms"], 1, 1)

    def test_more_samples(self):
        self.run_farsum("verify", "in.h5", "out.h5", "--samples", 100000, "--json", "check.json")
        self.assertEqual(self.report("check.json")["error"]["samples"], 2000)

    def test_stricter_tolerance_is_not_met(self):
        self.solve("in.h5", "out.h5", "--tolerance", "1e-2", "--method", "tree", "--overwrite")
        self.refused("1e-13", arguments=("--tolerance", "1e-13"))

    def test_one_changed_field_value_among_the_checked(self):
        self.change("proton_core/electricField/x", self.largest_field_row(), 1.001)
        self.refused("tolerance")

    def test_one_changed_value_anywhere_with_all_checked(self):
        self.change("proton_halo/electricField/z", 17, 1.01)
        self.refused("tolerance", arguments=("--samples", 2000))

    def test_changed_potential_does_not_add_up(self):
        self.change("proton_core/potential", 1234, 1.0001)
        self.refused("potential")

    def test_swapped_components(self):
        with h5py.File(self.path("out.h5"), "a") as file:
            group = file["data/0/particles/proton_core/electricField"]
            x, y = group["x"][:], group["y"][:]
            group["x"][:], group["y"][:] = y, x
        self.refused("field")

    def test_wrong_sign(self):
        with h5py.File(self.path("out.h5"), "a") as file:
            data = file["data/0/particles/proton_halo/electricField/y"]
            data[:] = -data[:]
        self.refused("field")

    def test_not_a_number(self):
        self.change("proton_core/potential", 3, value=np.nan)
        done = self.run_farsum("verify", "in.h5", "out.h5", expect=1)
        self.assertIn("potential", done.err)

    def test_rows_are_matched_by_id(self):
        with h5py.File(self.path("in.h5"), "a") as file:
            order = np.random.default_rng(5).permutation(1900)
            for group in ("position", "momentum"):
                for axis in "xyz":
                    data = file[f"data/0/particles/proton_core/{group}/{axis}"]
                    data[:] = data[:][order]
            data = file["data/0/particles/proton_core/id"]
            data[:] = data[:][order]
        self.run_farsum("verify", "in.h5", "out.h5")

    def test_another_input_is_noticed(self):
        self.run_farsum("generate", "proton_bunch", "in.h5", "--count", 2000, "--seed", 2, "--overwrite")
        self.refused("tolerance")
        self.run_farsum("generate", "proton_bunch", "in.h5", "--count", 2100, "--overwrite")
        self.run_farsum("verify", "in.h5", "out.h5", expect=1)
        self.run_farsum("generate", "cube", "in.h5", "--count", 2000, "--overwrite")
        self.run_farsum("verify", "in.h5", "out.h5", expect=1)

    def test_file_without_results(self):
        done = self.run_farsum("verify", "in.h5", "in.h5", expect=1)
        self.assertIn("potential", done.err)

    def test_limited_results(self):
        roles = ("--sources", "proton_core", "--targets", "proton_halo")
        self.solve("in.h5", "out.h5", "--overwrite", *roles)
        self.assertIn("100 results hold", self.run_farsum("verify", "in.h5", "out.h5").out)
        self.change("proton_halo/electricField/x", 50, 1.5)
        self.refused("tolerance")


if __name__ == "__main__":
    unittest.main()
