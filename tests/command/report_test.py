#!/usr/bin/env python3
"""The summary and the JSON report: what a reader and a script can rely on, also after a failure."""
import json
import math
import os
import unittest

from command_case import CommandCase

NUMBER, WORD, WHOLE, TRUTH, LIST = "number", "word", "whole", "truth", "list"
KEYS = {
    "report_version": WHOLE, "status": WORD, "exit_status": WHOLE,
    "failure.code": WORD, "failure.message": WORD, "failure.file": WORD, "failure.item": WORD, "failure.remedy": WORD,
    "input.file": WORD, "input.iteration": WORD, "input.species": LIST, "output.file": WORD,
    "count": WHOLE, "total_charge.value": NUMBER, "total_charge.unit": WORD, "extent.value": NUMBER, "extent.unit": WORD,
    "tolerance": NUMBER,
    "error.potential_rms": NUMBER, "error.field_rms": NUMBER, "error.potential_rms_upper": NUMBER, "error.field_rms_upper": NUMBER,
    "error.potential_typical": NUMBER, "error.field_typical": NUMBER, "error.potential_worst": NUMBER, "error.field_worst": NUMBER,
    "error.samples": WHOLE, "error.met": TRUTH,
    "checks.total_force": NUMBER, "checks.total_torque": NUMBER, "checks.virial": NUMBER,
    "energy.value": NUMBER, "energy.unit": WORD, "energy.error_bound": NUMBER,
    "constants.source": WORD, "constants.vacuum_permittivity": NUMBER, "constants.unit": WORD,
    "permittivity": NUMBER, "threads": WHOLE,
    "seconds.read": NUMBER, "seconds.tree": NUMBER, "seconds.lists": NUMBER, "seconds.far": NUMBER, "seconds.near": NUMBER,
    "seconds.solve": NUMBER, "seconds.verify": NUMBER, "seconds.write": NUMBER,
    "plan.method": WORD, "plan.order": WHOLE, "plan.leaf_capacity": WHOLE, "plan.depth": WHOLE, "plan.precision": WORD,
    "plan.cpu_target": WORD, "plan.attempts": WHOLE,
    "memory.predicted_bytes": WHOLE, "memory.peak_bytes": WHOLE,
    "machine": WORD, "version": WORD, "warnings": LIST, "command": WORD,
}


def lookup(report, key):
    for part in key.split("."):
        report = report[part]
    return report


class Report(CommandCase):
    def check_types(self, report, context):
        for key, kind in KEYS.items():
            value = lookup(report, key)  # KeyError: the key is missing
            if value is None:
                continue
            if kind == NUMBER:
                self.assertTrue(isinstance(value, (int, float)) and not isinstance(value, bool) and math.isfinite(value), (key, value, context))
            else:
                wanted = {WORD: str, WHOLE: int, TRUTH: bool, LIST: list}[kind]
                self.assertTrue(isinstance(value, wanted) and (kind != WHOLE or not isinstance(value, bool)), (key, value, context))

    def test_all_keys_after_each_subcommand(self):
        self.run_farsum("generate", "cube", "in.h5", "--count", 500, "--json", "report.json")
        self.check_types(self.report(), "generate")
        self.run_farsum("info", "in.h5", "--json", "report.json")
        self.check_types(self.report(), "info")
        self.solve("in.h5", "out.h5", "--json", "report.json")
        self.check_types(self.report(), "solve")
        self.run_farsum("verify", "in.h5", "out.h5", "--json", "report.json")
        self.check_types(self.report(), "verify")

    def test_no_value_is_null_after_a_solve(self):
        self.write_cloud()
        self.solve("in.h5", "out.h5", "--json", "report.json")
        report = self.report()
        empty = {key for key in KEYS if lookup(report, key) is None}
        self.assertEqual(empty, {key for key in KEYS if key.startswith("failure.")})
        self.assertEqual(report["status"], "done")
        self.assertEqual(report["exit_status"], 0)
        self.assertEqual(report["count"], 200)
        self.assertIs(report["error"]["met"], True)
        self.assertEqual((report["total_charge"]["unit"], report["extent"]["unit"], report["energy"]["unit"]), ("C", "m", "J"))
        self.assertEqual(report["constants"], {"source": "CODATA 2022", "vacuum_permittivity": 8.8541878188e-12, "unit": "F/m"})
        self.assertLessEqual(report["error"]["field_rms"], report["error"]["field_rms_upper"])
        self.assertGreater(report["memory"]["peak_bytes"], 1 << 20)

    def test_failures_are_told_with_the_same_keys(self):
        self.write_cloud()
        for arguments, status, code in ((("solve", "none.h5", "-o", "out.h5"), 1, "file_not_found"),
                                        (("solve", "in.h5", "-o", "in.h5"), 1, None),
                                        (("solve", "in.h5", "-o", "out.h5", "--tolerance", "7"), 2, "invalid_argument"),
                                        (("solve", "in.h5", "-o", "out.h5", "--memory-limit", "1K"), 4, "memory_refused"),
                                        (("solve", "in.h5", "-o", "out.h5", "--threads", "-3"), 2, "invalid_argument"),
                                        (("info", "none.h5"), 1, "file_not_found"),
                                        (("verify", "none.h5", "in.h5"), 1, None)):
            done = self.run_farsum(*arguments, "--json", "report.json", expect=status)
            report = self.report()
            self.check_types(report, arguments)
            self.assertEqual(report["status"], "failed")
            self.assertEqual(report["exit_status"], status)
            if code:
                self.assertEqual(report["failure"]["code"], code)
            self.assertIn(report["failure"]["message"], done.err)

    def test_report_on_standard_output_is_pure_json(self):
        self.write_cloud()
        done = self.solve("in.h5", "out.h5", "--json", "-")
        self.check_types(json.loads(done.out), "stdout")
        self.assertIn("charges solved in", done.err)

    def test_report_replaces_only_reports(self):
        self.write_cloud()
        with open(self.path("notes.txt"), "w", encoding="utf-8") as file:
            file.write("years of work")
        done = self.solve("in.h5", "out.h5", "--json", "notes.txt", expect=1)
        self.assertIn("--overwrite", done.err)
        self.assert_no_leftovers("in.h5", "notes.txt")
        for _ in range(2):
            self.solve("in.h5", "out.h5", "--json", "report.json", "--overwrite")
        self.run_farsum("info", "in.h5", "--json", "report.json")
        self.assertEqual(self.report()["command"], "info")

    def test_report_that_cannot_be_written_is_refused_before_the_work(self):
        self.write_cloud()
        for target in ("no/such/folder.json", "."):
            done = self.solve("in.h5", "out.h5", "--json", target, expect=1)
            self.assertIn("report", done.err)
        self.assert_no_leftovers("in.h5")


class Summary(CommandCase):
    def test_first_line_answers_the_question(self):
        self.run_farsum("generate", "cube", "in.h5", "--count", 1500)
        done = self.solve("in.h5", "out.h5")
        self.assertRegex(done.out.splitlines()[0],
                         r"\A1 500 charges solved in [\d.]+ m?s; field error [\d.]+e-\d+ \(asked 1e-6\), measured at 1 ?500 charges\Z")
        for word in ("total charge", " J, error at most", "extent", "charges per second", "at peak", "out.h5"):
            self.assertIn(word, done.out)
        self.assertEqual(done.err, "")

    def test_potential_alone_is_named(self):
        self.write_cloud()
        self.assertIn("; potential error ", self.solve("in.h5", "out.h5", "--outputs", "potential").out.splitlines()[0])

    def test_quiet_prints_nothing(self):
        self.write_cloud()
        done = self.solve("in.h5", "out.h5", "--quiet")
        self.assertEqual((done.out, done.err), ("", ""))
        self.assertTrue(os.path.exists(self.path("out.h5")))

    def test_quiet_still_tells_failures(self):
        self.assertIn("none.h5", self.solve("none.h5", "out.h5", "--quiet", expect=1).err)

    def test_close_pairs_are_mentioned(self):
        places, charges = [[0, 0, 0], [1e-9, 0, 0]], [1e-19, 1e-19]
        places += [[1e-3 * i, 1e-3, 1e-3] for i in range(1, 9)]
        charges += [1e-19] * 8
        from command_case import write_file
        write_file(self.path("in.h5"), {"0": {"ions": dict(places=places, charge=charges)}})
        done = self.solve("in.h5", "out.h5", "--json", "report.json")
        self.assertRegex(done.out, "note: largest field is .* x the median; consider a radius")
        self.assertTrue(any("consider a radius" in warning for warning in self.report()["warnings"]))

    def test_full_standard_output_is_a_failure(self):
        self.write_cloud()
        if not os.path.exists("/dev/full"):
            self.skipTest("no /dev/full here")
        import subprocess
        from command_case import COMMAND
        with open("/dev/full", "w", encoding="utf-8") as full:
            done = subprocess.run([COMMAND, "info", self.path("in.h5")], stdout=full, stderr=subprocess.PIPE, timeout=60)
        self.assertEqual(done.returncode, 1)
        self.assertIn(b"standard output", done.stderr)


if __name__ == "__main__":
    unittest.main()
