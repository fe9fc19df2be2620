"""A plan without cases: the standard set finds right boards right and wrong ones wrong."""
import re
import subprocess

from support import ROOT, VIRTUAL_BOARD, Case, halflsb, main

EXACT = ROOT / "rigs" / "cw-7" / "exact"
PLAN = """title = "CW-7"
[signal]
rate_hz = 1200.0
input = "q15"
output = "q15"
filter = "load-cell"
{arithmetic}
[[filter]]
kind = "moving-average"
points = 16
{more}"""
ARITHMETIC = '[arithmetic]\nrounding = "half-up"\naccumulator_bits = 32\noutput_overflow = "saturate"\n'


# What a plan may leave open and what is then assumed. Coefficients are taken as they are designed, so those are said.
OPEN_WORDS = ("rounding", "output_rounding", "accumulator_bits")


def exact_plan(path):
    """The plan without its cases."""
    own = path.read_text().replace('include = ["cw-7/exact/cases.toml"]\n', "")
    return own if "rate_hz" in own else own.replace("[signal]\n", "[signal]\nrate_hz = 1200.0\n")


def with_rounding_open(text):
    """The plan without what its firmware promises of its rounding; None where the promise is outside of what is assumed."""
    if re.search(r'(?m)^(rounding_at|fraction_saving|accumulator_fraction_bits|state_bits|state_fraction_bits|discarded_bits|number|structure|accumulator_overflow)\s*=', text):
        return None
    if set(re.findall(r'(?m)^rounding\s*=\s*"(.*?)"', text)) - {"floor", "half-up"}:
        return None
    return re.sub(rf"(?m)^({'|'.join(OPEN_WORDS)})\s*=.*\n", "", text)


class StandardSet(Case):
    def plan_of(self, arithmetic="", more=""):
        return self.write("plan.toml", PLAN.format(arithmetic=arithmetic, more=more))

    def test_it_says_what_it_added_and_why_and_what_it_assumed(self):
        plan = self.plan_of()
        with self.virtual_board():
            done = self.check(plan, self.rig())
        self.assert_status(done, 0)
        text = " ".join(done.out.split())
        self.assertIn("the plan has no [[case]], so the standard set is run", text)
        self.assertIn("silence: an offset, noise of its own, memory that a reset does not clear", text)
        self.assertIn("assumed stage 1: each rounding anywhere from floor to half-up, an accumulator as wide as it takes, an output that saturates", text)
        self.assertIn("left out --all runs it too; not covered then long run: errors that build up", text)
        names = self.record()["cases_planned"]
        self.assertEqual(names[:3], ["silence", "impulses", "step up"])
        self.assertNotIn("long run", names)
        # Judged again it is the same.
        again = halflsb("judge", self.folder / "run", "--json")
        self.assert_status(again, 0)

    def test_every_fault_of_the_firmware_is_found(self):
        """All that the virtual board can get wrong in these filters, but what only another block size or a setting shows."""
        listed = subprocess.run([VIRTUAL_BOARD, "--list-faults"], capture_output=True, text=True, check=True).stdout
        found = 0
        for name in ("load-cell", "settle", "smoothing"):
            plan = self.write("plan.toml", exact_plan(EXACT / f"{name}.toml"))
            for line in listed.splitlines():
                fault, filters = re.match(r"([^, ]+).*\[(.*)\]$", line).groups() if "[" in line else ("", "")
                if not re.fullmatch(r"[ACFNS]\d\d", fault) or name not in filters.split(", "):
                    continue
                with self.subTest(filter=name, fault=fault):
                    folder = self.folder / f"{name}-{fault}"
                    with self.virtual_board("--filter-set", name, "--fault", fault):
                        done = halflsb("check", plan, "--rig", self.rig(), "--root", ROOT / "rigs", "--out", folder, cwd=self.folder)
                    self.assert_status(done, 1)
                    found += 1
        self.assertGreater(found, 25)

    def test_time_for_some_cases_names_what_is_not_covered(self):
        plan = self.plan_of()
        listed = halflsb("check", plan, "--list", "--all", "--rig", self.rig()).out
        seconds = [float(line.split()[-1]) for line in listed.splitlines() if re.match(r" +\d+  ", line)]
        self.assertGreater(len(seconds), 15)
        # Enough for the first six, not for the noise behind them.
        limit = sum(seconds[:6]) + seconds[6] / 2
        with self.virtual_board():
            done = self.check(plan, self.rig(), "--for", f"{limit:.4f}s")
        self.assert_status(done, 0)
        self.assertEqual(len(self.record()["cases"]), 6)
        text = " ".join(done.out.split())
        self.assertIn(f"left out no time within --for {limit:.4f}s; not covered then", text)
        self.assertIn("noise: rounding, coefficients, order of the samples", text)
        self.assertIn("long run: errors that build up", text)
        with self.virtual_board():
            self.assert_status(halflsb("check", plan, "--rig", self.rig(), "--for", "0.1ms", cwd=self.folder), 64)

    def test_all_runs_the_long_one_too(self):
        plan = self.plan_of()
        with self.virtual_board():
            done = self.check(plan, self.rig(), "--all")
        self.assert_status(done, 0)
        self.assertEqual(self.record()["cases_planned"][-1], "long run")

    def test_it_is_written_out_to_be_copied(self):
        resolved = halflsb("predict", self.plan_of(ARITHMETIC), "--resolved")
        self.assert_status(resolved, 0)
        copied = self.write("copied.toml", resolved.out)
        with self.virtual_board():
            self.assert_status(self.check(copied, self.rig()), 0)
        self.assertEqual(self.record()["cases_planned"][-1], "long run")

    def test_every_right_board_passes_with_its_arithmetic_and_without(self):
        """Each filter of the virtual board, as its plan declares it, and as if nobody had said how it rounds."""
        checked = 0
        for path in sorted(EXACT.glob("*.toml")):
            if path.name == "cases.toml":
                continue
            own = exact_plan(path)
            name = re.search(r'(?m)^filter\s*=\s*"(.*?)"', own)[1]
            for what, plan_text in (("declared", own), ("open", with_rounding_open(own))):
                if plan_text is None:
                    continue
                with self.subTest(filter=name, arithmetic=what):
                    plan = self.write("plan.toml", plan_text)
                    folder = self.folder / f"{name}-{what}"
                    with self.virtual_board("--filter-set", name):
                        done = halflsb("check", plan, "--rig", self.rig(), "--root", ROOT / "rigs", "--out", folder, cwd=self.folder)
                    self.assert_status(done, 0)
                    checked += 1
        self.assertGreater(checked, 45)


main()
