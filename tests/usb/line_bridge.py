"""Carries bytes between the far end of an adapter (a socket of the machine) and a board's pseudo-terminal."""
import os
import select
import socket
import threading
import tty

HELD_BYTES = 65536  # a direction that nobody empties holds its sender up, as a full line does


class LineBridge:
    """Runs in a thread of its own until stop(). `to_board_bytes` and `to_host_bytes` count what was delivered."""

    def __init__(self, socket_path, device):
        self.to_board_bytes = self.to_host_bytes = 0
        self.line = os.open(device, os.O_RDWR | os.O_NOCTTY | os.O_NONBLOCK)
        tty.setraw(self.line)
        self.socket = socket.socket(socket.AF_UNIX)
        self.socket.connect(str(socket_path))
        self.socket.setblocking(False)
        self.wakes, self.woken = os.pipe()
        self.thread = threading.Thread(target=self._carry, daemon=True)
        self.thread.start()

    def stop(self):
        os.write(self.woken, b"x")
        self.thread.join(10)
        self.socket.close()
        for descriptor in (self.line, self.wakes, self.woken):
            os.close(descriptor)

    def _carry(self):
        to_board, to_host = bytearray(), bytearray()
        while True:
            readers = [self.wakes]
            readers += [self.socket] if len(to_board) < HELD_BYTES else []
            readers += [self.line] if len(to_host) < HELD_BYTES else []
            writers = ([self.line] if to_board else []) + ([self.socket] if to_host else [])
            can_read, can_write, _ = select.select(readers, writers, [])
            if self.wakes in can_read:
                return
            try:
                if self.socket in can_read:
                    more = self.socket.recv(4096)
                    if not more:
                        return  # the machine has ended
                    to_board += more
                if self.line in can_read:
                    to_host += os.read(self.line, 4096)
                if self.line in can_write:
                    written = os.write(self.line, to_board[:4096])
                    self.to_board_bytes += written
                    del to_board[:written]
                if self.socket in can_write:
                    written = self.socket.send(to_host[:4096])
                    self.to_host_bytes += written
                    del to_host[:written]
            except BlockingIOError:
                pass
            except OSError:
                return  # the board or the machine has ended: whoever waits for bytes has a deadline
