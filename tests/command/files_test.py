#!/usr/bin/env python3
"""Outputs appear whole or not at all, and nothing is replaced unasked."""
import os
import shutil
import subprocess
import tempfile
import unittest

import h5py

from command_case import CommandCase, data_sets


class Outputs(CommandCase):
    def setUp(self):
        super().setUp()
        self.write_cloud()

    def test_existing_output_is_refused_before_any_work(self):
        self.solve("in.h5", "out.h5")
        before = data_sets(self.path("out.h5"))
        done = self.solve("in.h5", "out.h5", "--permittivity", 2, expect=1)
        self.assertIn("out.h5", done.err)
        self.assertIn("--overwrite", done.err)
        self.assertEqual(data_sets(self.path("out.h5")), before)
        # Before any work: the input is not even looked for.
        self.assertIn("--overwrite", self.solve("none.h5", "out.h5", expect=1).err)

    def test_overwrite_replaces(self):
        self.solve("in.h5", "out.h5")
        before = data_sets(self.path("out.h5"))
        self.solve("in.h5", "out.h5", "--permittivity", 2, "--overwrite")
        self.assertNotEqual(data_sets(self.path("out.h5")), before)
        self.assert_no_leftovers("in.h5", "out.h5")

    def test_output_that_is_the_input_is_refused_under_any_name(self):
        os.link(self.path("in.h5"), self.path("hard.h5"))
        os.symlink("in.h5", self.path("soft.h5"))
        before = data_sets(self.path("in.h5"))
        for name in ("in.h5", "./in.h5", "hard.h5", "soft.h5"):
            self.solve("in.h5", name, "--overwrite", expect=1)
        self.assertEqual(data_sets(self.path("in.h5")), before)

    def test_symbolic_link_stays_and_its_target_is_replaced(self):
        os.mkdir(self.path("store"))
        with open(self.path("store/real.h5"), "w", encoding="utf-8") as file:
            file.write("old")
        os.symlink("store/real.h5", self.path("link.h5"))
        self.solve("in.h5", "link.h5", "--overwrite")
        self.assertTrue(os.path.islink(self.path("link.h5")))
        self.assertTrue(h5py.is_hdf5(self.path("store/real.h5")))

    def test_targets_that_are_no_files_are_refused(self):
        os.mkdir(self.path("folder"))
        for target in ("folder", "no/such/out.h5", "/dev/null", ""):
            self.solve("in.h5", target, "--overwrite", expect=1)
        self.assert_no_leftovers("in.h5", "folder")

    def test_unwritable_folder(self):
        os.mkdir(self.path("locked"))
        os.chmod(self.path("locked"), 0o500)
        if os.geteuid() == 0:
            if not shutil.which("setpriv"):
                self.skipTest("root writes everywhere and setpriv is missing")
            for folder, _, _ in os.walk(self.folder):
                os.chown(folder, 65534, 65534)
            os.chown(self.path("in.h5"), 65534, 65534)
            from command_case import COMMAND
            done = subprocess.run(["setpriv", "--reuid=65534", "--regid=65534", "--clear-groups", COMMAND, "solve", "in.h5", "-o", "locked/out.h5"],
                                  cwd=self.folder, capture_output=True, timeout=60, check=False)
            if b"permission denied" in done.stderr.lower() and b"farsum" not in done.stderr:
                self.skipTest("another user may not run the command here")
            self.assertEqual(done.returncode, 1)
            self.assertIn(b"locked", done.stderr)
        else:
            self.assertIn("locked", self.solve("in.h5", "locked/out.h5", expect=1).err)
        self.assertEqual(os.listdir(self.path("locked")), [])

    def test_odd_names_work(self):
        for name in ("with blank.h5", "-dash.h5", "ünïcode.h5", "no_suffix"):
            self.run_farsum("solve", "in.h5", "--output=" + name, "--quiet")
            self.assertTrue(h5py.is_hdf5(self.path(name)))


class FullDisk(CommandCase):
    def setUp(self):
        super().setUp()
        self.small = tempfile.mkdtemp(prefix="farsum-small-")
        done = subprocess.run(["mount", "-t", "tmpfs", "-o", "size=2m", "tmpfs", self.small], capture_output=True, check=False)
        self.addCleanup(os.rmdir, self.small)
        if done.returncode != 0:
            self.skipTest("a small file system cannot be mounted here (needs root)")
        self.addCleanup(subprocess.run, ["umount", self.small], check=False)

    def test_too_little_space_is_noticed_and_nothing_is_left(self):
        self.run_farsum("generate", "cube", "in.h5", "--count", 200000)
        target = os.path.join(self.small, "out.h5")
        done = self.solve("in.h5", target, expect=1)
        self.assertRegex(done.err, "space|full")
        self.run_farsum("generate", "cube", target, "--count", 200000, expect=1)
        self.assertEqual(os.listdir(self.small), [])

    def test_old_output_survives(self):
        target = os.path.join(self.small, "out.h5")
        self.run_farsum("generate", "cube", target, "--count", 10)
        before = data_sets(target)
        self.run_farsum("generate", "cube", target, "--count", 200000, "--overwrite", expect=1)
        self.assertEqual(data_sets(target), before)
        self.assertEqual(os.listdir(self.small), ["out.h5"])


if __name__ == "__main__":
    unittest.main()
