#!/usr/bin/env python3
"""Delimited text from input to checked result."""
import unittest

import h5py
import numpy as np

from command_case import E_CHARGE, CommandCase, cloud, exact_sums, relative_rms, vector


class Text(CommandCase):
    def write(self, content, name="ions.txt"):
        with open(self.path(name), "w", encoding="utf-8", newline="") as file:
            file.write(content)

    def rows(self, places, charges, separator=" "):
        return "".join(separator.join(repr(float(v)) for v in (*place, charge)) + "\n" for place, charge in zip(places, charges))

    def check(self, places, charges):
        with h5py.File(self.path("out.h5"), "r") as file:
            species = list(file["data/0/particles"].values())
            self.assertEqual(len(species), 1)
            potential, field = exact_sums(places, places, charges)
            self.assertLess(relative_rms(species[0]["potential"][:], potential), 1e-10)
            self.assertLess(relative_rms(vector(species[0]["electricField"]), field), 1e-10)
        self.run_farsum("verify", "ions.txt", "out.h5")

    def test_units_in_the_header(self):
        places, charges = cloud(80)
        self.write("# a comment\nx[mm], y[mm], z[mm], charge[e]\n" + self.rows(places * 1e3, charges / E_CHARGE, ", "))
        self.solve("ions.txt", "out.h5", "--tolerance", "1e-10")
        self.check(places, charges)

    def test_units_from_the_command_line(self):
        places, charges = cloud(80)
        self.write("x y z q\r\n" + self.rows(places * 1e6, charges / E_CHARGE).replace("\n", "\r\n"))
        for arguments in ((), ("--length-unit", "um"), ("--charge-unit", "e")):
            done = self.solve("ions.txt", "out.h5", *arguments, expect=1)
            self.assertRegex(done.err, "--length-unit|--charge-unit")
        self.solve("ions.txt", "out.h5", "--length-unit", "um", "--charge-unit", "e", "--tolerance", "1e-10")
        self.check(places, charges)

    def test_wrong_units_and_bad_rows_name_the_place(self):
        header = "x[m] y[m] z[m] q[e]\n"
        for content, words in (("x[kg] y[m] z[m] q[e]\n0 0 0 1\n", ("kg", "x")), ("x[m] y[m] z[m] q[furlong]\n0 0 0 1\n", ("furlong",)),
                               (header + "0 0 0 1\n1 two 0 1\n", ("line 3", "two")), (header + "0 0 0 1\n1 0 0\n", ("line 3",)),
                               (header + "0 0 0 nan\n", ("line 2",)), ("only words\n", ("ions.txt",))):
            self.write(content)
            done = self.solve("ions.txt", "out.h5", expect=1)
            for word in words:
                self.assertIn(word, done.err)

    def test_decimal_commas_of_the_user_do_not_matter(self):
        import os
        self.write("x[m] y[m] z[m] q[e]\n0.5 0 0 1\n1.5 0 0 1\n")
        self.solve("ions.txt", "out.h5", env={**os.environ, "LC_ALL": "de_DE.UTF-8"})
        with h5py.File(self.path("out.h5"), "r") as file:
            np.testing.assert_array_equal(vector(next(iter(file["data/0/particles"].values()))["position"])[:, 0], [0.5, 1.5])


if __name__ == "__main__":
    unittest.main()
