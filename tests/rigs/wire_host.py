"""A host of the framed wire, written from docs/wire.md alone: Python's standard library, none of our C or C++.

    board = WireHost("/dev/pts/3")
    greeting = board.greet()
    board.start(greeting.filters[0], block_samples=256)
    answer = board.stream([16, -3, ...])      # the same number of samples, or WireError
    board.close()
"""

import collections
import os
import select
import struct
import termios
import time
import tty
import zlib

HELLO, START, STATUS, ECHO = 0x01, 0x02, 0x03, 0x04
SAMPLES, RESET, SET, LOAD, SELECT = 0x10, 0x11, 0x12, 0x13, 0x14
GREETING, STARTED, COUNTERS, ECHOED = 0x81, 0x82, 0x83, 0x84
RESPONSE, DONE, EXPECT, REFUSED = 0x90, 0x91, 0x92, 0xFF

REASONS = {
    1: "unknown type",
    2: "no stream is open",
    3: "not the current sample index",
    4: "no such filter, setting or table",
    5: "value or length out of range",
    6: "not supported",
}
# By number: name, bits, bytes of a right-justified word, struct's letter for it ("" when struct has none).
NUMBERS = {
    1: ("q15", 16, 2, "h"),
    2: ("q31", 32, 4, "i"),
    3: ("i16", 16, 2, "h"),
    4: ("i32", 32, 4, "i"),
    5: ("f32", 32, 4, "f"),
    6: ("q7", 8, 1, "b"),
    7: ("i8", 8, 1, "b"),
    8: ("i24", 24, 4, "i"),
    9: ("u8", 8, 1, "B"),
    10: ("u12", 12, 2, "H"),
    11: ("u16", 16, 2, "H"),
}


class Words:
    """Sample words of a format byte of the greeting: number, justification << 5, byte order << 7."""

    def __init__(self, format_byte):
        self.name, self.bits, self.bytes, self.letter = NUMBERS[format_byte & 0x1F]
        self.is_left, self.is_packed = format_byte >> 5 & 3 == 1, format_byte >> 5 & 3 == 2
        self.order = "big" if format_byte & 0x80 else "little"
        if self.is_packed:
            self.bytes, self.letter = self.bits // 8, ""
        self.down = 8 * self.bytes - self.bits if self.is_left else 0
        self.signed = not self.name.startswith("u")

    def pack(self, codes):
        if self.letter and not self.down:
            return struct.pack(f"{'>' if self.order == 'big' else '<'}{len(codes)}{self.letter}", *codes)
        return b"".join((code << self.down).to_bytes(self.bytes, self.order, signed=self.signed) for code in codes)

    def unpack(self, data):
        """A right-justified word is taken whole, whatever its spare bits hold."""
        if self.letter and not self.down:
            return struct.unpack(f"{'>' if self.order == 'big' else '<'}{len(data) // self.bytes}{self.letter}", data)
        words = (data[at : at + self.bytes] for at in range(0, len(data), self.bytes))
        return tuple(int.from_bytes(word, self.order, signed=self.signed) >> self.down for word in words)


class WireError(Exception):
    pass


class Refused(WireError):
    def __init__(self, frame_type, number, reason):
        super().__init__(f"type 0x{frame_type:02x} number {number} refused: {REASONS.get(reason, reason)}")
        self.frame_type, self.number, self.reason = frame_type, number, reason


# Frames


def cobs_encode(content):
    out = bytearray()
    at = 0
    while True:
        zero = content.find(0, at, at + 254)
        end = min(at + 254, len(content)) if zero < 0 else zero
        out.append(end - at + 1)
        out += content[at:end]
        if zero >= 0:
            at = end + 1  # the group stands for this zero: another group must follow
        elif end == len(content):
            return bytes(out)
        else:
            at = end


def cobs_decode(encoded):
    """The content, or None when the groups do not fit the frame."""
    out = bytearray()
    at = 0
    while at < len(encoded):
        code = encoded[at]
        group = encoded[at + 1 : at + code]
        if code == 0 or len(group) != code - 1:
            return None
        out += group
        at += code
        if code < 255 and at < len(encoded):
            out.append(0)
    return bytes(out)


def frame(content):
    return cobs_encode(content + struct.pack("<I", zlib.crc32(content))) + b"\0"


def content_of(encoded):
    """Type and body of a frame without its delimiter, or None when it is broken."""
    content = cobs_decode(encoded)
    if content is None or len(content) < 5:
        return None
    if struct.unpack("<I", content[-4:])[0] != zlib.crc32(content[:-4]):
        return None
    return content[:-4]


# The greeting

Filter = collections.namedtuple("Filter", "number name injection input output channels_in channels_out nodes tables")
Setting = collections.namedtuple("Setting", "number name minimum maximum value")
Greeting = collections.namedtuple(
    "Greeting", "protocol build_id serial filters settings max_block_samples credit_blocks tick_hz tick_bits"
)


def take_text(page):
    return page[1 : 1 + page[0]].decode("utf-8"), page[1 + page[0] :]


# The link


class WireHost:
    def __init__(self, path, answer_seconds=5.0, resend_seconds=0.25, window=64):
        self.descriptor = os.open(path, os.O_RDWR | os.O_NOCTTY | os.O_NONBLOCK)
        tty.setraw(self.descriptor, termios.TCSANOW)
        self.answer_seconds, self.resend_seconds = answer_seconds, resend_seconds
        self.after_loss_seconds = min(0.005, resend_seconds)
        self.window = window  # frames in flight at most, however much the board grants
        self.received, self.to_send = bytearray(), bytearray()
        self.nonce = int.from_bytes(os.urandom(4), "little")
        self.frames_bad = self.resends = 0
        self.filter, self.filters = None, []
        self.block_samples = self.credit_blocks = 0
        self.seq = self.index = 0
        self.ticks = []  # (total, largest) of each block
        self.answered_at = []  # when each block's answer was taken

    def close(self):
        os.close(self.descriptor)

    def exchange_bytes(self, seconds):
        """Moves bytes until something came, or so long."""
        wanted = [self.descriptor] if self.to_send else []
        readable, writable, _ = select.select([self.descriptor], wanted, [], max(0.0, seconds))
        if writable:
            try:
                del self.to_send[: os.write(self.descriptor, self.to_send[:65536])]
            except BlockingIOError:
                pass
            except OSError as error:
                # What it said before it went is still to be read.
                if not readable:
                    raise WireError(f"the board is gone: {error}") from error
        if readable:
            try:
                got = os.read(self.descriptor, 65536)
            except BlockingIOError:
                return
            except OSError as error:
                raise WireError(f"the board is gone: {error}") from error
            if not got:
                raise WireError("the board is gone: end of file")
            self.received += got

    def contents(self):
        """The good frames that have come."""
        while (end := self.received.find(0)) >= 0:
            encoded = bytes(self.received[:end])
            del self.received[: end + 1]
            if not encoded:
                continue
            content = content_of(encoded)
            if content is None:
                self.frames_bad += 1
            else:
                yield content

    def send(self, content):
        self.to_send += frame(content)

    def ask(self, question, body, answer, again_seconds=0.1):
        """Repeats the question until its answer has come; returns the body behind the nonce."""
        self.nonce = (self.nonce + 1) & 0xFFFFFFFF
        nonce = struct.pack("<I", self.nonce)
        deadline = time.monotonic() + self.answer_seconds
        while time.monotonic() < deadline:
            self.send(bytes([question]) + nonce + body)
            again = time.monotonic() + again_seconds
            while time.monotonic() < again:
                self.exchange_bytes(again - time.monotonic())
                for content in self.contents():
                    if content[0] == answer and content[1:5] == nonce:
                        return content[5:]
                    if content[0] == REFUSED and content[1] == question and content[2:4] == nonce[:2]:
                        raise Refused(question, self.nonce & 0xFFFF, content[4])
        raise WireError(f"no answer to type 0x{question:02x} in {self.answer_seconds} s")

    def page(self, number):
        body = self.ask(HELLO, bytes([number]), GREETING)
        if body[0] != number:
            raise WireError(f"asked for page {number}, got {body[0]}")
        return body[1], body[2:]

    def greet(self):
        pages, page = self.page(0)
        protocol, page = page[0], page[1:]
        build_id, page = page[1 : 1 + page[0]], page[1 + page[0] :]
        serial, page = take_text(page)
        filter_count, setting_count, block, credit, tick_hz, tick_bits = struct.unpack("<BBHBIB", page)
        if pages != 1 + filter_count + setting_count:
            raise WireError(f"{pages} pages for {filter_count} filters and {setting_count} settings")
        filters, settings = [], []
        for number in range(filter_count):
            name, page = take_text(self.page(1 + number)[1])
            filters.append(Filter(number, name, *struct.unpack("<7B", page)))
        for number in range(setting_count):
            name, page = take_text(self.page(1 + filter_count + number)[1])
            settings.append(Setting(number, name, *struct.unpack("<iii", page)))
        self.filters = filters
        return Greeting(protocol, build_id.hex(), serial, filters, settings, block, credit, tick_hz, tick_bits)

    def filter_named(self, name):
        return next(f for f in (self.filters or self.greet().filters) if f.name == name)

    def counters(self):
        names = ("frames_bad", "bytes_lost", "gaps", "resent", "blocks")
        return dict(zip(names, struct.unpack("<5I", self.ask(STATUS, b"", COUNTERS))))

    def echo(self, data):
        return self.ask(ECHO, data, ECHOED)

    def start(self, chosen, block_samples=256, nodes=0):
        body = struct.pack("<BHI", chosen.number, block_samples, nodes)
        self.block_samples, self.credit_blocks = struct.unpack("<HB", self.ask(START, body, STARTED))
        self.filter, self.seq, self.index = chosen, 0, 0

    # The stream

    def samples_item(self, codes):
        return SAMPLES, Words(self.filter.input).pack(codes), len(codes) // self.filter.channels_in

    def blocks_of(self, codes):
        step = self.block_samples * self.filter.channels_in
        return [self.samples_item(codes[at : at + step]) for at in range(0, len(codes), step)]

    def stream(self, codes):
        """The response to these samples, in blocks as large as granted."""
        return [code for answer in self.exchange(self.blocks_of(codes)) for code in answer]

    def command(self, kind, fields=b""):
        """A command before the next sample."""
        self.exchange([(kind, fields, 0)])

    def reset(self):
        self.command(RESET)

    def set(self, setting, value):
        self.command(SET, struct.pack("<Bi", setting, value))

    def load(self, table, offset, values):
        self.command(LOAD, struct.pack(f"<BH{len(values)}i", table, offset, *values))

    def select(self, number):
        self.command(SELECT, bytes([number]))

    def exchange(self, items):
        """Sends items (type, fields, samples), at most credit_blocks in flight, and returns the answers' samples."""
        words = Words(self.filter.output)
        answers = []
        in_flight = collections.deque()  # (number, frame)
        waiting = collections.deque(items)
        last_sent = last_good = time.monotonic()
        skipped = False  # an answer or a frame is known to be lost

        def send_again():
            self.resends += 1
            self.to_send += b"\0" + b"".join(sent for _, sent in in_flight)

        while waiting or in_flight:
            while waiting and len(in_flight) < min(self.credit_blocks, self.window):
                kind, fields, count = waiting.popleft()
                at = b"" if kind == SAMPLES else struct.pack("<Q", self.index)
                sent = frame(struct.pack("<BH", kind, self.seq) + at + fields)
                in_flight.append((self.seq, sent))
                self.to_send += sent
                self.seq = (self.seq + 1) & 0xFFFF
                self.index += count
            self.exchange_bytes(self.after_loss_seconds if skipped else self.resend_seconds / 4)
            now = time.monotonic()
            for content in self.contents():
                last_good = now
                kind, oldest = content[0], in_flight[0][0] if in_flight else None
                if kind in (RESPONSE, DONE) and in_flight:
                    number = struct.unpack("<H", content[1:3])[0]
                    ahead = (number - oldest) & 0xFFFF
                    if ahead == 0:
                        in_flight.popleft()
                        last_sent, skipped = now, False
                        if kind == RESPONSE:
                            total, low, high = struct.unpack("<IHB", content[3:10])
                            self.ticks.append((total, low | high << 16))
                            self.answered_at.append(now)
                            answers.append(words.unpack(content[10:]))
                    elif ahead < 0x8000:
                        skipped = True
                elif kind == EXPECT and in_flight:
                    number = struct.unpack("<H", content[1:3])[0]
                    skipped = skipped or number == oldest
                elif kind == REFUSED:
                    raise Refused(content[1], struct.unpack("<H", content[2:4])[0], content[4])
            # Not before what was sent again has had the time to be answered.
            patience = self.after_loss_seconds if skipped else self.resend_seconds
            if in_flight and not self.to_send and now - last_sent > patience:
                send_again()
                last_sent, skipped = now, False
            if in_flight and now - last_good > self.answer_seconds:
                raise WireError(f"no answer in {self.answer_seconds} s; {len(in_flight)} frames are unanswered")
        return answers
