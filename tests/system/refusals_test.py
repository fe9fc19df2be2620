"""Wrong command lines and wrong files: exit 64 and 65, the board untouched, the text whole."""
from support import NOISE, STEP, Case, halflsb, main


class Refusals(Case):
    """No board runs here: port names nothing, so touching it would end in status 3."""

    def refused(self, plan, *options):
        done = self.check(plan, self.rig(port="/dev/there-is-no-such-port"), *options)
        self.assertFalse((self.folder / "run").exists(), "a refused plan left a run folder")
        self.assertEqual(done.out, "")
        return done

    def expect_65(self, plan, text):
        done = self.refused(plan)
        self.assert_status(done, 65)
        self.assertIn(text, done.err)

    def test_no_arguments_gives_a_short_usage_and_64(self):
        done = halflsb()
        self.assert_status(done, 64)
        self.assertEqual(done.out, "")
        self.assertIn("example:", done.err)

    def test_help_is_the_same_text_everywhere_and_0(self):
        texts = {(done.status, done.out) for done in (halflsb("--help"), halflsb("-h"), halflsb("check", "--help"))}
        self.assertEqual(len(texts), 1)
        status, text = texts.pop()
        self.assertEqual(status, 0)
        self.assertIn("isolated = true", text)

    def test_a_resolved_plan_is_toml_and_no_json_document(self):
        plan = self.plan(NOISE)
        done = halflsb("predict", plan, "--resolved")
        self.assert_status(done, 0)
        again = self.write("again.toml", done.out)
        self.assertEqual(halflsb("predict", again, "--resolved").out, done.out)
        done = halflsb("predict", plan, "--resolved", "--json")
        self.assert_status(done, 64)
        self.assertIn("the plan is TOML, and --json wants a JSON document", done.err + done.out)

    def test_an_unknown_option_names_the_nearest(self):
        done = halflsb("check", "plan.toml", "--rigg", "rig.toml")
        self.assert_status(done, 64)
        self.assertIn("--rig", done.err)

    def test_a_case_that_is_not_there_is_a_usage_error_with_the_names(self):
        done = self.refused(self.plan(NOISE + STEP), "--case", "nosie")
        self.assert_status(done, 64)
        self.assertIn("noise", done.err)
        self.assertIn("step", done.err)

    def test_a_missing_plan(self):
        done = self.refused(self.folder / "none.toml")
        self.assert_status(done, 65)
        self.assertIn("none.toml", done.err)

    def test_both_files_tell_all_their_problems_at_once(self):
        plan = self.plan(NOISE.replace("level_ratio = 0.9", "level_ratio = 1.5").replace("seed = 3", "sead = 3"))
        rig = self.write("rig.toml", '[board]\nname = "b"\nisolated = false\n[link]\nuse = "serial"\nport = "x"\nboud = 9600\n[wire]\nform = "framed"\n')
        done = self.check(plan, rig)
        self.assert_status(done, 65)
        for text in ("level_ratio", "did you mean seed", "isolated", "did you mean baud"):
            self.assertIn(text, done.err)

    def test_an_isolation_statement_that_is_missing(self):
        rig = self.write("rig.toml", '[board]\nname = "b"\n[link]\nuse = "serial"\nport = "x"\n[wire]\nform = "framed"\n')
        done = self.check(self.plan(NOISE), rig)
        self.assert_status(done, 65)
        self.assertIn("isolated", done.err)

    def test_a_path_out_of_the_root(self):
        (self.folder / "secret.txt").write_text("0.5\n")
        inside = self.folder / "inside"
        inside.mkdir()
        text = self.plan(NOISE, filter_text='[[filter]]\nkind = "fir"\ntaps_file = "../secret.txt"\n').read_text()
        plan = self.write("inside/plan.toml", text)
        self.expect_65(plan, "../secret.txt")
        (inside / "link.txt").symlink_to(self.folder / "secret.txt")
        self.write("inside/plan.toml", text.replace("../secret.txt", "link.txt"))
        self.expect_65(plan, "link.txt")
        # From a wider root the same link stays inside.
        self.write("inside/plan.toml", text.replace("../secret.txt", "inside/link.txt"))
        done = halflsb("predict", plan, "--root", self.folder)
        self.assert_status(done, 0)

    def test_numbers_that_cannot_be(self):
        for old, new, text in (
            ("max_lsb = 0.5", "max_lsb = -0.5", "max_lsb"),
            ("max_lsb = 0.5", "max_lsb = nan", "max_lsb"),
            ("max_lsb = 0.5", "max_lsb = 40000.0", "wider than full scale"),
            ("max_lsb = 0.5", 'max_lsb = "0.5"', "max_lsb"),
            ("points = 16", "points = 0", "points"),
            ("rate_hz = 1200.0", "rate_hz = -1.0", "rate_hz"),
            ('shape = "noise"\nlevel_ratio = 0.9\nseed = 3', 'shape = "sine"\nfrequency_hz = 601.0', "Nyquist"),
            ('kind = "moving-average"\npoints = 16', 'kind = "biquad-cascade"\nsections = [[1.0, 0.0, 0.0, -2.0, 1.1]]', "section"),
            ("points = 16", "points = 16\npoints = 17", "points"),
        ):
            with self.subTest(new):
                text_of_plan = self.plan(NOISE).read_text()
                self.assertIn(old, text_of_plan)
                self.expect_65(self.write("plan.toml", text_of_plan.replace(old, new)), text)

    def test_each_message_has_place_line_caret(self):
        done = self.refused(self.plan(NOISE.replace("length_samples = 6000", "length_samples = 0")))
        self.assert_status(done, 65)
        self.assertRegex(done.err, r"plan\.toml:\d+:\d+: .*length_samples.*\n.*length_samples = 0\n +\^\n  \S")

    def test_a_rig_that_flashes_needs_the_image(self):
        rig = self.rig(port="/dev/there-is-no-such-port", more='[commands]\nbefore_run = [["./flash.sh", "{image}"]]\n')
        done = self.check(self.plan(NOISE), rig)
        self.assert_status(done, 64)
        self.assertIn("--image", done.err)

    def test_an_image_without_build_id(self):
        done = self.refused(self.plan(NOISE), "--image", self.write("image.elf", "no ELF"))
        self.assert_status(done, 65)
        self.assertIn("image.elf", done.err)

    def test_a_log_never_replaces_an_input(self):
        plan, rig = self.plan(NOISE), self.rig(port="/dev/there-is-no-such-port")
        for precious in (plan, rig):
            before = precious.read_text()
            done = self.check(plan, rig, "--log", precious)
            self.assert_status(done, 64)
            self.assertIn("would replace", done.err)
            self.assertEqual(precious.read_text(), before)

    def test_a_seed_out_of_range_is_a_usage_error(self):
        self.assert_status(self.refused(self.plan(NOISE), "--seed", 2**53), 64)

    def test_predict_needs_no_board(self):
        done = halflsb("predict", self.plan(NOISE), "--rig", self.rig(port="/dev/there-is-no-such-port"))
        self.assert_status(done, 0)
        self.assertIn("gain at 0 Hz 0.000 dB", done.out)
        # 6000 samples in blocks of 256: 23 full ones of 530 bytes and 112 samples in 242 (docs/wire.md), at 92160 bytes a second.
        self.assertIn(f"{(23 * 530 + 242) / 92160:.2f}", done.out)


if __name__ == "__main__":
    main()
