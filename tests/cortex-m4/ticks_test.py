"""With counted instructions a filter takes the same ticks on every run; without, ticks are time."""
import unittest

import support
from support import bits_of, board, noise

RUNS, SAMPLES, BLOCK, SEED = 3, 512, 64, 3


def ticks(client):
    """Of each filter: ticks of every block, one block in flight, so that no receive interrupt falls into it."""
    found = {}
    for number, filter_ in enumerate(client.greeting().filters):
        samples = noise(SAMPLES, bits_of(filter_), SEED)
        block, _ = client.start(number, BLOCK)
        totals = []
        for sequence, at in enumerate(range(0, SAMPLES, block)):
            letter = {1: "h", 2: "i"}[filter_.input]
            client.send_block(sequence, letter, samples[at : at + block])
            answer = client.response(letter)
            totals.append((answer.ticks_total, answer.ticks_largest))
        found[filter_.name] = totals
    return found


class Ticks(unittest.TestCase):
    def test_three_runs_with_counted_instructions_take_the_same_ticks(self):
        runs = []
        for _ in range(RUNS):
            with board("halflsb-cw7.elf", "--icount") as client:
                runs.append(ticks(client))
        for name, totals in runs[0].items():
            print(f"    {name}: {totals[-1][0] / BLOCK:.1f} instructions a sample in blocks of {BLOCK}")
        self.assertEqual(runs[1:], runs[:1] * (RUNS - 1))
        for name, totals in runs[0].items():
            with self.subTest(name):
                for total, largest in totals:
                    self.assertGreater(total, BLOCK)  # no filter takes a sample with one instruction
                    self.assertLessEqual(total, largest * BLOCK)
                    self.assertLess((largest - 1) * BLOCK, total)  # the total by the samples, rounded up

    def test_a_larger_filter_takes_more_ticks(self):
        with board("halflsb-cw7.elf", "--icount") as client:
            totals = {name: sum(total for total, _ in blocks) for name, blocks in ticks(client).items()}
        self.assertGreater(totals["settle"], totals["mains-notch"])  # two sections against one


if __name__ == "__main__":
    support.main()
