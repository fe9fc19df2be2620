"""How codes lie in words, and the faults on the way into and out of a filter, of its reset and of its channels: written
from their descriptions, sharing no code with the board."""

from whole_numbers import into_word, wrap


class Word:
    """How a code lies in its bytes."""

    def __init__(self, bits, size, offset=False, left=False, big=False):
        self.bits, self.size, self.offset = bits, size, offset
        self.down, self.order = 8 * size - bits if left else 0, "big" if big else "little"
        self.zero = 1 << (bits - 1) if offset else 0
        self.bottom, self.top = self.zero - (1 << (bits - 1)), self.zero + (1 << (bits - 1)) - 1

    def swapped(self, code):
        data = (code << self.down).to_bytes(self.size, self.order, signed=not self.offset)
        return int.from_bytes(data[::-1], self.order, signed=not self.offset) >> self.down

    def inverted(self, code):
        return min(2 * self.zero - code, self.top)

    def as_read(self, code):
        """What a host finds in the word: its bits in two's complement, as a signed or an unsigned number."""
        bits = 8 * self.size - self.down
        return code % (1 << bits) if self.offset else wrap(code, bits)


class FloatWord:
    bits, zero = 32, 0.0

    def inverted(self, code):
        return -code

    def as_read(self, code):
        return code


class Passage:
    """The faults on the way into and out of a filter, and of its reset."""

    channel_count = 1

    def __init__(self, inner, word, faults):
        self.inner, self.word, self.faults = inner, word, faults
        self.clear()

    def clear(self):
        self.count, self.late, self.held, self.half_buffer = 0, self.word.zero, 0, []

    def reset(self):
        if "S07" in self.faults:
            return
        self.clear()
        if "S06" in self.faults:
            self.inner.reset_half()
        else:
            self.inner.reset()

    def begin_block(self):
        if "S11" in self.faults:
            self.inner.reset()

    def step(self, x):
        faults = self.faults
        self.count += 1
        if "S20" in faults:
            return x
        if "N04" in faults:
            x = self.word.swapped(x)
        if "N06" in faults:
            x = self.word.inverted(x)
        if "D01" in faults:
            place = (self.count - 1) % 32
            if (self.count - 1) // 32 % 10 == 9:
                x = self.half_buffer[place]
            else:
                self.half_buffer[place : place + 1] = [x]
        if self.count % 1000 == 0 and "D03" in faults:
            return self.held
        if self.count % 1000 == 0 and "D04" in faults:
            self.inner.step(x)
        y = self.word.as_read(self.inner.step(x))
        self.held = y
        if "S01" in faults:
            y, self.late = self.late, y
        return y


class Channels:
    """Samples of one instant are adjacent; each channel passes a filter of its own."""

    def __init__(self, channels, faults):
        self.channels, self.channel_count, self.faults = channels, len(channels), faults

    def reset(self):
        for channel in self.channels:
            channel.reset()

    def begin_block(self):
        for channel in self.channels:
            channel.begin_block()

    def step_instant(self, instant):
        if "channels-swapped" in self.faults:
            instant = instant[::-1]
        passed = [self.channels[0]] * 2 if "S15" in self.faults else self.channels
        out = [channel.step(x) for channel, x in zip(passed, instant)]
        if "S16" in self.faults:
            out[1] = into_word(out[1] + instant[0] // 128, 16, False)
        return out
