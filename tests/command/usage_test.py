#!/usr/bin/env python3
"""Help texts, and command lines that make no sense: exit status 2 with one line that names the option."""
import unittest

from command_case import CommandCase

SUBCOMMANDS = ("generate", "info", "solve", "verify")


class Help(CommandCase):
    def test_program_lists_its_subcommands_and_exit_statuses(self):
        done = self.run_farsum("--help")
        for word in SUBCOMMANDS + ("Exit status", "128+n", "V/m", "ionising radiation"):
            self.assertIn(word, done.out)
        self.assertEqual(done.err, "")

    def test_each_subcommand_shows_examples_units_and_exit_statuses(self):
        for name in SUBCOMMANDS:
            done = self.run_farsum(name, "--help")
            for word in ("Examples:", "farsum " + name, "Exit status:", "--threads", "--memory-limit", "--json", "--quiet", "--overwrite"):
                self.assertIn(word, done.out, name)
            self.assertLessEqual(max(map(len, done.out.splitlines())), 128, name)

    def test_solve_names_every_option_of_the_contract(self):
        done = self.run_farsum("solve", "--help")
        for option in ("--tolerance", "--outputs", "--species", "--sources", "--targets", "--iteration", "--permittivity", "--method",
                       "--samples", "--best-effort", "--coincident", "--static", "--length-unit", "--charge-unit", "--as-snapshot",
                       "--advance-to", "--output"):
            self.assertIn(option, done.out)

    def test_generate_lists_all_scenes(self):
        done = self.run_farsum("generate", "--help")
        for scene in ("electron_bunch", "proton_bunch", "ion_cloud", "crystallite", "droplets", "cube", "shell", "line", "plane"):
            self.assertIn(scene, done.out)

    def test_version_is_shown(self):
        self.assertRegex(self.run_farsum("--version").out, r"\Afarsum \d+\.\d+\.\d+\n\Z")


class WrongUsage(CommandCase):
    def refused(self, *arguments, says):
        done = self.run_farsum(*arguments, expect=2)
        self.assertIn(says, done.err)

    def test_no_subcommand(self):
        self.refused(says="choose one of generate, info, solve, verify")

    def test_unknown_subcommand(self):
        self.refused("solv", "x.h5", says="there is no subcommand 'solv'")

    def test_unknown_option(self):
        self.refused("info", "x.h5", "--frobnicate", says="--frobnicate")

    def test_missing_output(self):
        self.refused("solve", "x.h5", says="--output")

    def test_missing_value(self):
        self.refused("solve", "x.h5", "-o", says="--output")

    def test_too_many_files(self):
        self.refused("info", "a.h5", "b.h5", says="b.h5")

    def test_values_out_of_range(self):
        solve = ("solve", "x.h5", "-o", "y.h5")
        for option, value in (("--tolerance", "1e-14"), ("--tolerance", "0.5"), ("--tolerance", "nan"), ("--tolerance", "-1e-6"),
                              ("--tolerance", "small"), ("--threads", "-1"), ("--threads", "1.5"), ("--permittivity", "0"),
                              ("--permittivity", "-2"), ("--permittivity", "inf"), ("--method", "magic"), ("--coincident", "merge"),
                              ("--samples", "0"), ("--samples", "-5"), ("--outputs", "voltage"), ("--outputs", ","),
                              ("--memory-limit", "lots"), ("--memory-limit", "4XB"), ("--species", ","), ("--sources", ","),
                              ("--targets", ","), ("--advance-to", "nan"), ("--particle-charge", "inf")):
            self.refused(*solve, option, value, says=option)

    def test_options_that_exclude_each_other(self):
        self.refused("solve", "x.h5", "-o", "y.h5", "--as-snapshot", "--advance-to", "0", says="--advance-to")
        self.refused("solve", "x.h5", "-o", "y.h5", "--sources", "a", "--outputs", "energy", says="energy")

    def test_scene_count_and_signs(self):
        self.refused("generate", "galaxy", "x.h5", says="galaxy")
        self.refused("generate", "cube", "x.h5", "--count", "2.5", says="--count")
        self.refused("generate", "cube", "x.h5", "--count", "-1", says="--count")
        self.refused("generate", "cube", "x.h5", "--count", "1e10", says="--count")
        self.refused("generate", "ion_cloud", "x.h5", "--both-signs", says="--both-signs")

    def test_nothing_is_written(self):
        self.refused("generate", "galaxy", "x.h5", says="choose one of")
        self.assert_no_leftovers()

    def test_control_characters_of_the_command_line_do_not_reach_the_terminal(self):
        done = self.run_farsum("info", "x.h5", "--bad\x1b[31m\nline", expect=2)
        self.assertNotIn("\x1b", done.err)


if __name__ == "__main__":
    unittest.main()
