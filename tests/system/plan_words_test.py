"""What a plan says of a case beyond its stimulus, on boards: start states, settings, channels, sample formats, attempts."""
from support import MOVING_AVERAGE, Case, main
import support

LOUD = """[[case]]
name = "loud"
[case.stimulus]
shape = "noise"
level_ratio = 0.9
seed = 3
length_samples = 3000
"""


def quiet(start, name="quiet", more=""):
    """A case so soft that anything the loud one left in the filter would break half an LSB."""
    return f"""[[case]]
name = "{name}"
{start}
[case.stimulus]
shape = "noise"
level_ratio = 0.01
seed = 4
length_samples = 2000
{more}
"""


class PlanWords(Case):
    def run_on(self, cases, *options, board_filter="load-cell", rig_more="", word=None, signal="", **plan):
        """Runs the plan on a fresh virtual board that has this filter alone; a second call gets a folder of its own."""
        support.shutil.rmtree(self.folder / "run", ignore_errors=True)
        file = self.plan(cases, board_filter=board_filter, signal=signal, **plan)
        if word:
            file.write_text(file.read_text().replace('put = "q15"', f'put = "{word}"'))
        with self.virtual_board("--filter-set", board_filter, *options):
            done = self.check(file, self.rig(more=rig_more))
        return done, self.record()

    def capture(self, record, name):
        """The capture of the case of that name."""
        import numpy as np

        case = next(case for case in record["cases"] if case["name"] == name)
        return np.load(self.folder / "run" / case["capture"]["file"])

    def case_verdicts(self, record):
        """By name, wherever this version of the record keeps verdicts."""
        cases = record["verdict"]["cases"] if "verdict" in record else record["cases"]
        return {case["name"]: case["verdict"] for case in cases}

    # --- start states

    def test_flush_after_a_loud_case_passes_where_running_on_too_early_fails(self):
        done, record = self.run_on(LOUD + quiet('start = "flush"'))
        self.assert_status(done, 0)
        self.assertEqual(self.case_verdicts(record), {"loud": "pass", "quiet": "pass"})
        # 16 points: 15 zeros leave nothing.
        self.assertEqual(record["cases"][1]["start_samples"], 15)
        self.assertEqual(record["cases"][1]["stream"]["received_samples"], 2015)
        self.assertEqual(len(self.capture(record, "quiet")), 2000)

        done, record = self.run_on(LOUD + quiet('start = "running"\ndiscard_samples = 5'))
        self.assert_status(done, 1)
        self.assertEqual(self.case_verdicts(record), {"loud": "pass", "quiet": "fail"})

    def test_running_on_with_enough_discarded_passes_and_records_all(self):
        import numpy as np

        done, record = self.run_on(LOUD + quiet('start = "running"\ndiscard_samples = 15'))
        self.assert_status(done, 0)
        running = self.capture(record, "quiet")
        done, record = self.run_on(quiet(""))
        self.assert_status(done, 0)
        fresh = self.capture(record, "quiet")
        self.assertEqual(len(running), 2000)
        # The first 15 hold what the loud case left, everything after them is the quiet case alone.
        self.assertTrue(np.any(running[:15] != fresh[:15]))
        np.testing.assert_array_equal(running[15:], fresh[15:])

    def test_a_reset_that_does_nothing_is_survived_by_a_flush(self):
        for start, verdict in (("", "fail"), ('start = "flush"', "pass")):
            with self.subTest(start):
                _, record = self.run_on(LOUD + quiet(start), "--fault", "S07")
                self.assertEqual(self.case_verdicts(record)["quiet"], verdict)

    # --- settings

    def test_a_setting_of_one_case_is_restored_for_the_next(self):
        import numpy as np

        settings = "[case.settings]\naverage-points = 1\n"
        cases = quiet("", "before") + quiet("", "one point", settings) + quiet("", "after")
        done, record = self.run_on(cases, board_filter="average")
        self.assert_status(done, 1)
        self.assertEqual(self.case_verdicts(record), {"before": "pass", "one point": "fail", "after": "pass"})
        np.testing.assert_array_equal(self.capture(record, "before"), self.capture(record, "after"))

    def test_a_setting_is_put_back_at_the_end_of_the_run(self):
        plan = self.plan(quiet("", "one point", "[case.settings]\naverage-points = 1\n"), board_filter="average")
        again = self.plan(quiet(""), board_filter="average", name="again.toml")
        with self.virtual_board("--filter-set", "average"):
            self.assert_status(self.check(plan, self.rig()), 1)
            support.shutil.rmtree(self.folder / "run")
            self.assert_status(self.check(again, self.rig()), 0)

    def test_a_setting_that_the_board_cannot_take_ends_the_run_before_its_first_sample(self):
        for setting, words in (
            ("average-pts = 1", 'the board has no setting "average-pts"'),
            ("average-points = 1000000", 'setting "average-points" takes'),
        ):
            with self.subTest(setting):
                cases = quiet("") + quiet("", "other", f"[case.settings]\n{setting}\n")
                done, record = self.run_on(cases, board_filter="average")
                self.assert_status(done, 3)
                self.assertIn(words, " ".join((done.out + done.err).split()))
                self.assertEqual(record["cases"], [])

    # --- channels and formats

    def test_two_channels_are_each_judged(self):
        import numpy as np

        driven = LOUD.replace("[case.stimulus]\n", "[case.stimulus]\nchannel = 2\n").replace('"loud"', '"right"')
        done, record = self.run_on(LOUD + driven, board_filter="pair", signal="channels = 2")
        self.assert_status(done, 0)
        both, right = self.capture(record, "loud"), self.capture(record, "right")
        self.assertEqual(both.shape, (3000, 2))
        np.testing.assert_array_equal(both[:, 0], both[:, 1])
        np.testing.assert_array_equal(right[:, 0], np.zeros(3000, dtype="<i2"))
        np.testing.assert_array_equal(right[:, 1], both[:, 1])
        self.assertEqual(record["cases"][0]["stream"]["received_samples"], 3000)

    def test_crosstalk_fails_the_channel_that_is_not_driven(self):
        driven = LOUD.replace("[case.stimulus]\n", "[case.stimulus]\nchannel = 1\n")
        done, record = self.run_on(driven, "--fault", "S16", board_filter="pair", signal="channels = 2")
        self.assert_status(done, 1)
        self.assertEqual(self.case_verdicts(record), {"loud": "fail"})

    def test_a_plan_of_one_channel_is_refused_by_a_board_of_two(self):
        done, _ = self.run_on(LOUD, board_filter="pair")
        self.assert_status(done, 3)
        self.assertIn('filter "pair" has channels 2 in, 2 out, the plan says 1 in, 1 out', " ".join((done.out + done.err).split()))

    def test_every_further_format_and_layout_travels(self):
        for board_filter, word, signal in (
            ("average-q7", "q7", ""),
            ("average-i8", "i8", ""),
            ("average-u8", "u8", ""),
            ("average-u12", "u12", ""),
            ("average-u12-left", "u12", 'input_justification = "left"\noutput_justification = "left"'),
            ("average-u16", "u16", ""),
            ("average-i24", "i24", ""),
            ("average-i24-packed", "i24", 'input_justification = "packed"\noutput_justification = "packed"'),
            ("average-i16-big", "i16", 'input_byte_order = "big"\noutput_byte_order = "big"'),
        ):
            with self.subTest(board_filter):
                # Half up or floor, whichever the board's filter is: within one LSB; a wrong layout is far outside.
                rules = '[[rule]]\nkind = "error"\nmax_lsb = 1.0\n'
                done, record = self.run_on(LOUD + quiet('start = "flush"'), board_filter=board_filter, word=word, signal=signal, rules=rules)
                self.assert_status(done, 0)
                self.assertEqual(self.case_verdicts(record), {"loud": "pass", "quiet": "pass"})

    def test_a_layout_that_the_board_does_not_have_is_refused(self):
        done, _ = self.run_on(LOUD, board_filter="average-u12-left", word="u12")
        self.assert_status(done, 3)
        self.assertIn("has input u12, left-justified, the plan says u12", " ".join((done.out + done.err).split()))

    # --- attempts

    def test_a_board_that_is_silent_once_passes_at_the_second_attempt(self):
        done, record = self.run_on(LOUD, "--fault", "first-stream-silent", rig_more="[run]\nattempts = 2\n")
        self.assert_status(done, 0)
        self.assertIn('case "loud": attempt 1 gave no whole capture, it runs again: ', " ".join(done.err.split()))
        self.assertEqual(len(record["cases"][0]["attempts"]), 1)

    def test_without_attempts_it_is_invalid(self):
        done, record = self.run_on(LOUD, "--fault", "first-stream-silent")
        self.assert_status(done, 3)
        self.assertEqual(self.case_verdicts(record), {"loud": "invalid"})

    def test_a_failing_case_is_not_tried_again(self):
        done, record = self.run_on(LOUD, "--fault", "A01", rig_more="[run]\nattempts = 5\n")
        self.assert_status(done, 1)
        self.assertEqual(record["cases"][0]["attempts"], [])

    # --- the emulated board

    def test_flush_and_running_on_the_emulated_board(self):
        for start, status in (('start = "flush"', 0), ('start = "running"\ndiscard_samples = 15', 0), ('start = "running"\ndiscard_samples = 5', 1)):
            with self.subTest(start):
                support.shutil.rmtree(self.folder / "run", ignore_errors=True)
                self.link.unlink(missing_ok=True)
                with self.emulated_board("halflsb-cw7.elf"):
                    done = self.check(self.plan(LOUD + quiet(start)), self.rig())
                self.assert_status(done, status)


if __name__ == "__main__":
    main()
