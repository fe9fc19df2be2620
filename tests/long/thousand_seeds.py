"""A healthy board passes 1,000 seeds: as many noise cases in one run, each judged by error and latency."""
from measure import Figures, bench, moving_average, noise_case, passed_run, virtual_board

SEEDS, SAMPLES = 1000, 2000


def main():
    figures = Figures()
    cases = "".join(noise_case(SAMPLES, name=f"seed {seed}", seed=seed) for seed in range(1, SEEDS + 1))
    # The bias of half-up over 16 points is 2^-5 LSB; the mean of 2000 errors, each uniform over 1 LSB and alike over 16
    # samples, wanders by 0.29 x sqrt(16 / 2000) = 0.026 LSB at most: 0.2 is more than 6 of these.
    rules = '[[rule]]\nkind = "error"\nmax_lsb = 0.5\nbias_lsb = 0.2\n[[rule]]\nkind = "latency"\nlatency_samples = 0\n'
    with bench() as at, virtual_board(at):
        record = passed_run(at, at.plan(cases, filter_text=moving_average(16), rules=rules), at.rig())
    passed = [case for case in record["verdict"]["cases"] if case["verdict"] == "pass" and case["grade"] == "proven" and case["latency_told"]]
    captures = {case["capture"]["sha256"] for case in record["cases"]}
    figures.add("seeds that a healthy board passes", f"{SEEDS:,} of {SEEDS:,}",
                f"{len(passed):,} of {len(record['cases']):,}, {SAMPLES:,} samples each, {len(captures):,} different captures",
                len(passed) == SEEDS and len(captures) == SEEDS)
    figures.end()


main()
