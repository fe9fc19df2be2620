"""What the long tests share: the system tests' boards and plans, and how a figure is reported.

Every script here is started as  NAME.py BUILD_TREE , prints one line  what | required | reached  for each figure, and
ends with status 1 when one was not reached. tests/long/table makes a table of these lines.
"""
import contextlib
import json
import pathlib
import shutil
import sys
import tempfile

sys.path.insert(0, str(pathlib.Path(__file__).resolve().parents[1] / "system"))
sys.argv[1:2] = [str(pathlib.Path(word).absolute()) for word in sys.argv[1:2]]  # halflsb runs in other folders
import support  # noqa: E402  it takes BUILD_TREE from the command line

BITS_PER_BYTE = 10  # start, 8 data, stop


class Bench(support.Case):
    """The test case of the system tests, used as a bench: a folder of its own, and helpers to write rigs and plans."""

    def runTest(self):
        raise NotImplementedError("a bench is no test")


@contextlib.contextmanager
def bench():
    made = Bench()
    made.setUp()
    try:
        yield made
    finally:
        made.doCleanups()


class Figures:
    def __init__(self):
        self.missed = False

    def add(self, what, required, reached, holds):
        print(f"{what} | {required} | {reached}" + ("" if holds else " MISSED"), flush=True)
        self.missed = self.missed or not holds

    def end(self):
        sys.exit(1 if self.missed else 0)


def note(text):
    """For people; not part of the table."""
    print(f"# {text}", flush=True)


def noise_case(samples, name="noise", seed=7, level_ratio=1.0):
    return (f'[[case]]\nname = "{name}"\n[case.stimulus]\nshape = "noise"\nlevel_ratio = {level_ratio}\nseed = {seed}\n'
            f"length_samples = {samples}\n")


def moving_average(points):
    return f'[[filter]]\nkind = "moving-average"\npoints = {points}\n'


def passed_run(at, plan, rig, *options, status=0):
    """One `halflsb check`, which must end with this status; returns its record."""
    shutil.rmtree(at.folder / "run", ignore_errors=True)
    done = at.check(plan, rig, *options, limit_s=3600)
    if done.status != status:
        raise SystemExit(f"halflsb check: status {status} expected\n{done!r}")
    return at.record()


@contextlib.contextmanager
def virtual_board(at, *options):
    """A board, and a function that ends it and returns its own account (--stats)."""
    with tempfile.TemporaryDirectory() as folder:
        account = pathlib.Path(folder) / "stats.json"
        with at.virtual_board("--stats", account, *options) as board:

            def end():
                board.stop()
                return json.loads(account.read_text())

            yield end
