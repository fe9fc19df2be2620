"""The twins against NumPy, bit for bit, over more seeds than the one that tests/run draws:
tests/reference/twins_test.py, once for each of 1 .. SEEDS."""
import re
import subprocess
import sys

from measure import Figures, note, support

SEEDS = 30


def main():
    test = support.ROOT / "tests" / "reference" / "twins_test.py"
    program = support.TREE / "tests" / "reference" / "print_twins"
    figures, compared, failed = Figures(), 0, []
    for seed in range(1, SEEDS + 1):
        done = subprocess.run([sys.executable, "-B", str(test), str(program), str(seed)], capture_output=True, text=True)
        last = re.search(r"^(\d+) descriptions, 0 failures$", done.stdout, re.MULTILINE)
        if done.returncode == 0 and last:
            compared += int(last[1])
        else:
            failed.append(seed)
            note(f"seed {seed}:\n" + re.sub("^", "# ", done.stdout + done.stderr, flags=re.MULTILINE))
    text = f"{compared:,} compared, 420 codes each, none differs" if not failed else f"differences with the seeds {failed}"
    figures.add(f"descriptions in random arithmetic whose twin equals NumPy's, seeds 1 to {SEEDS}", "20,000, each to the bit",
                text, not failed and compared >= 20000)
    figures.end()


main()
