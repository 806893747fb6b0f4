#!/usr/bin/env python3
"""Reads every include line of the project and reports those that break the order of dependencies.

Usage: layering.py [ROOT]    prints one line a fault; exit status 0 = none, 1 = some.
Rules: a file includes lower ranks, its own folder, or rank 0 of its own part; folders of equal rank stay apart; fmm/ never sees
io/; io/ sees only the public headers of fmm/; apps/ sees both; nothing outside includes apps/, tests/ or bench/; public headers
include only public headers; no circle of files; a folder without a rank is a fault, so a new one gets its rank here first.
"""
import os
import re
import sys

SOURCE_SUFFIXES = (".hpp", ".cpp", ".h", ".c", ".inc", ".in")

# Part, then folder (or stem of a file that lies directly in the part) -> rank. "medium" holds one folder a Green's function.
RANKS = {
    "fmm": {
        "options": 0, "error": 0, "report": 0, "points": 0, "version": 0,
        "base": 1,
        "parallel": 2,
        "domain": 3, "medium": 3, "kernels": 3,  # kernels know raw arrays only; expansion/ builds the tables they take
        "octree": 4, "expansion": 4,
        "traversal": 5, "lattice": 5, "verification": 5,
        "schedule": 6,
        "solver": 7,
        "models": 8,
        "farsum_c": 9,
    },
    # Headers directly in io/ are public and of rank 0, their sources stand above the folders: one folder a file format.
    "io": {"hdf5": 1, "summary": 1, "openpmd": 2, "text": 2},
}
# Which other parts a part may see at all.
PARTS_SEEN = {
    "fmm": (),
    "io": ("fmm",),
    "apps": ("fmm", "io"),
    "tests": ("fmm", "io"),
    "bench": ("fmm", "io"),
}
# Folders of fmm/ whose headers are installed, beside those directly in fmm/.
PUBLIC_FOLDERS = ("models",)
IO_SOURCE_RANK = 50

INCLUDE = re.compile(r'^[ \t]*#[ \t]*include[ \t]*([<"])([^>"]+)[>"]')


class File:
    """Place of one file (path from the root): its part, unit (folder or stem) and whether its header is installed."""

    def __init__(self, path):
        self.path = path
        pieces = path.split("/")
        self.part = pieces[0]
        direct = len(pieces) == 2
        self.unit = os.path.splitext(pieces[1])[0] if direct else pieces[1]
        self.direct = direct
        header = path.endswith((".hpp", ".h"))
        self.public = header and (direct or (self.part == "fmm" and self.unit in PUBLIC_FOLDERS))

    def rank(self):
        ranks = RANKS.get(self.part)
        if ranks is None:
            return None
        if self.part == "io" and self.direct:
            return 0 if self.public else IO_SOURCE_RANK
        return ranks.get(self.unit)


def source_files(root):
    """Paths from the root of all C and C++ files in the parts, sorted."""
    found = []
    for part in PARTS_SEEN:
        for folder, folders, files in os.walk(os.path.join(root, part)):
            folders[:] = [name for name in folders if not name.startswith(".") and name != "__pycache__"]
            for name in files:
                if name.endswith(SOURCE_SUFFIXES):
                    found.append(os.path.relpath(os.path.join(folder, name), root))
    return sorted(found)


def without_block_comments(text):
    """The text with /* */ comments blanked; line breaks stay, so line numbers do too."""
    return re.sub(r"/\*.*?\*/", lambda match: re.sub(r"[^\n]", " ", match.group()), text, flags=re.S)


def includes_of(root, path):
    """(line number, is quoted, name) of each include line."""
    with open(os.path.join(root, path), encoding="utf-8") as stream:
        text = without_block_comments(stream.read())
    for number, line in enumerate(text.splitlines(), 1):
        match = INCLUDE.match(line)
        if match:
            yield number, match.group(1) == '"', match.group(2)


def order_fault(source, target):
    """Why `source` may not include `target`, or None."""
    if source.part != target.part:
        if target.part not in PARTS_SEEN[source.part]:
            return f"{source.part}/ must not see {target.part}/"
        if source.part in ("io", "apps") and not target.public:
            return f"{source.part}/ sees only public headers of {target.part}/"
        return None
    if source.part not in RANKS:
        return None
    if source.public and not target.public:
        return "a public header includes an internal one"
    if source.unit == target.unit and source.direct == target.direct:
        return None
    source_rank, target_rank = source.rank(), target.rank()
    if source_rank is None or target_rank is None:
        return None  # reported once a folder by rank_faults
    if target_rank > source_rank:
        return f"upward: rank {source_rank} includes rank {target_rank}"
    if target_rank == source_rank and target_rank != 0:
        return f"sideways: both have rank {source_rank}"
    return None


def rank_faults(paths):
    """Folders and top files of fmm/ and io/ that nobody gave a rank."""
    missing = sorted({f"{file.part}/{file.unit}" for file in map(File, paths) if file.part in RANKS and file.rank() is None})
    return [f"{unit}: no rank; add it to RANKS in tests/contract/layering.py" for unit in missing]


def circle_faults(graph):
    """One line for each circle of include lines met in a depth-first walk."""
    faults, state = [], {}

    def visit(path, trail):
        state[path] = "open"
        for target in graph.get(path, ()):
            if state.get(target) == "open":
                circle = trail[trail.index(target):] + [target]
                faults.append(f"{path}: circle: {' -> '.join(circle)}")
            elif target not in state:
                visit(target, trail + [target])
        state[path] = "done"

    for path in sorted(graph):
        if path not in state:
            visit(path, [path])
    return faults


def check(root):
    """All faults of the tree at `root`, as printable lines."""
    paths = source_files(root)
    known = set(paths)
    faults, graph = rank_faults(paths), {}
    for path in paths:
        source, targets = File(path), []
        for number, quoted, name in includes_of(root, path):
            generated = name + ".in" in known
            if name in known or generated:
                if not generated:
                    targets.append(name)
                fault = order_fault(source, File(name))
            else:
                to_configure = path.endswith(".in") and "@" in name
                fault = "not found from the repository root" if quoted and not to_configure else None
            if fault:
                faults.append(f"{path}:{number}: {name}: {fault}")
        graph[path] = targets
    return faults + circle_faults(graph)


def main():
    root = sys.argv[1] if len(sys.argv) > 1 else os.path.join(os.path.dirname(os.path.abspath(__file__)), "..", "..")
    faults = check(root)
    for fault in faults:
        print(fault)
    print(f"layering: {len(source_files(root))} files, {len(faults)} faults")
    return 1 if faults or not source_files(root) else 0


if __name__ == "__main__":
    sys.exit(main())
