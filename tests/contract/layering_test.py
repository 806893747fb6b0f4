#!/usr/bin/env python3
"""Proves that layering.py can fail: invented trees, one broken rule each, must give exactly that fault."""
import os
import sys
import tempfile
import unittest

sys.dont_write_bytecode = True
sys.path.insert(0, os.path.dirname(os.path.abspath(__file__)))
import layering  # noqa: E402

SOUND = {
    "fmm/options.hpp": "#include <cstddef>\n",
    "fmm/report.hpp": '#include "fmm/options.hpp"\n',
    "fmm/solver.hpp": '#include "fmm/report.hpp"\n',
    "fmm/solver.cpp": '#include "fmm/solver.hpp"\n#include "fmm/schedule/evaluate.hpp"\n',
    "fmm/base/cpu.hpp": "",
    "fmm/kernels/pair.hpp": '#include "fmm/base/cpu.hpp"\n',
    "fmm/schedule/evaluate.hpp": '#include "fmm/kernels/pair.hpp"\n#include "fmm/options.hpp"\n',
    "io/particles.hpp": '#include "fmm/options.hpp"\n',
    "io/particles.cpp": '#include "io/particles.hpp"\n#include "io/hdf5/handle.hpp"\n',
    "io/hdf5/handle.hpp": "#include <hdf5.h>\n",
    "apps/farsum/main.cpp": '#include "fmm/solver.hpp"\n#include "io/particles.hpp"\n',
    "tests/unit/pair_test.cpp": '#include "fmm/kernels/pair.hpp"\n',
}


def faults_of(**changes):
    """Faults of the sound tree after the files named by `changes` (path with / written as __) were added or replaced."""
    tree = dict(SOUND)
    tree.update({path.replace("__", "/").replace("_dot_", "."): text for path, text in changes.items()})
    with tempfile.TemporaryDirectory() as root:
        for path, text in tree.items():
            full = os.path.join(root, path)
            os.makedirs(os.path.dirname(full), exist_ok=True)
            with open(full, "w", encoding="utf-8") as stream:
                stream.write(text)
        return layering.check(root)


class Layering(unittest.TestCase):
    def assert_fault(self, word, **changes):
        faults = faults_of(**changes)
        self.assertEqual(len(faults), 1, faults)
        self.assertIn(word, faults[0])

    def test_sound_tree_has_no_fault(self):
        self.assertEqual(faults_of(), [])

    def test_commented_include_is_no_include(self):
        self.assertEqual(faults_of(fmm__base__a_dot_hpp='// #include "fmm/schedule/x.hpp"\n/*\n#include "io/y.hpp"\n*/\n'), [])

    def test_upward_include(self):
        self.assert_fault("upward", fmm__base__a_dot_hpp='#include "fmm/kernels/pair.hpp"\n')

    def test_upward_include_in_angle_brackets(self):
        self.assert_fault("upward", fmm__base__a_dot_hpp="#include <fmm/kernels/pair.hpp>\n")

    def test_upward_include_with_spaces(self):
        self.assert_fault("upward", fmm__base__a_dot_hpp='  #  include "fmm/kernels/pair.hpp"\n')

    def test_sideways_include(self):
        self.assert_fault("sideways", fmm__octree__build_dot_hpp='#include "fmm/expansion/row.hpp"\n',
                          fmm__expansion__row_dot_hpp="")

    def test_circle(self):
        self.assert_fault("circle", fmm__base__a_dot_hpp='#include "fmm/base/b.hpp"\n',
                          fmm__base__b_dot_hpp='#include "fmm/base/a.hpp"\n')

    def test_public_header_includes_internal_one(self):
        self.assert_fault("internal", fmm__solver_dot_hpp='#include "fmm/base/cpu.hpp"\n')

    def test_engine_sees_files(self):
        self.assert_fault("must not see io/", fmm__base__a_dot_cpp='#include "io/particles.hpp"\n')

    def test_files_see_internal_engine_header(self):
        self.assert_fault("only public headers", io__units_dot_cpp='#include "fmm/base/cpu.hpp"\n')

    def test_command_sees_internal_engine_header(self):
        self.assert_fault("only public headers", apps__farsum__solve_dot_cpp='#include "fmm/base/cpu.hpp"\n')

    def test_engine_includes_a_test(self):
        self.assert_fault("must not see tests/", fmm__base__a_dot_cpp='#include "tests/reference/sums.hpp"\n',
                          tests__reference__sums_dot_hpp="")

    def test_thin_hdf5_layer_includes_a_format(self):
        self.assert_fault("upward", io__hdf5__handle_dot_cpp='#include "io/openpmd/layout.hpp"\n',
                          io__openpmd__layout_dot_hpp="")

    def test_one_format_includes_another(self):
        self.assert_fault("sideways", io__text__table_dot_cpp='#include "io/openpmd/layout.hpp"\n',
                          io__openpmd__layout_dot_hpp="")

    def test_folder_without_rank(self):
        self.assert_fault("no rank", fmm__helpers__a_dot_hpp="")

    def test_include_not_from_the_root(self):
        self.assert_fault("not found", fmm__base__a_dot_cpp='#include "cpu.hpp"\n')


if __name__ == "__main__":
    unittest.main()
