"""Every sample of a 1,000,000-sample noise case over a pseudo-terminal comes back once and in order.

The same stimulus is sent twice: to a board that returns its input (fault S20), which shows what was sent, and to a right
one. What the right one returned must equal an integer moving average of what was sent, made here with NumPy.
"""
import numpy as np

from measure import Figures, bench, moving_average, noise_case, passed_run, virtual_board

SAMPLES, POINTS = 1_000_000, 16


def capture_of(at, record):
    (case,) = record["cases"]
    return np.load(at.folder / "run" / case["capture"]["file"])


def run(at, points, max_lsb, *faults):
    plan = at.plan(noise_case(SAMPLES), filter_text=moving_average(points), rules=f'[[rule]]\nkind = "error"\nmax_lsb = {max_lsb}\n')
    with virtual_board(at, *faults) as end:
        record = passed_run(at, plan, at.rig())
        return capture_of(at, record), record["cases"][0]["stream"], end()


def main():
    figures = Figures()
    with bench() as at:
        sent, _, _ = run(at, 1, 0, "--fault", "S20")
        came_back, stream, account = run(at, POINTS, 0.5)
    wide = np.concatenate([np.zeros(POINTS, np.int64), np.cumsum(sent, dtype=np.int64)])
    expected = (wide[POINTS:] - wide[:-POINTS] + POINTS // 2) >> 4
    distinct = len(np.unique(sent))
    if distinct < 60_000:
        raise SystemExit(f"the stimulus has only {distinct} different codes: that is no full-scale noise")
    right = int(np.count_nonzero(came_back == expected)) if len(came_back) == len(expected) else 0
    holds = (right == SAMPLES and len(sent) == SAMPLES and stream["sent_samples"] == stream["received_samples"] == SAMPLES
             and account["samples"] == SAMPLES)
    figures.add("1,000,000-sample noise case over a pseudo-terminal", "every sample back once and in order",
                f"{right:,} of {len(came_back):,} equal NumPy's integer moving average; the board filtered {account['samples']:,}, "
                f"{stream['resends']} resends", holds)
    figures.end()


main()
