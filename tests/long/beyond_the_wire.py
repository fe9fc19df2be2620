"""The time of a whole `halflsb check`, from start to exit, beyond the time that its bytes take on the wire.

On a paced line that time is known: bytes of the busier direction x 10 / baud. The emulated board ignores baud; there the
same frames go through a bare echo firmware on the same emulator, with as many blocks in flight, right after each check.

The emulator hands each byte from one of its threads to the other. How long that takes depends on where the scheduler has
put them and halves or doubles by chance, so both emulators are kept on one processor. What else the machine does only
ever adds time: the fastest check is held against the fastest echo, and every pair is shown. (The best pair would be the
one whose echo was disturbed.)
"""
import collections
import contextlib
import os
import pathlib
import random
import select
import statistics
import struct
import sys
import termios
import time
import tty

from measure import BITS_PER_BYTE, Figures, bench, moving_average, noise_case, note, passed_run, virtual_board

sys.path.insert(0, str(pathlib.Path(__file__).resolve().parents[1] / "rigs"))
from wire_host import SAMPLES, frame  # noqa: E402

AT_MOST = 0.10
BAUD, PACED_SAMPLES, PACED_RUNS = 921_600, 200_000, 3
EMULATED_SAMPLES, PAIRS = 40_000, 11


def timed_check(at, plan, rig):
    begin = time.monotonic()
    record = passed_run(at, plan, rig)
    return time.monotonic() - begin, record


def on_the_paced_line(figures):
    shares = []
    with bench() as at, virtual_board(at, "--baud", BAUD):
        plan, rig = at.plan(noise_case(PACED_SAMPLES), filter_text=moving_average(16)), at.rig(baud=BAUD)
        for _ in range(PACED_RUNS):
            seconds, record = timed_check(at, plan, rig)
            stream = record["cases"][0]["stream"]
            on_the_wire = max(stream["to_board_bytes"], stream["to_host_bytes"]) * BITS_PER_BYTE / BAUD
            shares.append(seconds / on_the_wire - 1.0)
            note(f"paced: {seconds:.3f} s, of which {on_the_wire:.3f} s on the wire, {stream['resends']} resends")
    share = statistics.median(shares)
    # Less than no time would mean that the board does not pace.
    figures.add(f"halflsb check beyond time on the wire, virtual board at {BAUD:,} baud, {PACED_SAMPLES:,} samples", "< 10 %",
                f"{100 * share:.1f} % (median of {PACED_RUNS}; {', '.join(f'{100 * s:.1f}' for s in shares)})", -0.01 <= share < AT_MOST)


def seconds_of_echo(device, frames, in_flight):
    """Until all bytes are back; never more than `in_flight` frames out, as with credit."""
    line = os.open(device, os.O_RDWR | os.O_NOCTTY | os.O_NONBLOCK)
    try:
        tty.setraw(line, termios.TCSANOW)
        termios.tcflush(line, termios.TCIOFLUSH)
        waiting, out, to_send, back = collections.deque(frames), collections.deque(), b"", bytearray()
        begin = time.monotonic()
        while waiting or out:
            while waiting and len(out) < in_flight:
                out.append(waiting.popleft())
                to_send += out[-1]
            readable, writable, _ = select.select([line], [line] if to_send else [], [], 10.0)
            if not readable and not writable:
                raise SystemExit("the echo stopped")
            if writable:
                to_send = to_send[os.write(line, to_send) :]
            if readable:
                back += os.read(line, 65536)
                while out and len(back) >= len(out[0]):
                    if back[: len(out[0])] != out[0]:
                        raise SystemExit("the echo returned other bytes")
                    del back[: len(out.popleft())]
        return time.monotonic() - begin
    finally:
        os.close(line)


def frames_of_a_check(samples, block):
    source = random.Random(7)
    made = []
    for first in range(0, samples, block):
        count = min(block, samples - first)
        words = [source.randrange(-32768, 32768) for _ in range(count)]
        made.append(frame(struct.pack(f"<BH{count}h", SAMPLES, first // block & 0xFFFF, *words)))
    return made


@contextlib.contextmanager
def on_one_processor():
    """What is started here stays there: children inherit it."""
    allowed = os.sched_getaffinity(0)
    os.sched_setaffinity(0, {min(allowed)})
    try:
        yield
    finally:
        os.sched_setaffinity(0, allowed)


def on_the_emulated_board(figures):
    checks, echoes = [], []
    with contextlib.ExitStack() as stack:
        at, echo = stack.enter_context(bench()), stack.enter_context(bench())
        with on_one_processor():
            stack.enter_context(at.emulated_board("halflsb-cw7.elf"))
            stack.enter_context(echo.emulated_board("halflsb-echo.elf"))
        plan, rig = at.plan(noise_case(EMULATED_SAMPLES), filter_text=moving_average(16)), at.rig()
        for _ in range(PAIRS):
            seconds, record = timed_check(at, plan, rig)
            board, stream = record["board"], record["cases"][0]["stream"]
            frames = frames_of_a_check(EMULATED_SAMPLES, board["block_samples"])
            echoed = seconds_of_echo(echo.link, frames, board["credit_blocks"])
            checks.append(seconds)
            echoes.append(echoed)
            note(f"emulated: {seconds:.3f} s, {stream['streaming_s']:.3f} s of it streaming {stream['to_board_bytes']} bytes there and "
                 f"{stream['to_host_bytes']} back, {stream['resends']} resends; the echo of {sum(map(len, frames))} bytes took {echoed:.3f} s")
    share = min(checks) / min(echoes) - 1.0
    pairs = ", ".join(f"{100 * (check / echoed - 1.0):.1f}" for check, echoed in zip(checks, echoes))
    figures.add(f"halflsb check beyond a bare echo of the same bytes, emulated board, {EMULATED_SAMPLES:,} samples", "< 10 %",
                f"{100 * share:.1f} % (fastest check over fastest echo of {PAIRS} interleaved pairs; the pairs: {pairs})", share < AT_MOST)


def main():
    figures = Figures()
    on_the_paced_line(figures)
    on_the_emulated_board(figures)
    figures.end()


main()
