"""A kit with one block of 16 samples in flight works, slower: on the virtual board and in the firmware."""
import contextlib

from measure import Figures, bench, moving_average, noise_case, passed_run, virtual_board

BAUD, SAMPLES = 921_600, 40_000


def rate_on(at, block, credit):
    record = passed_run(at, at.plan(noise_case(SAMPLES), filter_text=moving_average(16)), at.rig(baud=BAUD))
    board, stream = record["board"], record["cases"][0]["stream"]
    if (board["block_samples"], board["credit_blocks"]) != (block, credit):
        raise SystemExit(f"the board granted {board['credit_blocks']} blocks of {board['block_samples']}")
    return stream["received_samples"], stream["received_samples"] / stream["streaming_s"]


@contextlib.contextmanager
def emulated(at, image):
    with at.emulated_board(image):
        yield


def compare(figures, what, small, large, large_block, large_credit):
    with bench() as at, small(at):
        received, slow = rate_on(at, 16, 1)
    with bench() as at, large(at):
        _, fast = rate_on(at, large_block, large_credit)
    figures.add(f"kit with one block of 16 samples, {what}", "passes, slower",
                f"passes {received:,} samples at {slow:,.0f} a second; {large_credit} blocks of {large_block}: {fast:,.0f}",
                received == SAMPLES and slow < fast)


def main():
    figures = Figures()
    compare(figures, f"virtual board at {BAUD:,} baud", lambda at: virtual_board(at, "--baud", BAUD, "--block", 16, "--credit", 1),
            lambda at: virtual_board(at, "--baud", BAUD, "--block", 256, "--credit", 4), 256, 4)
    compare(figures, "firmware on the emulated board", lambda at: emulated(at, "halflsb-cw7-block16.elf"),
            lambda at: emulated(at, "halflsb-cw7.elf"), 256, 4)
    figures.end()


main()
