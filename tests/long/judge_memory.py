"""Judging a run of 20 cases of 1,000,000 samples needs no more memory than judging one of them: captures are read in
blocks. Peak resident memory of the whole process, both times of the same run's folder."""
import ctypes
import os
import subprocess

from measure import Figures, bench, moving_average, noise_case, passed_run, support, virtual_board

CASES, SAMPLES = 20, 1_000_000
# A run.json of 20 cases instead of one and its reports: far below a single capture of 1,000,000 samples, 2 MB.
MOST_GROWTH_MIB = 1.0


PR_SET_CHILD_SUBREAPER = 36  # linux/prctl.h


def peak_mib(*words):
    """Of halflsb alone: a direct child would count this interpreter's own peak, which it has until it starts the program.
    setsid forks once more, and the grandchild becomes ours."""
    subprocess.run(["setsid", "--fork", str(support.HALFLSB), *map(str, words)], stdout=subprocess.DEVNULL, check=True)
    _, status, usage = os.wait4(-1, 0)
    if os.waitstatus_to_exitcode(status) != 0:
        raise SystemExit(f"halflsb {words}: status {os.waitstatus_to_exitcode(status)}")
    return usage.ru_maxrss / 1024


def main():
    figures = Figures()
    ctypes.CDLL(None).prctl(PR_SET_CHILD_SUBREAPER, 1, 0, 0, 0)
    with bench() as at:
        cases = "\n".join(noise_case(SAMPLES, name=f"noise {number}", seed=number) for number in range(CASES))
        response = ('[[rule]]\nkind = "response"\nbands = [{ from_hz = 10.0, to_hz = 60.0, min_db = -60.0, max_db = 60.0 }]\n')
        rules = '[[rule]]\nkind = "error"\nmax_lsb = 0.5\n' + response
        with virtual_board(at):
            passed_run(at, at.plan(cases, filter_text=moving_average(16), rules=rules), at.rig())
        run = at.folder / "run"
        one = min(peak_mib("judge", run, "--case", "noise 0") for _ in range(3))
        all_of_them = min(peak_mib("judge", run) for _ in range(3))
    figures.add(f"judge: memory for {CASES} cases of {SAMPLES:,} samples beyond that for one", f"< {MOST_GROWTH_MIB} MiB",
                f"{all_of_them - one:.2f} MiB, {all_of_them:.1f} MiB at the peak", all_of_them - one < MOST_GROWTH_MIB)
    figures.end()


main()
