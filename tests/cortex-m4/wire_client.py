"""A small host for docs/wire.md, written from that page alone: it shares no code with the kit or the runner."""
import collections
import os
import select
import struct
import termios
import time
import tty
import zlib

HELLO, START, STATUS, ECHO, SAMPLES, RESET = 0x01, 0x02, 0x03, 0x04, 0x10, 0x11
GREETING, STARTED, COUNTERS, ECHOED = 0x81, 0x82, 0x83, 0x84
RESPONSE, DONE, EXPECT, REFUSED = 0x90, 0x91, 0x92, 0xFF
LEFT = 1 << 5
# struct's letter for the word of each sample format; a left-justified u12 is a word of 16 bits.
WORD = {1: "h", 2: "i", 3: "h", 4: "i", 5: "f", 8: "i", 10 | LEFT: "H"}

Filter = collections.namedtuple("Filter", "name injection input output channels_in channels_out nodes tables")
Greeting = collections.namedtuple("Greeting", "build_id serial filters settings block credit tick_hz tick_bits")
Counters = collections.namedtuple("Counters", "frames_bad bytes_lost gaps resent blocks")
Response = collections.namedtuple("Response", "sequence ticks_total ticks_largest samples")


class Silence(Exception):
    pass


def encode(content):
    content += struct.pack("<I", zlib.crc32(content))
    groups, out = content.split(b"\0"), bytearray()
    for group in groups:
        while len(group) >= 254:
            out += b"\xff" + group[:254]
            group = group[254:]
        out += bytes([len(group) + 1]) + group
    return bytes(out) + b"\0"


def decode(frame):
    """The content without its CRC, None when the frame is broken."""
    out, at = bytearray(), 0
    while at < len(frame):
        code = frame[at]
        group = frame[at + 1 : at + code]
        if len(group) != code - 1:
            return None
        out += group
        at += code
        if code < 255 and at < len(frame):
            out.append(0)
    if len(out) < 5 or struct.unpack("<I", out[-4:])[0] != zlib.crc32(out[:-4]):
        return None
    return bytes(out[:-4])


class WireClient:
    def __init__(self, device):
        self.line = os.open(device, os.O_RDWR | os.O_NOCTTY | os.O_NONBLOCK)
        tty.setraw(self.line, termios.TCSANOW)
        termios.tcflush(self.line, termios.TCIFLUSH)
        self.pending = b""
        self.frames = collections.deque()
        self.nonce = int.from_bytes(os.urandom(4), "little")
        self.bad_frames = 0

    def __enter__(self):
        return self

    def __exit__(self, *_):
        os.close(self.line)

    def write(self, data):
        until = time.monotonic() + 5
        while data:
            if not select.select([], [self.line], [], 1)[1] and time.monotonic() > until:
                raise Silence("the line took no byte for 5 s")
            try:
                data = data[os.write(self.line, data) :]
            except BlockingIOError:
                pass

    def send(self, kind, body):
        self.write(encode(bytes([kind]) + body))

    def receive(self, wait_s=5.0):
        """The next good frame, as (type, body)."""
        until = time.monotonic() + wait_s
        while not self.frames:
            left = until - time.monotonic()
            if left <= 0 or not select.select([self.line], [], [], left)[0]:
                raise Silence(f"no frame for {wait_s} s; {len(self.pending)} bytes of one came")
            *whole, self.pending = (self.pending + os.read(self.line, 65536)).split(b"\0")
            for frame in filter(None, whole):
                content = decode(frame)
                if content is None:
                    self.bad_frames += 1
                else:
                    self.frames.append((content[0], content[1:]))
        return self.frames.popleft()

    def silent_for(self, wait_s):
        try:
            self.frames.appendleft(self.receive(wait_s))
            return False
        except Silence:
            return True

    def ask(self, kind, answer, body, nonce=None):
        """Asks once a second until the answer with our nonce, or a refusal of it, comes."""
        if nonce is None:
            self.nonce = nonce = (self.nonce + 1) & 0xFFFFFFFF
        for _ in range(5):
            self.send(kind, struct.pack("<I", nonce) + body)
            until = time.monotonic() + 1
            while time.monotonic() < until:
                try:
                    got, content = self.receive(max(0.001, until - time.monotonic()))
                except Silence:
                    break
                if got == answer and content[:4] == struct.pack("<I", nonce):
                    return content[4:]
                if got == REFUSED and content[0] == kind:
                    raise ValueError(f"refused, reason {content[3]}")
        raise Silence(f"no answer to type {kind:#04x}")

    def greeting(self):
        def text(page, at):
            return page[at + 1 : at + 1 + page[at]], at + 1 + page[at]

        pages = [self.ask(HELLO, GREETING, bytes([0]))]
        pages += [self.ask(HELLO, GREETING, bytes([n])) for n in range(1, pages[0][1])]
        first = pages[0][2:]
        if first[0] != 1:
            raise ValueError(f"protocol {first[0]}")
        build_id, at = text(first, 1)
        serial, at = text(first, at)
        filter_count, setting_count, block, credit, tick_hz, tick_bits = struct.unpack("<BBHBIB", first[at:])
        filters, settings = [], []
        for page in pages[1 : 1 + filter_count]:
            name, at = text(page, 2)
            filters.append(Filter(name.decode(), *page[at:]))
        for page in pages[1 + filter_count :]:
            name, at = text(page, 2)
            settings.append((name.decode(), *struct.unpack("<iii", page[at:])))
        if len(settings) != setting_count:
            raise ValueError(f"{setting_count} settings announced, {len(settings)} described")
        return Greeting(build_id.hex(), serial.decode(), filters, settings, block, credit, tick_hz, tick_bits)

    def counters(self):
        return Counters(*struct.unpack("<5I", self.ask(STATUS, COUNTERS, b"")))

    def start(self, number, block):
        return struct.unpack("<HB", self.ask(START, STARTED, struct.pack("<BHI", number, block, 0)))

    def send_block(self, sequence, letter, samples):
        self.send(SAMPLES, struct.pack(f"<H{len(samples)}{letter}", sequence & 0xFFFF, *samples))

    def response(self, letter):
        kind, body = self.receive()
        if kind != RESPONSE:
            raise ValueError(f"type {kind:#04x} where a RESPONSE was due: {body.hex()}")
        sequence, total, largest = struct.unpack("<HI", body[:6]) + (int.from_bytes(body[6:9], "little"),)
        width = struct.calcsize(letter)
        return Response(sequence, total, largest, struct.unpack(f"<{(len(body) - 9) // width}{letter}", body[9:]))

    def stream(self, number, filter_, samples, block):
        """All samples through the filter from reset, as (output, ticks of each block, largest of each block)."""
        block, credit = self.start(number, block)
        step = block * filter_.channels_in
        blocks = [samples[at : at + step] for at in range(0, len(samples), step)]
        output, totals, largest, sent = [], [], [], 0
        for expected in range(len(blocks)):
            while sent < len(blocks) and sent - expected < credit:
                self.send_block(sent, WORD[filter_.input], blocks[sent])
                sent += 1
            answer = self.response(WORD[filter_.output])
            if answer.sequence != expected & 0xFFFF or len(answer.samples) != len(blocks[expected]):
                raise ValueError(f"answer {answer.sequence} of {len(answer.samples)} where {expected} was due")
            output += answer.samples
            totals.append(answer.ticks_total)
            largest.append(answer.ticks_largest)
        return output, totals, largest
