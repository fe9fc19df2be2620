"""How much of a derived limit of a recursion an adversary reaches who picks every input word, and the table of it in docs/methods.md.

The adversary is written here, in whole numbers: at each sample it tries many words and keeps the one whose rounding error goes
furthest in the direction that the path from there to the last sample asks for. With HALFLSB_UPDATE_DOCS=1 the table is written."""
import json
import math
import os

import numpy
from scipy import signal as scipy_signal

from support import ROOT, STEP, Case, halflsb, main

F = 20  # fraction bits of the coefficients
WORDS = 4096  # tried a sample
DOCUMENT = ROOT / "docs" / "methods.md"
BEGIN, END = "<!-- tightness: begin -->\n", "<!-- tightness: end -->\n"


def low_pass(cycles_per_sample, q):
    """Bristow-Johnson's low-pass, b and a with a[0] = 1."""
    w, alpha = 2 * math.pi * cycles_per_sample, math.sin(2 * math.pi * cycles_per_sample) / (2 * q)
    b = numpy.array([(1 - math.cos(w)) / 2, 1 - math.cos(w), (1 - math.cos(w)) / 2])
    a = numpy.array([1 + alpha, -2 * math.cos(w), 1 - alpha])
    return list(b / a[0]), list(a / a[0])


def comb(delay, direct, feedback):
    return [direct], [1.0] + [0.0] * (delay - 1) + [feedback]


def filters():
    """Name, text of the plan, b, a."""
    for corner in (0.1, 0.02, 0.004):
        for q in (0.7, 3, 10, 30):
            b, a = low_pass(corner, q)
            numbers = ", ".join(repr(float(v)) for v in [*b, a[1], a[2]])
            yield f"low-pass, corner {corner}, Q {q}", f'kind = "biquad-cascade"\nsections = [[{numbers}]]', b, a
    for k in (0.3, 0.01):
        yield (f"one pole at {1 - k}", f'kind = "biquad-cascade"\nsections = [[{k}, 0.0, 0.0, {k - 1}, 0.0]]', [k], [1.0, k - 1])
    r = 0.995
    yield f"DC blocker, pole at {r}", f'kind = "biquad-cascade"\nsections = [[1.0, -1.0, 0.0, {-r}, 0.0]]', [1.0, -1.0], [1.0, -r]
    yield ("comb, delay 8, feedback -0.9", 'kind = "comb"\ndelay_samples = 8\ndirect = 0.618\nfeedback = -0.9', *comb(8, 0.618, -0.9))


def stored(values):
    return [int(math.copysign(math.floor(abs(v) * 2**F + 0.5), v)) for v in values]


def reached(b, a):
    """The largest error, in LSB, at the last sample of a run whose words the adversary picks; half-up, direct form I."""
    b, a = stored(b), stored(a)
    impulse = numpy.zeros(1 << 18)
    impulse[0] = 1.0
    path = scipy_signal.lfilter([1.0], numpy.array(a) / 2**F, impulse)
    sums = numpy.cumsum(abs(path))
    length = int(numpy.searchsorted(sums, 0.999 * sums[-1])) + 1
    wanted = numpy.sign(path[:length][::-1])
    one, half, mask = 1 << F, 1 << (F - 1), (1 << F) - 1
    # Enough words for all remainders of b0 x; where that has none the next sample's rounding is what the word decides.
    looks_ahead = b[0] % one == 0
    reach = 1024 if looks_ahead else max(1024, (one // abs(b[0])) * 5 // 8)
    words = numpy.unique(numpy.linspace(-reach, reach, WORDS).astype(numpy.int64))
    x, y = [0] * length, [0] * length
    for n in range(length):
        known = sum(c * x[n - k] for k, c in enumerate(b) if 0 < k <= n) - sum(c * y[n - k] for k, c in enumerate(a) if 0 < k <= n)
        if looks_ahead:
            results = (known + b[0] * words + half) >> F
            later = -a[1] * results  # the words themselves lose nothing
            sign = wanted[min(n + 1, length - 1)]
        else:
            later, sign = known + b[0] * words, wanted[n]
        error = half - ((later + half) & mask)  # rounded less exact, in 2^-F of a step
        x[n] = int(words[numpy.argmax(sign * error)])
        y[n] = (known + b[0] * x[n] + half) >> F
    assert max(map(abs, y)) < 2**23, "the words are full"
    reference = scipy_signal.lfilter(numpy.array(b) / one, numpy.array(a) / one, numpy.array(x, float))
    return float(y[-1] - reference[-1])


class Tightness(Case):
    def bound(self, text):
        plan = self.write("plan.toml", f"""title = "How tight a limit is"
[signal]
rate_hz = 1200.0
input = "i24"
output = "i24"
[[filter]]
{text}
coefficient_fraction_bits = {F}
[filter.arithmetic]
structure = "direct-1"
accumulator_bits = 64
rounding = "half-up"
{STEP}
[[rule]]
kind = "error"
max_lsb = "derived"
""")
        done = halflsb("predict", plan, "--json")
        self.assert_status(done, 0)
        (told,) = json.loads(done.out)["prediction"]["filters"]
        return told["arithmetic"]["error"]["lower"], told["arithmetic"]["error"]["upper"]

    def test_an_adversary_reaches_what_the_table_says(self):
        rows = []
        for name, text, b, a in filters():
            with self.subTest(name):
                lower, upper = self.bound(text)
                found = reached(b, a)
                self.assertLessEqual(found, upper)
                self.assertGreater(found, 0.9 * upper)
                rows.append(f"| {name} | {lower:.1f} .. {upper:.1f} | {found:.1f} | {100 * found / upper:.1f} % |\n")
        table = "| filter | limit, LSB | reached | of the limit |\n|---|---|---|---|\n" + "".join(rows)
        before, rest = DOCUMENT.read_text().split(BEGIN)
        kept, after = rest.split(END)
        if os.environ.get("HALFLSB_UPDATE_DOCS"):
            DOCUMENT.write_text(before + BEGIN + table + END + after)
        else:
            self.assertEqual(kept, table)


if __name__ == "__main__":
    main()
