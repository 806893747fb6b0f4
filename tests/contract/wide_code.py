#!/usr/bin/env python3
"""Shows that no code compiled for a wide CPU target can run on a processor without it.

Usage: wide_code.py ARCHIVE    e.g. libfarsum_fmm.a; exit status 0 = sound.
A function that several objects define (weak or unique symbol) may be kept from any of them by the linker. In an object
target_T.cpp.o such a symbol must therefore belong to the namespace farsum::kernels::T; one of any other name could carry wide
instructions into the portable path.
"""
import re
import subprocess
import sys

MEMBER = re.compile(r"(?:^|[(/])target_(\w+)\.cpp\.o[):]")
SYMBOL = re.compile(r"^[0-9a-f]+ ([A-Za-z]) (.*)$")
SHARED_KINDS = "WVuv"  # weak functions and objects, unique objects


def faults_of(listing):
    """Faults in the text of `nm --defined-only --demangle ARCHIVE`, and the targets that were seen."""
    faults, targets, target = [], set(), None
    for line in listing.splitlines():
        symbol = SYMBOL.match(line)
        if not symbol:
            if line.endswith(":"):
                member = MEMBER.search("/" + line)
                target = member.group(1) if member else None
                if target:
                    targets.add(target)
        elif target and symbol.group(1) in SHARED_KINDS and f"farsum::kernels::{target}::" not in symbol.group(2):
            faults.append(f"target_{target}.cpp.o: shares {symbol.group(2)}")
    return faults, targets


def main():
    run = subprocess.run(["nm", "--defined-only", "--demangle", sys.argv[1]], capture_output=True, text=True, check=True)
    faults, targets = faults_of(run.stdout)
    for fault in faults:
        print(fault)
    print(f"wide code: targets {', '.join(sorted(targets)) or 'none'}, {len(faults)} faults")
    return 1 if faults or "portable" not in targets else 0


if __name__ == "__main__":
    sys.exit(main())
