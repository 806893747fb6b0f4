#!/usr/bin/env python3
"""A signal at any moment: the end within two seconds, by that signal, no partial file, and an old output intact."""
import os
import signal
import subprocess
import time
import unittest

from command_case import COMMAND, CommandCase, data_sets

COUNT = 400000


class Signals(CommandCase):
    def setUp(self):
        super().setUp()
        self.run_farsum("generate", "cube", "in.h5", "--count", COUNT, "--quiet")

    def start(self, *arguments):
        return subprocess.Popen([COMMAND, *arguments], cwd=self.folder, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)

    def end(self, process, number):
        """Sends the signal; seconds until the end."""
        sent = time.monotonic()
        process.send_signal(number)
        process.wait(timeout=30)
        return time.monotonic() - sent

    def test_during_the_solve(self):
        for number in (signal.SIGINT, signal.SIGTERM):
            process = self.start("solve", "in.h5", "-o", "out.h5", "--tolerance", "1e-12", "--method", "direct")
            time.sleep(0.7)
            self.assertIsNone(process.poll(), "the solve was over before the signal")
            self.assertLess(self.end(process, number), 2)
            self.assertEqual(process.returncode, -number)
            self.assert_no_leftovers("in.h5")

    def test_while_writing(self):
        self.run_farsum("generate", "cube", "out.h5", "--count", 10)
        before = data_sets(self.path("out.h5"))
        caught = 0
        for _ in range(5):
            process = self.start("generate", "cube", "out.h5", "--count", "3000000", "--overwrite")
            while process.poll() is None and not any(name.endswith(".tmp") for name in os.listdir(self.folder)):
                time.sleep(0.001)
            seconds = self.end(process, signal.SIGTERM)
            if process.returncode == -signal.SIGTERM:
                caught += 1
                self.assertLess(seconds, 2)
                self.assertEqual(data_sets(self.path("out.h5")), before)
            self.assert_no_leftovers("in.h5", "out.h5")
            if caught == 2:
                return
        self.fail("no run was caught while writing")

    def test_ignored_signals_stay_ignored(self):
        process = subprocess.Popen([COMMAND, "generate", "cube", "other.h5", "--count", "300000"], cwd=self.folder,
                                   stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL,
                                   preexec_fn=lambda: signal.signal(signal.SIGHUP, signal.SIG_IGN))
        time.sleep(0.05)
        process.send_signal(signal.SIGHUP)
        process.wait(timeout=60)
        self.assertEqual(process.returncode, 0)


if __name__ == "__main__":
    unittest.main()
