#!/usr/bin/env python3
"""Proves that repository_rules.py can fail: one broken rule in an invented tree gives that fault and no other."""
import os
import sys
import tempfile
import unittest

sys.dont_write_bytecode = True
sys.path.insert(0, os.path.dirname(os.path.abspath(__file__)))
import repository_rules  # noqa: E402

SOUND = {
    "CMakeLists.txt": "", "README.md": "", "DEVELOPERS.md": "", "LICENSE": "",
    "fmm/parallel/executor.cpp": "#include <tbb/parallel_for.h>\n",
    "fmm/base/text.cpp": 'const char* kWord = "printf(";  // abort() is never called\nint n = snprintf(buffer, 8, "x");\n',
    "io/hdf5/handle.cpp": "#include <hdf5.h>\n",
    "apps/demo.sh": "echo hello\n",
    "apps/farsum/main.cpp": 'int main() { printf("hello"); }\n',
    "tests/io/damage_test.cpp": "#include <hdf5.h>\n",
    "bench/run.sh": "true\n",
}


def faults_of(path=None, text=""):
    tree = dict(SOUND)
    if path:
        tree[path] = text
    with tempfile.TemporaryDirectory() as root:
        for name, content in tree.items():
            full = os.path.join(root, name)
            os.makedirs(os.path.dirname(full), exist_ok=True)
            with open(full, "w", encoding="utf-8") as stream:
                stream.write(content)
        return repository_rules.check(root)


class RepositoryRules(unittest.TestCase):
    def assert_fault(self, word, path, text=""):
        faults = faults_of(path, text)
        self.assertEqual(len(faults), 1, faults)
        self.assertIn(word, faults[0])

    def test_sound_tree_has_no_fault(self):
        self.assertEqual(faults_of(), [])

    def test_stranger_at_the_top(self):
        self.assert_fault("top level", "notes.txt")

    def test_file_above_the_line_limit(self):
        self.assert_fault("601 lines", "fmm/base/a.cpp", "\n" * 601)

    def test_mark_of_unfinished_work(self):
        self.assert_fault("unfinished", "fmm/base/a.cpp", "// TO" + "DO\n")

    def test_tbb_outside_its_folder(self):
        self.assert_fault("TBB belongs", "fmm/octree/a.cpp", "#include <tbb/task_group.h>\n")

    def test_hdf5_outside_its_folder(self):
        self.assert_fault("HDF5 belongs", "io/particles.cpp", "#include <hdf5.h>\n")

    def test_library_that_prints(self):
        self.assert_fault("never print", "fmm/base/a.cpp", 'void f() { std::cerr << "x"; }\n')

    def test_library_that_aborts(self):
        self.assert_fault("never print", "io/a.cpp", "void f() { abort(); }\n")

    def test_broken_shell_script(self):
        self.assert_fault("syntax error", "bench/run.sh", "if true; do\n")

    def test_broken_python_script(self):
        self.assert_fault("a.py", "tests/a.py", "def f(:\n")


if __name__ == "__main__":
    unittest.main()
