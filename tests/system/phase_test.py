"""Phase, group delay, masks and the fraction of a latency on the virtual board: a right board passes, and a defect that
leaves the gain as it is fails by its phase."""
import shutil

from support import ROOT, Case, main

def case(rules):
    return '[[case]]\nname = "belt"\n[case.stimulus]\nshape = "noise"\nlevel_ratio = 0.5\nlength_samples = 100000\n' + \
        "".join(f"[[case.rule]]\n{rule}\n" for rule in rules)


class Phase(Case):
    def judged(self, rules, faults=(), board_filter="load-cell",
               filter_text='[[filter]]\nkind = "moving-average"\npoints = 16\n'):
        self.write("quick.txt", (ROOT / "rigs/filters/coefficients/quick-smoothing.txt").read_text())
        self.write("mask.csv", "from_hz,to_hz,min_db,max_db\n0,20,-2,0.1\n20,70,,0.1\n70,600,,-12\n")
        shutil.rmtree(self.folder / "run", ignore_errors=True)
        plan = self.plan(case(rules), board_filter=board_filter, filter_text=filter_text, rules="")
        with self.virtual_board(*[word for fault in faults for word in ("--fault", fault)]):
            return self.check(plan, self.rig())

    def rules(self):
        return self.record()["verdict"]["cases"][0]["rules"]

    def test_reversed_taps_are_found_by_the_phase_and_not_by_the_gain(self):
        gain = 'kind = "response"\nbands = [{ from_hz = 5, to_hz = 40, min_db = -0.5, max_db = 0.5 }]\n' \
               'relative_to = "design"'
        phase = 'kind = "response"\nmax_phase_deg = 1\nmax_group_delay_samples = 0.1'
        filter_text = '[[filter]]\nkind = "fir"\ntaps_file = "quick.txt"\n'
        self.assert_status(self.judged([gain, phase], (), "quick-smoothing", filter_text), 0)
        done = self.judged([gain, phase], ("C10",), "quick-smoothing", filter_text)
        self.assert_status(done, 1)
        verdicts = [rule["verdict"] for rule in self.rules() if rule["kind"] == "response"]
        self.assertEqual(verdicts, ["pass", "fail"])
        self.assertIn("phase off the design", done.out)

    def test_a_mask_of_a_file_and_one_of_a_standard(self):
        mask = 'kind = "response"\nmask_file = "mask.csv"'
        self.assert_status(self.judged([mask]), 0)
        done = self.judged(['kind = "response"\nmask = "c-weighting class 1"'])
        self.assert_status(done, 1)
        self.assertIn("IEC 61672-1:2013, table 3, class 1, with 0 dB at 1000 Hz", " ".join(done.out.split()))
        reason = [rule["reason"] for rule in self.rules() if rule["kind"] == "response"][0]
        self.assertIn("filter within the weighting limits, not instrument conformity", reason)
        self.assertIn("what lies above 600 Hz is left out", reason)

    def test_a_latency_has_its_fraction(self):
        rule = 'kind = "latency"\nlatency_samples = 0\nmax_fraction_samples = 0.01'
        self.assert_status(self.judged([rule]), 0)
        [latency] = [rule for rule in self.rules() if rule["kind"] == "latency"]
        figures = {figure["name"]: figure for figure in latency["figures"]}
        self.assertLess(figures["fraction"]["value"], 0.001)
        # A whole sample is no fraction of one.
        self.assert_status(self.judged([rule], ("S01",)), 1)
        [latency] = [rule for rule in self.rules() if rule["kind"] == "latency"]
        figures = {figure["name"]: figure for figure in latency["figures"]}
        self.assertEqual(figures["latency"]["value"], 1)
        self.assertEqual(figures["fraction"]["verdict"], "pass")


if __name__ == "__main__":
    main()
