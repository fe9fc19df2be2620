"""--json: standard output is one document that keeps docs/answer.schema.json, whatever the call came to, and nothing
else is written but what the board does."""
import json
import signal
import subprocess

import jsonschema

from support import NOISE, ROOT, STEP, Case, halflsb, main
import support


def schema(name):
    return json.loads((ROOT / "docs" / f"{name}.schema.json").read_text())


def validator(name):
    store = {f"{known}.schema.json": schema(known) for known in ("run", "answer")}
    resolver = jsonschema.RefResolver(base_uri=f"{name}.schema.json", referrer=store[f"{name}.schema.json"], store=store)
    jsonschema.Draft202012Validator.check_schema(store[f"{name}.schema.json"])
    return jsonschema.Draft202012Validator(store[f"{name}.schema.json"], resolver=resolver)


class Json(Case):
    def answer(self, done, command, status):
        self.assert_status(done, status)
        document = json.loads(done.out)
        errors = sorted(validator("answer").iter_errors(document), key=str)
        # Which of the documents it should have been is in the context of the error.
        self.assertEqual([str(inner) for error in errors for inner in (error.context or [error])], [])
        self.assertEqual(document["format"], f"halflsb {command}".strip())
        self.assertEqual(document["exit_status"], status)
        self.assertEqual(done.err, "")
        return document

    def check_json(self, *options, cases=NOISE, faults=(), wire="answer_s = 0.5\ngreet_s = 1.0\n", **more):
        with self.virtual_board(*[word for fault in faults for word in ("--fault", fault)]):
            return self.check(self.plan(cases, **more), self.rig(wire=wire), "--json", *options)

    def test_a_check_that_passes_holds_its_run_json_byte_for_byte(self):
        done = self.check_json(cases=NOISE + STEP)
        document = self.answer(done, "check", 0)
        self.assertIsNone(document["error"])
        written = (self.folder / "run" / "run.json").read_text()
        validator("run").validate(json.loads(written))
        self.assertEqual(document["runs"], [json.loads(written)])
        self.assertIn("\n" + written.rstrip("\n") + "\n]", done.out)

    def test_a_check_that_fails(self):
        document = self.answer(self.check_json(faults=("A01",)), "check", 1)
        (case,) = document["runs"][0]["verdict"]["cases"]
        self.assertEqual(case["verdict"], "fail")
        self.assertIsNotNone(case["rules"][0]["first_bad"])

    def test_an_invalid_case_and_a_board_that_is_gone(self):
        document = self.answer(self.check_json(faults=("unplug=30",), cases=NOISE + NOISE.replace('"noise"\n[', '"second"\n[') + STEP), "check", 3)
        self.assertEqual([case["verdict"] for case in document["runs"][0]["verdict"]["cases"]], ["pass", "invalid"])
        self.assertEqual(document["error"]["kind"], "bench")

    def test_a_board_that_is_not_there(self):
        document = self.answer(self.check(self.plan(NOISE), self.rig(port="/dev/ttyUSB77"), "--json"), "check", 3)
        self.assertEqual(document["error"]["kind"], "bench")
        self.assertEqual(document["runs"][0]["cases"], [])

    def test_an_interrupted_check(self):
        with self.virtual_board("--baud", "9600"):
            plan, rig = self.plan(NOISE.replace("6000", "60000")), self.rig()
            process = subprocess.Popen([support.HALFLSB, "check", plan, "--rig", rig, "--out", self.folder / "run", "--json"],
                                       stdout=subprocess.PIPE, stderr=subprocess.PIPE)
            support.wait_until((self.folder / "run" / "run.json").exists, what="the run folder")
            process.send_signal(signal.SIGINT)
            out, err = process.communicate(timeout=support.LIMIT_S)
        document = self.answer(support.Finished(process.returncode, out.decode(), err.decode()), "check", 130)
        self.assertEqual(document["error"]["kind"], "interrupted")

    def test_wrong_files_tell_all_their_problems(self):
        plan = self.plan(NOISE.replace("level_ratio = 0.9", "level_ratio = 1.5").replace("seed = 3", "sead = 3"))
        document = self.answer(self.check(plan, self.rig(port="/dev/none"), "--json"), "check", 65)
        self.assertEqual(len(document["problems"]), 2)
        for problem in document["problems"]:
            self.assertRegex(problem, r"plan\.toml:\d+:\d+: ")
        self.assertEqual(document["runs"], [])

    def test_a_wrong_command_line_with_and_without_a_command(self):
        self.assertEqual(self.answer(halflsb("check", "--json", "p"), "check", 64)["error"]["kind"], "usage")
        self.assertEqual(self.answer(halflsb("chekc", "--json"), "", 64)["error"]["remedy"], "did you mean 'check'?")
        # Behind "--" it is an operand.
        self.assertEqual(halflsb("predict", "--", "--json").out, "")

    def test_list_predict_and_ports(self):
        plan, rig = self.plan(NOISE + STEP), self.rig(port="/dev/none")
        listed = self.answer(halflsb("check", plan, "--list", "--rig", rig, "--json"), "check", 0)["list"]
        self.assertEqual([case["name"] for case in listed["cases"]], ["noise", "step"])
        self.assertEqual(listed["samples"], 6600)
        self.assertAlmostEqual(listed["signal_s"], 6600 / 1200)
        self.assertIsNone(self.answer(halflsb("check", plan, "--list", "--json"), "check", 0)["list"]["wire_s"])
        prediction = self.answer(halflsb("predict", plan, "--json"), "predict", 0)["prediction"]
        self.assertEqual(prediction["filters"][0]["channels"], [1])
        self.assertAlmostEqual(prediction["filters"][0]["dc_gain_db"], 0.0, places=9)
        self.answer(halflsb("ports", "--json"), "ports", 0)

    def test_judge_of_a_run_and_of_none(self):
        self.check_json(faults=("A01",))
        document = self.answer(halflsb("judge", self.folder / "run", "--json"), "judge", 1)
        self.assertEqual(document["runs"], [self.record()])
        document = self.answer(halflsb("judge", self.folder / "none", "--json"), "judge", 65)
        self.assertEqual(document["error"]["kind"], "input")

    def test_explain_that_asks_and_compare(self):
        step = NOISE[:NOISE.index("[case.stimulus]")].replace("noise", "step") + \
            '[case.stimulus]\nshape = "step"\nlength_samples = 500\nlevel_ratio = 0.30001\n'
        plan = self.plan(step, filter_text='[arithmetic]\nrounding = "half-up"\n\n[[filter]]\nkind = "moving-average"\npoints = 16\n',
                         rules='[[rule]]\nkind = "exact"\n')
        old, new = self.folder / "old", self.folder / "new"
        with self.virtual_board("--filter-set", "load-cell"):
            self.assert_status(halflsb("check", plan, "--rig", self.rig(), "--out", old), 0)
        with self.virtual_board("--filter-set", "load-cell", "--fault", "truncation"):
            self.assert_status(halflsb("check", plan, "--rig", self.rig(), "--out", new), 1)
            asked = self.answer(halflsb("explain", new, "--rig", self.rig(), "--json"), "explain", 0)["explanations"][0]["asked"]
        self.assertEqual(len(asked[0]["questions"][0]["ruled_out"]), 1)
        self.assertTrue(self.answer(halflsb("compare", old, new, "--json"), "compare", 1)["comparison"]["differs"])
        self.assertFalse(self.answer(halflsb("compare", old, old, "--json"), "compare", 0)["comparison"]["differs"])
        self.assertIsNone(self.answer(halflsb("compare", old, self.folder, "--json"), "compare", 65)["comparison"])

    def test_explain_of_a_run_and_of_none(self):
        for faults, finding, status in ((("A01",), "as declared", 0), (("added-noise",), "unknown", 2), (("S01",), "found", 0)):
            checked = self.check_json(faults=faults)
            self.assertEqual(len(json.loads(checked.out)["explanations"]), 1)
            (explanation,) = self.answer(halflsb("explain", self.folder / "run", "--json"), "explain", status)["explanations"]
            self.assertEqual([channel["finding"] for channel in explanation["channels"]], [finding])
            support.shutil.rmtree(self.folder / "run")
        document = self.answer(halflsb("explain", self.folder / "none", "--json"), "explain", 65)
        self.assertEqual(document["explanations"], [])

    def test_accept_of_a_run_and_of_one_without_the_rule(self):
        self.check_json()
        self.assertIn("unchanged", self.answer(halflsb("accept", self.folder / "run", "--json"), "accept", 65)["error"]["remedy"])
        support.shutil.rmtree(self.folder / "run")
        rules = '[[rule]]\nkind = "unchanged"\nbaseline = "baseline"\n'
        self.assert_status(self.check_json(rules=rules), 2)
        (baseline,) = self.answer(halflsb("accept", self.folder / "run", "--json"), "accept", 0)["baselines"]
        self.assertEqual([(case["name"], case["state"]) for case in baseline["cases"]], [("noise", "new")])

    def test_the_schemas_are_strict(self):
        record = json.loads(run_text(self))
        validator("run").validate(record)
        for path, key in ((record, "surplus"), (record["verdict"], "time_s"), (record["cases"][0], "x"), (record["board"], "y")):
            path[key] = 1
            self.assertFalse(validator("run").is_valid(record), key)
            del path[key]
        record["format_version"] = 3
        self.assertFalse(validator("run").is_valid(record))


def run_text(case):
    case.check_json()
    return (case.folder / "run" / "run.json").read_text()


if __name__ == "__main__":
    main()
