#!/usr/bin/env python3
"""Inputs that must not be solved as they stand: each refusal names the file, the reason and the remedy, and the remedy works."""
import os
import subprocess
import unittest

import h5py
import numpy as np

from command_case import E_CHARGE, LIGHT, CommandCase, cloud, exact_sums, relative_rms, write_file

ELECTRON_MASS = 9.1093837139e-31


class Refusals(CommandCase):
    def refused(self, *words, expect=1, arguments=()):
        done = self.solve("in.h5", "out.h5", *arguments, expect=expect)
        for word in ("in.h5", *words):
            self.assertIn(word, done.err)
        self.assertNotIn("out.h5", os.listdir(self.folder))
        return done

    def moving(self, speed, **more):
        """Electrons along z at `speed` (share of c) with their places."""
        places, _ = cloud(60)
        gamma = 1 / np.sqrt(1 - speed**2)
        momentum = np.zeros((60, 3))
        momentum[:, 2] = gamma * ELECTRON_MASS * LIGHT * speed
        return dict(places=places, charge=-E_CHARGE, mass=ELECTRON_MASS, momentum=momentum, **more)

    def test_fast_bunch(self):
        write_file(self.path("in.h5"), {"0": {"beam": self.moving(0.99)}})
        self.refused("0.99 c", "static sum", "--static", "beam")
        done = self.solve("in.h5", "out.h5", "--static")
        self.assertIn("as if at rest", done.out)

    def test_slow_bunch_is_solved_without_asking(self):
        write_file(self.path("in.h5"), {"0": {"beam": self.moving(0.049)}})
        self.solve("in.h5", "out.h5")

    def test_just_above_the_limit(self):
        write_file(self.path("in.h5"), {"0": {"beam": self.moving(0.051)}})
        self.refused("0.051 c")

    def test_two_beams_against_each_other(self):
        one, other = self.moving(0.9), self.moving(0.9)
        other["momentum"] = -other["momentum"]
        other["places"] = other["places"] + 1e-2
        write_file(self.path("in.h5"), {"0": {"left": one, "right": other}})
        self.refused("0.9 c", "--static")

    def test_different_times(self):
        times = np.linspace(0, 1e-12, 60)
        write_file(self.path("in.h5"), {"0": {"beam": self.moving(0.01, times=times)}})
        self.refused("different times", "--advance-to", "--as-snapshot")
        self.solve("in.h5", "out.h5", "--as-snapshot")
        self.solve("in.h5", "out.h5", "--advance-to", "1e-12", "--overwrite", "--tolerance", "1e-10")
        moved = self.moving(0.01)["places"].copy()
        moved[:, 2] += 0.01 * LIGHT * (1e-12 - times)
        with h5py.File(self.path("out.h5"), "r") as file:
            found = file["data/0/particles/beam/potential"][:]
        potential, _ = exact_sums(moved, moved, np.full(60, -E_CHARGE))
        self.assertLess(relative_rms(found, potential), 1e-9)
        self.run_farsum("verify", "in.h5", "out.h5")

    def test_several_iterations(self):
        places, charges = cloud(30)
        write_file(self.path("in.h5"), {str(step): {"ions": dict(places=places * (1 + step), charge=charges)} for step in (2, 10)})
        self.refused("2", "10", "--iteration")
        self.refused("7", arguments=("--iteration", "7"))
        self.solve("in.h5", "out.h5", "--iteration", "10", "--json", "report.json")
        self.assertEqual(self.report()["input"]["iteration"], "10")
        self.run_farsum("verify", "in.h5", "out.h5")

    def test_no_charge(self):
        places, _ = cloud(30)
        write_file(self.path("in.h5"), {"0": {"dust": dict(places=places, charge=None)}})
        self.refused("charge")
        self.solve("in.h5", "out.h5", "--particle-charge", "-1", "--json", "report.json")
        self.assertAlmostEqual(self.report()["total_charge"]["value"] / (-30 * E_CHARGE), 1, 12)
        self.run_farsum("verify", "in.h5", "out.h5")

    def test_coincident_charges(self):
        places, charges = cloud(40)
        places[31] = places[5]
        write_file(self.path("in.h5"), {"0": {"ions": dict(places=places, charge=charges)}})
        done = self.solve("in.h5", "out.h5", expect=1)
        for word in ("5", "31", "coincident"):
            self.assertIn(word, done.err)
        done = self.solve("in.h5", "out.h5", "--coincident", "skip", "--tolerance", "1e-10")
        self.assertIn("left out", done.out)
        with h5py.File(self.path("out.h5"), "r") as file:
            found = file["data/0/particles/ions/potential"][:]
        self.assertLess(relative_rms(found, exact_sums(places, places, charges)[0]), 1e-10)
        self.run_farsum("verify", "in.h5", "out.h5")

    def test_not_a_number(self):
        for column in ("places", "charge"):
            places, charges = cloud(20)
            (places[:, 1] if column == "places" else charges)[13] = np.nan
            write_file(self.path("in.h5"), {"0": {"ions": dict(places=places, charge=charges)}})
            self.refused("13")

    def test_damaged_and_foreign_files(self):
        self.write_cloud("whole.h5")
        with open(self.path("whole.h5"), "rb") as file:
            content = file.read()
        for part in (content[:len(content) // 2], b"", b"\x00" * 100, b"\x89HDF\r\n\x1a\n"):
            with open(self.path("in.h5"), "wb") as file:
                file.write(part)
            self.refused()

    def test_folder_and_missing_file(self):
        self.refused()
        os.mkdir(self.path("in.h5"))
        self.refused()

    def test_missing_records(self):
        for record in ("position", "position/y"):
            self.write_cloud()
            with h5py.File(self.path("in.h5"), "a") as file:
                del file["data/0/particles/ions/" + record]
            self.refused()


class Memory(CommandCase):
    def test_limit_given(self):
        self.write_cloud()
        done = self.solve("in.h5", "out.h5", "--memory-limit", "1MiB", expect=4)
        for word in ("1.0 MiB", "--memory-limit", "200 charges"):
            self.assertIn(word, done.err)
        self.run_farsum("generate", "cube", "big.h5", "--count", 1e6, "--memory-limit", "10MB", expect=4)
        self.solve("in.h5", "out.h5", "--memory-limit", "1GiB")

    def test_address_space_limit(self):
        self.run_farsum("generate", "cube", "in.h5", "--count", 3000000, "--quiet")
        from command_case import COMMAND
        done = subprocess.run(["bash", "-c", f"ulimit -v 250000; exec '{COMMAND}' solve in.h5 -o out.h5"], cwd=self.folder,
                              capture_output=True, timeout=120, check=False)
        if done.returncode == 127 or b"cannot allocate memory" in done.stderr.lower() or b"shared librar" in done.stderr or b"Sanitizer" in done.stderr:
            self.skipTest("the program itself does not start under this limit")
        self.assertEqual(done.returncode, 4, done.stderr)
        self.assertEqual(done.stderr.count(b"\n"), 1, done.stderr)
        self.assertEqual(os.listdir(self.folder), ["in.h5"])


class Accuracy(CommandCase):
    def test_tolerance_that_the_data_cannot_carry(self):
        # In a perfect lattice nearly all of each sum cancels.
        self.run_farsum("generate", "crystallite", "in.h5", "--count", 8000)
        done = self.solve("in.h5", "out.h5", "--tolerance", "1e-13", "--method", "direct", expect=3)
        self.assertRegex(done.err, r"1e-13.*reachable here: \d")
        self.assert_no_leftovers("in.h5")
        self.solve("in.h5", "out.h5", "--tolerance", "1e-13", "--method", "direct", "--best-effort", "--json", "report.json")
        self.assertTrue(self.report()["warnings"])


class HostileNames(CommandCase):
    def test_names_from_files_reach_no_terminal_and_no_json_raw(self):
        places, charges = cloud(20)
        name = "ion\x1b[2Js\u202e"
        write_file(self.path("in.h5"), {"0": {name: dict(places=places, charge=charges), "other": dict(places=places + 1, charge=charges)}})
        for arguments in (("info", "in.h5"), ("info", "in.h5", "--strict"), ("solve", "in.h5", "-o", "out.h5"),
                          ("solve", "in.h5", "-o", "out.h5", "--sources", "none", "--overwrite")):
            from command_case import COMMAND
            done = subprocess.run([COMMAND, *arguments, "--json", "report.json"], cwd=self.folder, capture_output=True, timeout=60, check=False)
            self.assertIn(done.returncode, (0, 1))
            for raw in (b"\x1b", "\u202e".encode()):
                self.assertNotIn(raw, done.stdout + done.stderr)
            with open(self.path("report.json"), "rb") as file:
                self.assertNotIn(b"\x1b", file.read())
            self.report()


if __name__ == "__main__":
    unittest.main()
