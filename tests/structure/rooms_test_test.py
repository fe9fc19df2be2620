#!/usr/bin/python3
"""The table of rooms catches what it should: plants one wrong include of each kind in a copy."""
import pathlib
import shutil
import sys
import tempfile

sys.dont_write_bytecode = True
import rooms_test

PLANTS = [
    ("stimuli/rounding.cpp", "#include <cstdio>", "does no I/O"),
    ("stimuli/rounding.cpp", '#include "oracle/filters/filter.hpp"', "must not see"),
    ("oracle/measure/error.cpp", '#include "oracle/filters/filter.hpp"', "must not see"),
    ("oracle/arithmetic/described.cpp", "#include <kissfft/kissfft.hh>", "may not include"),
    ("runner/wire/frame.cpp", "#include <boost/asio.hpp>", "may not include"),
    ("runner/link/serial.cpp", "#include <boost/asio.hpp>", "enters only through"),
    ("runner/record/run_json.cpp", '#include "runner/config/rig.hpp"', "must not see"),
    ("runner/wire/frame.cpp", '#include "runner/world/result.hpp"', "sees only"),
    ("rigs/kit/kit.c", "#include <stdio.h>", "knows only C99"),
    ("rigs/filters/fir_q15.c", '#include "oracle/filters/filter.hpp"', "must not share"),
    ("runner/config/rig_file.cpp", '#include "plan.hpp"', "does not name its room"),
]


def main():
    root = pathlib.Path(sys.argv[1])
    failures = 0
    with tempfile.TemporaryDirectory() as folder:
        copy = pathlib.Path(folder) / "copy"
        for room in ("stimuli", "oracle", "runner", "rigs"):
            shutil.copytree(root / room, copy / room)
        for path, line, expected in PLANTS:
            file = copy / path
            before = file.read_text() if file.exists() else ""
            file.parent.mkdir(parents=True, exist_ok=True)
            file.write_text(line + "\n" + before)
            problems, _ = rooms_test.check(copy)
            if not any(path in problem and expected in problem for problem in problems):
                print(f"not caught: {line} in {path}")
                failures += 1
            if before:
                file.write_text(before)
            else:
                file.unlink()
    print(f"{len(PLANTS)} planted includes, {failures} not caught")
    return 1 if failures else 0


if __name__ == "__main__":
    sys.exit(main())
