#!/usr/bin/python3
"""Holds expected.txt: what print_diagnostics prints, and that no message of the program is missing from it.

    diagnostics_test.py PRINT_DIAGNOSTICS SOURCES

With HALFLSB_UPDATE_DOCS=1 it writes expected.txt instead of comparing. A message is a string of three words or more in
the program's sources; each must stand in expected.txt, in the reference in docs, or in elsewhere.txt, which
says what else it is. So a new message fails this test until somebody has read it in its place.
"""
import os
import pathlib
import re
import subprocess
import sys

PROGRAM, SOURCES = pathlib.Path(sys.argv[1]), pathlib.Path(sys.argv[2])
HERE = pathlib.Path(__file__).resolve().parent
EXPECTED, ELSEWHERE = HERE / "expected.txt", HERE / "elsewhere.txt"
# What stands in the reference is held by the tests that write it: the help of words, of options and of exit statuses.
REFERENCE = ("docs/plan.md", "docs/rig.md", "docs/command.md", "docs/exit-status.md")
# And these write it, and the head of a baseline.
TABLES = {"runner/cli/exit_status.cpp", "runner/cli/help.cpp", "runner/cli/option_table.cpp",
          "runner/config/reference.cpp", "runner/record/baseline_toml.cpp",
          "runner/world/cautions.cpp"}


def messages_of(path):
    text = re.sub(r"^\s*//.*$", "", path.read_text(encoding="utf-8"), flags=re.M)
    text = re.sub(r'(?<=")\s+//[^\n]*', "", text)
    text = re.sub(r'(?<!\\)"\s*\n\s*"', "", text)
    text = re.sub(r'\.help\s*=\s*"(?:[^"\\]|\\.)*"', "", text)
    for match in re.finditer(r'"((?:[^"\\\n]|\\.)*)"', text):
        words = match.group(1).replace('\\"', '"').replace("\\n", "\n").replace("\\\\", "\\")
        if len(words.split()) >= 3:
            yield words


def one_line(text):
    return " ".join(text.split())


def main():
    printed = subprocess.run([PROGRAM], capture_output=True, timeout=300, env={**os.environ, "LC_ALL": "C.UTF-8"})
    if printed.returncode != 0:
        sys.exit(f"{PROGRAM.name} ended with {printed.returncode}:\n{printed.stderr.decode()}")
    text = printed.stdout.decode()
    if os.environ.get("HALFLSB_UPDATE_DOCS"):
        EXPECTED.write_text(text, encoding="utf-8")
    problems = []
    if EXPECTED.read_text(encoding="utf-8") != text:
        expected = EXPECTED.read_text(encoding="utf-8").splitlines()
        for number, (old, new) in enumerate(zip(expected + [""] * 9999, text.splitlines()), 1):
            if old != new:
                problems.append(f"{EXPECTED.name}:{number}: expected {old!r}, printed {new!r}; if the new text is right: "
                                "HALFLSB_UPDATE_DOCS=1, and read the difference")
                break
        else:
            problems.append(f"{EXPECTED.name} has lines that are printed no more")
    reference = " ".join((SOURCES / page).read_text(encoding="utf-8") for page in REFERENCE)
    known = one_line(text + " " + reference.replace("\\|", "|"))
    elsewhere = {line for line in ELSEWHERE.read_text(encoding="utf-8").splitlines() if line and not line.startswith("#")}
    used = set()
    for room in ("stimuli", "oracle", "runner"):
        for path in sorted((SOURCES / room).rglob("*.cpp")):
            name = path.relative_to(SOURCES).as_posix()
            if name in TABLES:
                continue
            for message in messages_of(path):
                words = one_line(message)
                if words in known:
                    continue
                if words in elsewhere:
                    used.add(words)
                    continue
                problems.append(f"{name}: provoked by no chapter, and not in {ELSEWHERE.name}: {words}")
    problems += [f"{ELSEWHERE.name}: no source has this any more: {words}" for words in sorted(elsewhere - used)]
    print("\n".join(problems) or f"{text.count(chr(10) + '# ')} diagnostics")
    sys.exit(1 if problems else 0)


main()
