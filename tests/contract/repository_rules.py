#!/usr/bin/env python3
"""Reports what breaks the rules of this repository. Usage: repository_rules.py [ROOT]; exit status 0 = nothing.

Rules: the top level holds exactly the agreed entries; no file above 600 lines; no marks of unfinished work; no machine paths;
TBB only in fmm/parallel/, HDF5 only in io/hdf5/, neither in a public header; fmm/ and io/ never print, abort or exit;
shell scripts pass `bash -n`; Python scripts compile.
"""
import os
import re
import subprocess
import sys

sys.dont_write_bytecode = True

AGREED = {"CMakeLists.txt", "README.md", "DEVELOPERS.md", "LICENSE", "fmm", "io", "apps", "tests", "bench"}
LINE_LIMIT = 600
CODE = (".hpp", ".cpp", ".h", ".c", ".inc", ".in")
BINARY = (".png", ".h5", ".svg", ".pdf")
# Written in two pieces so that this file does not find itself.
UNFINISHED = re.compile(r"\b(" + "|".join(a + b for a, b in (
    ("TO", "DO"), ("FIX", "ME"), ("XX", "X"), ("TB", "D"), ("HA", "CK"), ("place", "holder"), ("not yet ", "implemented"),
    ("unimple", "mented"))) + r")\b", re.IGNORECASE)
MACHINE_PATH = re.compile("/" + r"work/(main|shared)|\." + "library/")
INCLUDE = re.compile(r'^\s*#\s*include\s*[<"]([^>"]+)[>"]', re.MULTILINE)
PRINTS = re.compile(r"std::(cout|cerr|clog|abort|exit|terminate|quick_exit|puts|printf|fprintf)\b"
                    r"|fmt::print\b|(?<![\w.:>])(printf|fprintf|puts|putchar|perror|abort|exit|_exit|quick_exit)\s*\(")


def tracked_entries(root):
    """Top-level names under version control; what a user left in a checkout is not ours. Without git: all names."""
    try:
        run = subprocess.run(["git", "-c", "safe.directory=*", "-C", root, "ls-files", "-z"],
                             capture_output=True, text=True, check=False)
        names = {path.split("/")[0] for path in run.stdout.split("\0") if path}
    except OSError:
        names = set()
    return names or {name for name in os.listdir(root) if not name.startswith("build")}


def files_of(root):
    """All files under version control or to come: everything except .git, build folders and Python's caches."""
    for folder, folders, names in os.walk(root):
        top = folder == root
        folders[:] = sorted(name for name in folders
                            if name not in (".git", "__pycache__", ".cache") and not (top and name.startswith("build")))
        for name in sorted(names):
            yield os.path.relpath(os.path.join(folder, name), root)


def code_only(text):
    """C++ text with comments, string and character literals blanked; line breaks stay."""
    pattern = re.compile(r'//[^\n]*|/\*.*?\*/|"(?:\\.|[^"\\\n])*"|\'(?:\\.|[^\'\\\n])+\'', re.DOTALL)
    return pattern.sub(lambda match: re.sub(r"[^\n]", " ", match.group()), text)


def top_level_faults(root):
    present = {name for name in tracked_entries(root) if not name.startswith(".")}
    for name in sorted(present - AGREED):
        yield f"{name}: does not belong at the top level"
    for name in sorted(AGREED - present):
        yield f"{name}: missing at the top level"


def library_of(name):
    """Which restricted library an include name belongs to, or None."""
    if name.startswith(("tbb/", "oneapi/")):
        return "TBB"
    if name.startswith(("hdf5", "H5", "hdf5/")) or re.match(r"H5\w*\.h$", os.path.basename(name)):
        return "HDF5"
    return None


def code_faults(path, text):
    home = {"TBB": "fmm/parallel/", "HDF5": "io/hdf5/"}
    for name in INCLUDE.findall(text):
        library = library_of(name)
        # Tests may use either library to build damaged files or an arena of their own.
        if library and not path.startswith((home[library], "tests/")):
            yield f"{path}: includes {name}; {library} belongs in {home[library]} only"
        if library == "TBB" and path.endswith(".hpp"):
            yield f"{path}: a header includes {name}"
    if path.startswith(("fmm/", "io/")):
        code = code_only(text)
        for match in PRINTS.finditer(code):
            line = code.count("\n", 0, match.start()) + 1
            yield f"{path}:{line}: {match.group().strip()}: fmm/ and io/ never print, abort or exit"


def script_fault(root, path, text):
    full = os.path.join(root, path)
    if path.endswith(".sh") or re.match(r"#!.*\b(ba|da)?sh\b", text):
        run = subprocess.run(["bash", "-n", full], capture_output=True, text=True, check=False)
        return run.stderr.strip() if run.returncode else None
    if path.endswith(".py"):
        try:
            compile(text, full, "exec")
        except SyntaxError as error:
            return f"{path}: {error}"
    return None


def text_faults(path, text):
    lines = text.splitlines()
    if len(lines) > LINE_LIMIT:
        yield f"{path}: {len(lines)} lines, the limit is {LINE_LIMIT}"
    for number, line in enumerate(lines, 1):
        match = UNFINISHED.search(line) or MACHINE_PATH.search(line)
        if match:
            yield f"{path}:{number}: {match.group()}: no unfinished work and no paths of one machine"


def check(root):
    faults = list(top_level_faults(root))
    for path in files_of(root):
        if path.endswith(BINARY):
            continue
        with open(os.path.join(root, path), encoding="utf-8", errors="replace") as stream:
            text = stream.read()
        faults.extend(text_faults(path, text))
        if path.endswith(CODE):
            faults.extend(code_faults(path, text))
        fault = script_fault(root, path, text)
        if fault:
            faults.append(fault)
    return faults


def main():
    root = sys.argv[1] if len(sys.argv) > 1 else os.path.join(os.path.dirname(os.path.abspath(__file__)), "..", "..")
    root = os.path.abspath(root)
    faults = check(root)
    for fault in faults:
        print(fault)
    print(f"repository rules: {sum(1 for _ in files_of(root))} files, {len(faults)} faults")
    return 1 if faults else 0


if __name__ == "__main__":
    sys.exit(main())
