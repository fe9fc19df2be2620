"""The twins of oracle/arithmetic against numpy_twins.py, bit for bit, over random arithmetic descriptions and over the
plans of the boards' filters, rigs/cw-7/exact.

    twins_test.py PROGRAM [SEED]        PROGRAM is print_twins
"""
import collections
import pathlib
import subprocess
import sys
import time

import numpy_twins
import twin_cases
import twin_filters

CASES_PER_KIND = 60
SHOWN_FAILURES = 12
RIGS = pathlib.Path(__file__).resolve().parents[2] / "rigs"


def cases_of_plans(draw):
    for path in sorted((RIGS / "cw-7/exact").glob("*.toml")):
        if path.stem != "cases":
            case = numpy_twins.case_of_plan(path, RIGS)
            yield case | {"codes": twin_cases.codes_of(draw, case["input"])}


def text_of(value):
    """A value as print_twins reads it: its type, then its digits, none of them lost."""
    if isinstance(value, str):
        return f"text {value}"
    if isinstance(value, int):
        return f"whole {value}"
    if isinstance(value, float):
        return f"real {value.hex()}"
    if isinstance(value[0], list):
        return "sections " + " ".join(number.hex() for row in value for number in row)
    return "reals " + " ".join(float(number).hex() for number in value)


def message_of(case):
    lines = [f"input {case['input']}", f"output {case['output']}", f"output_per_input {case['output_per_input'].hex()}"]
    for kind, words, arithmetic in case["stages"]:
        lines.append(f"stage {kind}")
        lines += [f"filter {name} {text_of(value)}" for name, value in words.items()]
        lines += [f"arithmetic {name} {text_of(value)}" for name, value in arithmetic.items()]
    lines.append("codes " + " ".join(str(code) for code in case["codes"]))
    return "\n".join(lines) + "\n"


def ask(program, message):
    done = subprocess.run([program], input=message, stdout=subprocess.PIPE, text=True, check=True)
    return done.stdout.splitlines()


def described(case):
    stages = "; ".join(f"{kind} {words} {arithmetic}" for kind, words, arithmetic in case["stages"])
    return f"{case['input']} -> {case['output']} (x {case['output_per_input']}): {stages}"


def deviation(case, line):
    """None, or what is wrong with the answer of print_twins."""
    expected = numpy_twins.chain_of_case(case).process(case["codes"])
    if not line.startswith("codes"):
        return line
    codes = [int(text) for text in line.split()[1:]]
    if len(codes) != len(expected):
        return f"{len(codes)} codes, expected {len(expected)}"
    for n, (got, wanted) in enumerate(zip(codes, expected)):
        if got != wanted:
            return f"sample {n}: {got}, expected {wanted}; before it {expected[max(0, n - 3) : n]}"
    return None


def main():
    program = sys.argv[1]
    seed = int(sys.argv[2]) if len(sys.argv) > 2 else time.time_ns() % 2**32
    print(f"seed {seed} (repeat with: twins_test.py PROGRAM {seed})")
    draw = twin_filters.Draw(seed)
    known = ask(program, "kinds\n")[0].split()
    kinds = [kind for kind in numpy_twins.STRUCTURES if kind in known]
    cases = [twin_cases.random_case(draw, kinds, kind) for kind in kinds for _ in range(CASES_PER_KIND)]
    cases += cases_of_plans(draw)
    lines = ask(program, "".join(message_of(case) for case in cases))
    failures, shown, covered = abs(len(lines) - len(cases)), 0, collections.Counter()
    for number, (case, line) in enumerate(zip(cases, lines)):
        problem = deviation(case, line)
        if problem:
            failures += 1
            shown += 1
            if shown <= SHOWN_FAILURES:
                print(f"FAILED case {number}: {problem}\n    {described(case)}")
        for stage in numpy_twins.chain_of_case(case).stages:
            covered[f"{stage.number} {stage.kind} {stage.structure or ''}"] += 1
    for what, count in sorted(covered.items()):
        print(f"{count:5} {what}")
    print(f"{len(cases)} descriptions, {failures} failures")
    return 1 if failures else 0


sys.exit(main())
