#!/usr/bin/env python3
"""The same bits for any number of threads and in every run."""
import unittest

from command_case import CommandCase, data_sets


class SameBits(CommandCase):
    def check(self, scene, *arguments):
        self.run_farsum("generate", scene, "in.h5", "--count", 6000)
        for name, threads in (("one.h5", 1), ("two.h5", 2), ("again.h5", 2), ("many.h5", 7)):
            self.solve("in.h5", name, "--threads", threads, "--json", "report.json", *arguments)
        first = data_sets(self.path("one.h5"))
        self.assertGreater(len(first), 8)
        for name in ("two.h5", "again.h5", "many.h5"):
            self.assertEqual(data_sets(self.path(name)), first, name)

    def test_tree(self):
        self.check("proton_bunch", "--method", "tree")

    def test_direct(self):
        self.check("droplets", "--method", "direct", "--tolerance", "1e-9")

    def test_whole_files_are_equal_when_the_date_is_given(self):
        self.write_cloud()
        files = []
        for threads in (1, 2):
            import os
            self.solve("in.h5", "out.h5", "--threads", threads, "--overwrite", env={**os.environ, "SOURCE_DATE_EPOCH": "1700000000"})
            with open(self.path("out.h5"), "rb") as file:
                files.append(file.read())
        self.assertEqual(files[0], files[1])


if __name__ == "__main__":
    unittest.main()
