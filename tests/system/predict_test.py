"""predict: what it tells of a plan on paper, against numbers computed here by SciPy and plain Python, and its text."""
import json
import math
import os
import signal
import subprocess

import numpy
from scipy import signal as scipy_signal

from support import NOISE, ROOT, STEP, Case, halflsb, main
import support

F = 14  # fraction bits of the coefficients
RATE_HZ = 1200.0


def low_pass(cycles_per_sample, q):
    """Bristow-Johnson's low-pass, b and a with a[0] = 1."""
    w, alpha = 2 * math.pi * cycles_per_sample, math.sin(2 * math.pi * cycles_per_sample) / (2 * q)
    b = numpy.array([(1 - math.cos(w)) / 2, 1 - math.cos(w), (1 - math.cos(w)) / 2])
    a = numpy.array([1 + alpha, -2 * math.cos(w), 1 - alpha])
    return b / a[0], a / a[0]


def stored(values):
    """Whole numbers, rounded half away from zero."""
    return [int(math.copysign(math.floor(abs(v) * 2**F + 0.5), v)) for v in values]


ROUNDINGS = {"floor": lambda n, d: n // d,
             "half-up": lambda n, d: (2 * n + d) // (2 * d),
             "toward-zero": lambda n, d: n // d if n >= 0 else -(-n // d),
             "half-away": lambda n, d: (2 * n + d) // (2 * d) if n >= 0 else -((-2 * n + d) // (2 * d)),
             "half-even": lambda n, d: n // d + (2 * (n % d) > d or (2 * (n % d) == d and (n // d) % 2))}


def twin(codes, b, a, rounding):
    """Direct form I in whole numbers, output and state of 16 bits that saturate."""
    x1 = x2 = y1 = y2 = 0
    out = []
    for x in codes:
        total = b[0] * x + b[1] * x1 + b[2] * x2 - a[1] * y1 - a[2] * y2
        y = max(-32768, min(32767, ROUNDINGS[rounding](total, 2**F)))
        x1, x2, y1, y2 = x, x1, y, y1
        out.append(y)
    return out


def finite(value):
    """Every number of a document."""
    if isinstance(value, dict):
        value = list(value.values())
    if isinstance(value, list):
        return all(finite(v) for v in value)
    return not isinstance(value, float) or math.isfinite(value)


class Predict(Case):
    def predict(self, plan, *options):
        done = halflsb("predict", plan, *options, "--json")
        self.assert_status(done, 0)
        document = json.loads(done.out)
        self.assertTrue(finite(document))
        return document["prediction"]

    def section_plan(self, rounding, cases, rule="max_lsb = \"derived\"", q=0.7071, corner=0.02):
        b, a = low_pass(corner, q)
        numbers = ", ".join(repr(float(v)) for v in [*b, a[1], a[2]])
        filter_text = f"""[[filter]]
kind = "biquad-cascade"
sections = [[{numbers}]]
coefficient_fraction_bits = {F}
[filter.arithmetic]
accumulator_bits = 64
rounding = "{rounding}"
"""
        kind = "" if rule == "exact" else rule
        rules = f"[[rule]]\nkind = \"{'exact' if rule == 'exact' else 'error'}\"\n{kind}\n"
        return self.plan(cases, filter_text=filter_text, rules=rules)

    def test_the_bounds_and_headroom_of_a_section_are_those_of_scipy(self):
        b, a = low_pass(0.02, 0.7071)
        bq, aq = (numpy.array(stored(v)) / 2**F for v in (b, a))
        impulse = numpy.zeros(20000)
        impulse[0] = 1.0
        loop, whole, ideal = (scipy_signal.lfilter(*pair, impulse) for pair in (([1.0], aq), (bq, aq), (b, a)))
        above, below = loop[loop > 0].sum(), -loop[loop < 0].sum()

        (filter_told,) = self.predict(self.section_plan("floor", STEP))["filters"]
        told = filter_told["arithmetic"]
        # floor drops 0 .. 1 - 2^-14 of a step, always downwards; its errors come back through 1 / A(z).
        (term,) = told["terms"]
        unit = 1 - 2.0**-F
        self.assertAlmostEqual(term["lowest_steps"], -unit, places=12)
        self.assertEqual(term["highest_steps"], 0.0)
        self.assertAlmostEqual(term["l1_norm"], above + below, delta=1e-9 * above)
        self.assertAlmostEqual(term["noise_gain"], (loop**2).sum(), delta=1e-9 * above)
        self.assertAlmostEqual(term["dc_gain"], 1 / aq.sum(), delta=1e-9 * above)
        self.assertAlmostEqual(term["lower"], -unit * above, delta=1e-9 * above)
        self.assertAlmostEqual(term["upper"], unit * below, delta=1e-9 * above)
        self.assertAlmostEqual(told["error"]["largest"], unit * above, delta=1e-6)
        self.assertLessEqual(told["error"]["largest"], unit * (above + below) + 1e-6)
        # Words: what a full-scale input can come to, and its stimulus.
        (state,) = [node for node in told["nodes"] if node["node"] == "stage 1, section 1, state"]
        l1 = numpy.abs(whole).sum()
        self.assertAlmostEqual(state["worst_steps"], 32768 * l1, delta=1e-6 * 32768)
        signs = numpy.array([1.0 if sign == "+" else -1.0 for sign in state["stimulus_signs"]])
        reached = scipy_signal.lfilter(bq, aq, 32768 * signs)[-1]
        self.assertAlmostEqual(reached, state["stimulus_reaches_steps"], delta=1e-6 * reached)
        self.assertGreater(reached, 0.999 * state["worst_steps"])
        self.assertEqual(state["bits_needed"], 17)
        self.assertTrue(state["can_be_reached"])
        (coefficients,) = told["coefficients"]
        self.assertEqual(coefficients["bits_needed"], max(abs(v) for v in [*stored(b), *stored(a)[1:]]).bit_length() + 1)
        # The price of the word length.
        price = filter_told["price"]
        self.assertAlmostEqual(price["output_difference"], numpy.abs(whole - ideal).sum() * 32768, delta=0.01)
        self.assertAlmostEqual(price["declared_dc_gain"], bq.sum() / aq.sum(), places=12)
        self.assertAlmostEqual(price["design_pole_radius"], math.sqrt(a[2]), places=9)
        self.assertAlmostEqual(price["declared_pole_radius"], math.sqrt(aq[2]), places=9)
        frequencies = numpy.linspace(0, 0.5, 200001)
        gains = [20 * numpy.log10(numpy.maximum(abs(scipy_signal.freqz(*pair, 2 * math.pi * frequencies)[1]), 1e-300))
                 for pair in ((b, a), (bq, aq))]
        band = gains[0] >= gains[0].max() - 20
        self.assertAlmostEqual(abs(price["gain_difference_db"]), abs(gains[1] - gains[0])[band].max(), delta=2e-3)
        # The drawing.
        plot = filter_told["plot"]
        self.assertGreaterEqual(len(plot["frequency_hz"]), 200)
        w = 2 * math.pi * numpy.array(plot["frequency_hz"]) / RATE_HZ
        inside = slice(0, -1)  # at half the rate nothing comes through
        h = scipy_signal.freqz(b, a, w)[1]
        self.assertTrue(numpy.allclose(numpy.array(plot["design_db"], float)[inside], 20 * numpy.log10(abs(h[inside])), atol=1e-6))
        self.assertIsNone(plot["phase_degrees"][-1])
        delay = -numpy.diff(numpy.unwrap(numpy.angle(scipy_signal.freqz(b, a, [0.1 - 1e-5, 0.1 + 1e-5])[1])))[0] / 2e-5
        nearest = int(numpy.argmin(abs(w - 0.1)))
        exact = scipy_signal.group_delay((b, a), [w[nearest]])[1][0]
        self.assertAlmostEqual(plot["group_delay_samples"][nearest], exact, delta=1e-6 * exact)
        self.assertAlmostEqual(plot["group_delay_samples"][nearest], delay, delta=1.0)
        step = filter_told["step_response"]
        self.assertLessEqual(len(step), 1024)
        self.assertTrue(numpy.allclose(step, scipy_signal.lfilter(b, a, numpy.ones(len(step))), atol=1e-10))

    def seen_by_hand(self, declared, codes):
        """Of every other rounding: whether an error lies beyond its end of the derived limit; None: no sample differs."""
        b, a = (stored(v) for v in low_pass(0.02, 0.7071))
        impulse = numpy.zeros(20000)
        impulse[0] = 1.0
        loop = scipy_signal.lfilter([1.0], numpy.array(a) / 2**F, impulse)
        above, below = loop[loop > 0].sum(), -loop[loop < 0].sum()
        lowest, highest = {"floor": (2.0**-F - 1, 0.0), "half-up": (2.0**-F - 0.5, 0.5),
                           "toward-zero": (2.0**-F - 1, 1 - 2.0**-F)}[declared]
        lower, upper = lowest * above - highest * below, highest * above - lowest * below
        reference = scipy_signal.lfilter(numpy.array(b) / 2**F, numpy.array(a) / 2**F, numpy.array(codes, float))
        promised, answers = twin(codes, b, a, declared), {}
        for name in ROUNDINGS:
            if name == declared:
                continue
            response = twin(codes, b, a, name)
            error = numpy.array(response) - reference
            beyond = max(error.max() - upper, lower - error.min())
            self.assertGreater(abs(beyond), 1e-3, "too near to call by hand")
            answers[f"{name} in place of {declared}"] = None if response == promised else bool(beyond > 0)
        return answers

    def test_what_the_derived_limits_see_is_what_a_twin_written_here_says(self):
        codes = [16384 if n >= 10 else 0 for n in range(600)]
        answers = set()
        for declared in ("floor", "half-up", "toward-zero"):
            sight = self.predict(self.section_plan(declared, STEP))["sight"]
            told = {change["change"]: {"seen": True, "unseen": False, "same": None}[change["answer"]] for change in sight["changes"]}
            by_hand = self.seen_by_hand(declared, codes)
            self.assertEqual({name: told[name] for name in by_hand}, by_hand)
            answers |= set(by_hand.values())
        self.assertEqual(answers, {True, False, None})
        # A bias limit sees what the largest error does not: docs/methods.md.
        rules = "max_lsb = \"derived\"\nrms_lsb = \"derived\"\nbias_lsb = \"derived\""
        sight = self.predict(self.section_plan("half-up", NOISE, rules))["sight"]
        (floor,) = [change for change in sight["changes"] if change["change"] == "floor in place of half-up"]
        self.assertEqual((floor["answer"], floor["rule"], floor["case"]), ("seen", "error", "noise"))

    def test_exact_sees_every_change_that_makes_a_difference(self):
        sight = self.predict(self.section_plan("half-up", NOISE, "exact"))["sight"]
        self.assertTrue(sight["has_exact_rule"])
        self.assertEqual({change["answer"] for change in sight["changes"]}, {"seen", "same"})
        done = halflsb("predict", self.section_plan("half-up", STEP))
        self.assertIn("add it", done.out)
        self.assertNotIn("add it", halflsb("predict", self.section_plan("half-up", STEP, "exact")).out)

    def test_the_acceptance_plan_of_the_checkweigher(self):
        prediction = self.predict(ROOT / "rigs" / "cw-7" / "acceptance.toml", "--root", ROOT / "rigs")
        (filter_told,) = prediction["filters"]
        told = filter_told["arithmetic"]
        # Sixteenths, rounded anywhere from floor (down to -15/16) to half-up (up to 8/16); nothing is known of the words.
        self.assertEqual((told["error"]["lower"] <= -15 / 16, told["error"]["upper"] >= 0.5), (True, True))
        self.assertAlmostEqual(told["error"]["largest"], 1.0, places=6)
        self.assertAlmostEqual(told["largest_if_rounding_said"], 0.5, places=6)
        self.assertEqual(told["assumed"][0]["stage"], 1)
        # 16 words of 16 bits take 20.
        nodes = {node["node"]: node for node in told["nodes"]}
        self.assertEqual(nodes["stage 1, accumulator"]["bits_needed"], 20)
        self.assertIsNone(nodes["stage 1, accumulator"]["bits"])
        self.assertEqual(nodes["stage 1, output"]["stimulus_signs"], "+" * 16)
        self.assertEqual((told["silence"]["lowest_code"], told["silence"]["highest_code"]), (0, 0))
        self.assertEqual({round(delay, 9) for delay in filter_told["plot"]["group_delay_samples"] if delay is not None}, {7.5})
        self.assertTrue(prediction["sight"]["rounding_is_assumed"])
        answers = {change["change"]: (change["answer"], change["rule"]) for change in prediction["sight"]["changes"]}
        self.assertEqual(answers["floor in place of half-up"], ("seen", "error"))
        self.assertEqual(answers["half-even in place of half-up"], ("unseen", None))

    def cic_plan(self, words, factor=25, shift=19):
        return self.plan(STEP, rules="[[rule]]\nkind = \"error\"\nmax_lsb = \"derived\"\n", filter_text=f"""[[filter]]
kind = "cic-decimator"
order = 4
factor = {factor}
shift_bits = {shift}
[filter.arithmetic]
rounding = "floor"
{words}
""")

    def test_the_registers_of_a_cic_are_told_with_the_width_that_each_must_have(self):
        # Hogenauer's example: N = 4, R = 25, 16 bits in and out; 35 bits, discards as tests/published/cic-bit-growth.csv has them.
        may_discard = [1, 6, 9, 13, 14, 15, 16, 17]
        (filter_told,) = self.predict(self.cic_plan("state_bits = 40"))["filters"]
        told = filter_told["arithmetic"]["registers"]
        names = [f"stage 1, {kind} {k}" for kind in ("integrator", "comb") for k in range(1, 5)]
        self.assertEqual([one["register"] for one in told], names)
        self.assertEqual({(one["bits"], one["bits_needed"], one["fraction_bits"], one["overflow"]) for one in told}, {(40, 35, 15, "wrap")})
        self.assertEqual([one["may_discard_bits"] for one in told], may_discard)
        (filter_told,) = self.predict(self.cic_plan(f"discarded_bits = {may_discard}"))["filters"]
        told = filter_told["arithmetic"]["registers"]
        self.assertEqual([one["bits_needed"] for one in told], [34, 29, 26, 22, 21, 20, 19, 18])
        self.assertEqual({one["bits"] for one in told}, {None})
        self.assertEqual([one["discarded_bits"] for one in told], may_discard)
        out = halflsb("predict", self.cic_plan("state_bits = 40")).out
        self.assertIn("  stage 1, integrator 1    40        15           35          0            1\n", out)
        self.assertIn("what wraps inside a CIC comes back while each register has the bits needed", out)

    def test_a_last_comb_without_room_for_what_is_discarded_is_told(self):
        discards = [1, 4, 7, 10, 11, 12, 13, 14]
        plan = self.cic_plan(f"state_bits = 32\ndiscarded_bits = {discards}", 16, 16)
        self.write("plan.toml", plan.read_text().replace("length_samples = 600", "length_samples = 608"))
        self.assertIn("stage 1, comb 4 reaches its rail; derived limits leave out the samples", halflsb("predict", plan).out)

    def test_a_recursion_of_high_order_is_warned_of(self):
        b, a = scipy_signal.butter(10, 0.02)
        numbers = [", ".join(repr(float(v)) for v in list_) for list_ in (b, a)]
        done = halflsb("predict", self.plan(STEP, filter_text=f"[[filter]]\nkind = \"iir\"\nb = [{numbers[0]}]\na = [{numbers[1]}]\n"))
        self.assert_status(done, 0)
        self.assertRegex(done.out, r"(?s)warning: stage 1, a b/a form of order 10, may lose \S+ LSB.*biquad-cascade")
        b, a = scipy_signal.butter(2, 0.2)
        numbers = [", ".join(repr(float(v)) for v in list_) for list_ in (b, a)]
        done = halflsb("predict", self.plan(STEP, filter_text=f"[[filter]]\nkind = \"iir\"\nb = [{numbers[0]}]\na = [{numbers[1]}]\n"))
        self.assertNotIn("warning", done.out)

    def test_a_median_has_no_response_and_still_an_error_bound(self):
        plan = self.plan(NOISE, filter_text="[[filter]]\nkind = \"median\"\npoints = 4\n[filter.arithmetic]\nrounding = \"floor\"\n")
        (told,) = self.predict(plan)["filters"]
        self.assertEqual((told["response"], told["plot"]["frequency_hz"], told["price"]), ([], [], None))
        self.assertIn("median", told["missing"])
        # The mean of the middle two is shortened by half a step or not at all.
        self.assertAlmostEqual(told["arithmetic"]["error"]["largest"], 0.5, places=6)

    def test_an_unknown_filter_has_no_prediction_but_its_time(self):
        plan = self.plan(STEP, filter_text="[[filter]]\nkind = \"unknown\"\n",
                         rules="[[rule]]\nkind = \"unchanged\"\nbaseline = \"baseline\"\n")
        prediction = self.predict(plan, "--rig", self.rig(port="/dev/none"))
        self.assertEqual((prediction["filters"], prediction["sight"]), ([], None))
        self.assertGreater(prediction["wire_s"], 0.0)

    def test_it_can_be_interrupted(self):
        taps = ", ".join(["0.0005"] * 2000)
        many = f"[case.each]\n\"stimulus.level_ratio\" = [{', '.join(str((n + 1) / 64) for n in range(60))}]\n"
        plan = self.plan(NOISE.replace("level_ratio = 0.9\n", "").replace("6000", "8000") + many,
                         filter_text=f"[[filter]]\nkind = \"fir\"\ntaps = [{taps}]\ncoefficient_fraction_bits = 15\n"
                                     "[filter.arithmetic]\nrounding = \"floor\"\naccumulator_bits = 64\n")
        process = subprocess.Popen([support.HALFLSB, "predict", plan], stdout=subprocess.PIPE, stderr=subprocess.PIPE)

        def catches_interrupts():
            status = support.pathlib.Path(f"/proc/{process.pid}/status").read_text()
            return int(support.re.search(r"SigCgt:\s*([0-9a-f]+)", status)[1], 16) >> (signal.SIGINT - 1) & 1

        support.wait_until(catches_interrupts, what="the handler of interrupts")
        process.send_signal(signal.SIGINT)
        out, err = process.communicate(timeout=support.LIMIT_S)
        self.assertEqual((process.returncode, out), (130, b""))
        self.assertIn(b"interrupted", err)

    def test_a_limit_that_the_promise_itself_exceeds_is_told(self):
        section = self.section_plan("half-up", STEP, "max_lsb = 0.5")
        done = halflsb("predict", section)
        self.assertRegex(done.out, r"(?s)warning: a firmware that computes as promised fails error in\s+\"step\"")
        failing = self.predict(section)["sight"]["promise_fails"]
        self.assertEqual(failing, {"rule": "error", "case": "step"})
        kept = self.section_plan("half-up", STEP)
        self.assertIsNone(self.predict(kept)["sight"]["promise_fails"])
        self.assertNotIn("warning", halflsb("predict", kept).out)

    def test_the_text_of_a_small_plan(self):
        plan = self.plan(STEP, rules="[[rule]]\nkind = \"error\"\nmax_lsb = \"derived\"\n", filter_text="[[filter]]\nkind = \"one-pole\"\nshift_bits = 3\n[filter.arithmetic]\n"
                                           "rounding = \"half-up\"\naccumulator_bits = 32\n")
        done = halflsb("predict", "plan.toml", cwd=plan.parent)
        self.assert_status(done, 0)
        expected = (ROOT / "tests" / "system" / "predict.txt")
        if os.environ.get("HALFLSB_UPDATE_DOCS"):
            expected.write_text(done.out)
        self.assertEqual(done.out, expected.read_text())


if __name__ == "__main__":
    main()
