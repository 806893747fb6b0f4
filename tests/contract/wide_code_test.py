#!/usr/bin/env python3
"""Proves that wide_code.py can fail: listings as nm prints them, sound and with one shared function too many."""
import os
import sys
import unittest

sys.dont_write_bytecode = True
sys.path.insert(0, os.path.dirname(os.path.abspath(__file__)))
import wide_code  # noqa: E402

SOUND = """
solver.cpp.o:
0000000000000000 W std::vector<double>::resize(unsigned long)

target_portable.cpp.o:
0000000000000000 W farsum::kernels::portable::pair_sums(int)
0000000000000000 T farsum::kernels::portable::table()

target_avx512.cpp.o:
0000000000000000 W farsum::kernels::avx512::pair_sums(int)
0000000000000010 r .LC1
"""


class WideCode(unittest.TestCase):
    def test_sound_archive_has_no_fault(self):
        self.assertEqual(wide_code.faults_of(SOUND), ([], {"portable", "avx512"}))

    def test_shared_inline_function(self):
        faults, _ = wide_code.faults_of(SOUND + "0000000000000000 W farsum::round_up(unsigned long, unsigned long)\n")
        self.assertEqual(faults, ["target_avx512.cpp.o: shares farsum::round_up(unsigned long, unsigned long)"])

    def test_function_of_another_target(self):
        faults, _ = wide_code.faults_of(SOUND + "0000000000000000 W farsum::kernels::portable::pair_sums(int)\n")
        self.assertEqual(len(faults), 1)


if __name__ == "__main__":
    unittest.main()
