"""Starts and ends a virtual board for a test."""

import json
import signal
import subprocess
import tempfile

from wire_host import WireHost


class VirtualBoard:
    """with VirtualBoard(program, "--fault", "A01") as board: board.host.greet() ..."""

    def __init__(self, program, *options, host_options=None):
        self.command = [program, "--parent-dies", *options]
        self.host_options = host_options or {}
        self.statistics = None

    def __enter__(self):
        self.file = tempfile.NamedTemporaryFile(suffix=".json")
        self.process = subprocess.Popen(
            [*self.command, "--stats", self.file.name], stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True
        )
        self.device = self.process.stdout.readline().strip()
        if not self.device:
            raise RuntimeError(self.process.stderr.read())
        self.host = WireHost(self.device, **self.host_options)
        return self

    def end(self):
        """Exit status; the board's own account is then in `statistics`."""
        if self.process.poll() is None:
            self.process.send_signal(signal.SIGTERM)
        status = self.process.wait(timeout=5)
        if self.statistics is None:
            with open(self.file.name, encoding="utf-8") as account:
                text = account.read()
            self.statistics = json.loads(text) if text else {}
        return status

    def __exit__(self, *_):
        self.end()
        self.host.close()
        self.process.stdout.close()
        self.process.stderr.close()
        self.file.close()
