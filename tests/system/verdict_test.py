"""The main job on the virtual board: a healthy board passes, each fault is refused by the rule that should see it."""
from support import MOVING_AVERAGE, NOISE, STEP, Case, main
import support


class Verdicts(Case):
    def run_with(self, *options, cases=NOISE, **plan):
        with self.virtual_board(*options):
            done = self.check(self.plan(cases, **plan), self.rig())
        return done, self.record()

    def verdicts(self, record, case=0):
        return {rule["kind"]: rule["verdict"] for rule in record["verdict"]["cases"][case]["rules"]}

    def test_a_healthy_board_passes_and_the_record_is_whole(self):
        done, record = self.run_with(cases=NOISE + STEP)
        self.assert_status(done, 0)
        self.assertEqual(done.err, "")
        self.assertIn("2 pass, 0 fail, 0 invalid, 0 undecided, 0 not run", done.out)
        self.assertIn("firmware not verified", done.out)
        self.assertTrue(record["finished"])
        self.assertEqual([case["grade"] for case in record["verdict"]["cases"]], ["proven", "proven"])
        self.assertEqual(record["cases"][0]["stream"]["received_samples"], 6000)
        self.assertTrue((self.folder / "run" / record["cases"][0]["capture"]["file"]).is_file(), record["cases"][0])

    def test_the_capture_is_what_an_integer_model_says(self):
        import numpy as np

        _, record = self.run_with(cases=STEP)
        capture = np.load(self.folder / "run" / record["cases"][0]["capture"]["file"])
        step = np.where(np.arange(600) >= 10, 16384, 0)
        running = np.convolve(step, np.ones(16, dtype=int))[:600]
        np.testing.assert_array_equal(capture, (running + 8) >> 4)
        self.assertEqual(capture.dtype, np.dtype("<i2"))

    def test_truncation_fails_the_error_rule_and_shows_the_first_bad_sample(self):
        done, record = self.run_with("--fault", "A01")
        self.assert_status(done, 1)
        self.assertEqual(self.verdicts(record), {"error": "fail", "latency": "pass"})
        self.assertIn("first bad sample: ", done.out)
        self.assertIn("rerun: halflsb check ", done.out)
        self.assertIn("plan.toml:", done.out)

    def test_a_late_sample_fails_latency_alone(self):
        done, record = self.run_with("--fault", "S01")
        self.assert_status(done, 1)
        self.assertEqual(self.verdicts(record), {"error": "pass", "latency": "fail"})
        self.assertIn("judged at the measured lag of 1 sample", done.out)

    def test_each_fault_of_a_moving_average_is_refused(self):
        for fault in ("A02", "A05", "A10", "S02", "S11", "S20", "N04", "N06", "D01", "D03", "D04", "C05"):
            with self.subTest(fault):
                self.link.unlink(missing_ok=True)
                done, record = self.run_with("--fault", fault)
                self.assert_status(done, 1)
                self.assertEqual(self.verdicts(record)["error"], "fail")
                self.cleanup_run()

    def test_a_reset_that_does_nothing_is_seen_in_the_second_case(self):
        for fault in ("S06", "S07"):
            with self.subTest(fault):
                done, record = self.run_with("--fault", fault, cases=NOISE + NOISE.replace('"noise"\n[', '"again"\n['))
                self.assert_status(done, 1)
                self.assertEqual([case["verdict"] for case in record["verdict"]["cases"]], ["pass", "fail"])
                self.cleanup_run()

    def test_a_response_rule_sees_a_wider_window(self):
        rule = '[[rule]]\nkind = "response"\nbands = [{ from_hz = 74.7, to_hz = 75.3, max_db = -40.0 }]\n'
        noise = NOISE.replace("6000", "40960")
        done, _ = self.run_with(cases=noise, rules=rule)
        self.assert_status(done, 0)
        self.cleanup_run()
        done, record = self.run_with("--fault", "S02", cases=noise, rules=rule)
        self.assert_status(done, 1)
        self.assertEqual(self.verdicts(record)["response"], "fail")

    def test_a_tone_rule_sees_a_repeated_half_buffer(self):
        rule = '[[rule]]\nkind = "tone"\nmin_sinad_db = 85.0\nmin_enob_bits = 14.0\nmax_thd_db = -85.0\nmin_sfdr_db = 85.0\n'
        sine = """[[case]]
name = "belt frequency"
[case.stimulus]
shape = "sine"
frequency_hz = 30.7
level_ratio = 0.9
length_samples = 4096
"""
        done, record = self.run_with(cases=sine, rules=rule)
        self.assert_status(done, 0)
        self.assertEqual(self.verdicts(record)["tone"], "pass")
        self.cleanup_run()
        done, record = self.run_with("--fault", "D01", cases=sine, rules=rule)
        self.assert_status(done, 1)
        self.assertEqual(self.verdicts(record)["tone"], "fail")
        self.assertIn("sinad", done.out)

    def test_a_transition_rule_sees_a_wider_window_and_a_wrong_gain(self):
        rule = '[[rule]]\nkind = "transition"\nmax_rise_samples = 13.0\nmax_overshoot_percent = 0.1\nmax_settling_samples = 8.5\nfinal_lsb = 1.0\n'
        step = STEP.replace("at_samples = 10", "at_samples = 64")
        done, record = self.run_with(cases=step, rules=rule)
        self.assert_status(done, 0)
        self.assertEqual(self.verdicts(record)["transition"], "pass")
        self.cleanup_run()
        for fault, bad in (("S02", "settling"), ("C05", "final error")):
            with self.subTest(fault):
                done, record = self.run_with("--fault", fault, cases=step, rules=rule)
                self.assert_status(done, 1)
                transition = next(rule for rule in record["verdict"]["cases"][0]["rules"] if rule["kind"] == "transition")
                self.assertIn(bad, [figure["name"] for figure in transition["figures"] if figure["verdict"] == "fail"])
                self.cleanup_run()

    def test_the_same_seed_gives_the_same_run_and_another_seed_another(self):
        import numpy as np

        captures = []
        for seed in (1, 1, 2):
            with self.virtual_board():
                self.assert_status(self.check(self.plan(NOISE), self.rig(), "--seed", seed), 0)
            record = self.record()
            self.assertEqual(record["seed"], seed)
            captures.append(np.load(self.folder / "run" / record["cases"][0]["capture"]["file"]))
            self.cleanup_run()
        np.testing.assert_array_equal(captures[0], captures[1])
        self.assertFalse(np.array_equal(captures[0], captures[2]))

    def test_one_case_can_be_chosen_by_name_or_pattern(self):
        with self.virtual_board():
            done = self.check(self.plan(NOISE + STEP), self.rig(), "--case", "st*")
        self.assert_status(done, 0)
        self.assertEqual([case["name"] for case in self.record()["cases"]], ["step"])

    def test_the_rerun_command_repeats_the_case_whatever_its_name(self):
        for name in ("--help", "it's; $(touch evil) *?"):
            with self.subTest(name):
                cases = NOISE.replace('name = "noise"', f'name = "{name}"') + STEP
                with self.virtual_board("--fault", "A01"):
                    done = self.check(self.plan(cases), self.rig())
                    command = next(line for line in done.out.splitlines() if "rerun: " in line).split("rerun: ")[1]
                    again = support.subprocess.run(["sh", "-c", command.replace("halflsb", str(support.HALFLSB), 1)], cwd=self.folder,
                                                   capture_output=True, text=True, timeout=support.LIMIT_S)
                self.assertEqual(again.returncode, 1, again.stdout + again.stderr)
                self.assertIn("1/1", again.stdout)
                self.assertFalse((self.folder / "evil").exists())
                self.cleanup_run()

    def design(self, kind, name, bits=None):
        """A [[filter]] with the coefficients that the board's tables were made from."""
        numbers = " ".join((support.ROOT / f"rigs/filters/coefficients/{name}.txt").read_text().split()).replace(" ", ", ")
        key = "taps" if kind == "fir" else "sections"
        values = [number for number in numbers.split(", ")]
        if kind != "fir":
            rows = [values[i:i + 5] for i in range(0, len(values), 5)]
            numbers = ", ".join("[" + ", ".join(row) + "]" for row in rows)
        fraction = "" if bits is None else f"coefficient_fraction_bits = {bits}\n"
        return f'[[filter]]\nkind = "{kind}"\n{key} = [{numbers}]\n{fraction}'

    def test_every_sample_format_travels_and_is_judged_in_its_own_unit(self):
        settle = self.design("biquad-cascade", "settle", 30)
        for word, board_filter, text, limit in (
            ("q31", "settle-q31", settle, "max_lsb = 200.0"),
            ("i16", "average-i16", MOVING_AVERAGE, "max_lsb = 0.5"),
            ("i32", "average-i32", MOVING_AVERAGE, "max_lsb = 0.5"),
            ("f32", "settle-f32", self.design("biquad-cascade", "settle"), "max_ratio = 1e-4"),
        ):
            with self.subTest(word):
                rules = f'[[rule]]\nkind = "error"\n{limit}\n'
                plan = self.plan(NOISE, board_filter=board_filter, filter_text=text, rules=rules)
                plan.write_text(plan.read_text().replace('"q15"', f'"{word}"'))
                with self.virtual_board():
                    done = self.check(plan, self.rig())
                self.assert_status(done, 0)
                self.assertIn(f"{word} in, {word} out", done.out)
                self.cleanup_run()

    def test_faults_of_fir_and_biquad_are_refused_and_the_right_board_is_not(self):
        smoothing, quick = self.design("fir", "smoothing", 15), self.design("fir", "quick-smoothing", 15)
        notch, settle = (self.design("biquad-cascade", name, 14) for name in ("mains-notch", "settle"))
        quiet = NOISE.replace("0.9", "0.3")
        # The overshoot of a full-scale step leaves the word: the place where wrapping shows.
        rail = STEP.replace("0.5", "1.0")
        for board_filter, text, cases, limit, faults in (
            ("smoothing", smoothing, NOISE, 0.5, ("A01", "A02", "A04", "A05", "C03")),
            ("smoothing", smoothing, rail, 0.5, ("A07",)),
            ("quick-smoothing", quick, NOISE, 0.5, ("C10", "C05")),
            # Limits of the biquads: half the L1 norm of each rounding's path, as in cortex_m4_test.
            ("mains-notch", notch, quiet, 15.0, ("C03", "C05", "C07", "S11")),
            ("settle", settle, quiet, 250.0, ("A04", "C05", "C07", "S11")),
        ):
            for fault in (None, *faults):
                with self.subTest(f"{board_filter} {fault}"):
                    rules = f'[[rule]]\nkind = "error"\nmax_lsb = {limit}\n'
                    options = () if fault is None else ("--fault", fault)
                    done, record = self.run_with(*options, cases=cases, board_filter=board_filter, filter_text=text, rules=rules)
                    self.assert_status(done, 0 if fault is None else 1)
                    self.cleanup_run()

    def cleanup_run(self):
        support.shutil.rmtree(self.folder / "run", ignore_errors=True)


if __name__ == "__main__":
    main()
