"""An emulated PC with a USB host controller and serial ports of its own: boots the kernel, runs commands in it, plugs and unplugs adapters."""
import base64
import ctypes
import json
import os
import signal
import socket
import subprocess
import threading
import time

EMULATOR = "qemu-system-x86_64"

# The first process: loads the drivers, then only waits, and buries what the shell below leaves behind.
INIT = r"""#!/bin/sh
/bin/busybox --install -s /bin
mkdir -p /proc /sys /dev /tmp /root
mount -t proc proc /proc
mount -t sysfs sysfs /sys
mount -t devtmpfs devtmpfs /dev
mount -t tmpfs tmpfs /tmp
stty -F /dev/ttyS1 raw -echo
for module in /modules/*; do insmod $module || echo "cannot load $module" >/dev/ttyS1; done
sh /commands </dev/ttyS1 >/dev/ttyS1
"""
# Commands come in as "NUMBER BASE64", each runs beside the others, and goes out as "done NUMBER STATUS OUT. ERR.".
# Each runs as a grandchild: the end of a child in the background makes this shell's `read` forget half a line.
COMMANDS = r"""
answer() {
    cd /root
    echo "$2" | base64 -d >/tmp/$1.sh
    sh /tmp/$1.sh >/tmp/$1.out 2>/tmp/$1.err </dev/null 7>&-
    status=$?
    flock 7
    echo "done $1 $status $(base64 </tmp/$1.out | tr -d '\n'). $(base64 </tmp/$1.err | tr -d '\n')."
}
echo "ready $(uname -r)"
while read -r number script; do
    (answer "$number" "$script" 7>/tmp/one-answer-at-a-time &)
done
"""


class Finished:
    def __init__(self, status, out, err, ended_at):
        self.status, self.out, self.err, self.ended_at = status, out, err, ended_at
        self.text = " ".join((out + err).split())  # however its lines were folded

    def __repr__(self):
        return f"status {self.status}\n--- stdout\n{self.out}--- stderr\n{self.err}---"


def _die_with_parent(parent):
    os.setpgid(0, 0)  # Ctrl-C goes to the whole terminal; the test ends the machine itself
    ctypes.CDLL(None).prctl(1, int(signal.SIGKILL), 0, 0, 0)
    if os.getppid() != parent:
        os._exit(1)


class Machine:
    """`adapters`: how many lines there are to plug adapters onto; line N is the socket line_path(N)."""

    def __init__(self, kernel, initramfs, folder, adapters):
        self.folder, self.process, self.sockets = folder, None, []
        image = folder / "initramfs"
        image.write_bytes(initramfs)
        vmlinuz = next((kernel / "boot").glob("vmlinuz-*"))
        command = [EMULATOR, "-M", "q35", "-accel", "tcg", "-m", "512", "-smp", "1", "-nodefaults", "-no-user-config",
                   "-no-reboot", "-display", "none", "-kernel", vmlinuz, "-initrd", image,
                   "-append", "console=ttyS0 panic=-1 quiet loglevel=6 random.trust_cpu=on",
                   "-serial", f"file:{folder / 'kernel.log'}",
                   "-serial", f"unix:{folder / 'console'},server=on,wait=off",
                   "-serial", f"unix:{folder / 'uart'},server=on,wait=off",
                   "-qmp", f"unix:{folder / 'qmp'},server=on,wait=off",
                   "-device", "qemu-xhci,id=usb", "-D", folder / "adapter.log", "-trace", "usb_serial_*"]
        for number in range(adapters):
            command += ["-chardev", f"socket,id=line{number},path={self.line_path(number)},server=on,wait=off"]
        parent = os.getpid()
        with open(folder / "emulator.log", "wb") as log:
            self.process = subprocess.Popen([str(word) for word in command], stdin=subprocess.DEVNULL,
                                            stdout=log, stderr=log, preexec_fn=lambda: _die_with_parent(parent))
        self.answers, self.changed, self.count, self.deleted = {}, threading.Condition(), 0, []
        try:
            self.console = self._connect("console")
            self.qmp = self._connect("qmp")
            self._qmp_answers = iter(self.qmp.makefile("r", encoding="utf-8"))
            next(self._qmp_answers)  # the greeting
            self.tell("qmp_capabilities")
            threading.Thread(target=self._listen, daemon=True).start()
        except Exception:
            self.stop()
            raise

    def line_path(self, number):
        return self.folder / f"line{number}"

    def uart_path(self):
        """The far end of the PC's own third port, /dev/ttyS2."""
        return self.folder / "uart"

    def _connect(self, name, limit_s=30.0):
        until = time.monotonic() + limit_s
        while True:
            line = socket.socket(socket.AF_UNIX)
            try:
                line.connect(str(self.folder / name))
            except OSError:
                line.close()
                if self.process.poll() is not None or time.monotonic() > until:
                    raise RuntimeError(f"{EMULATOR} did not start: {self.emulator_said()}")
                time.sleep(0.02)
                continue
            line.settimeout(limit_s)
            self.sockets.append(line)
            return line

    def emulator_said(self):
        return (self.folder / "emulator.log").read_text(errors="replace")[-1000:]

    def kernel_said(self):
        log = self.folder / "kernel.log"
        return log.read_text(errors="replace") if log.exists() else ""

    # --- the cable ---

    def tell(self, name, **arguments):
        """One command of the emulator's control protocol; its answer. Events on the way are kept."""
        try:
            self.qmp.sendall(json.dumps({"execute": name, "arguments": arguments}).encode() + b"\n")
            for text in self._qmp_answers:
                answer = json.loads(text)
                if answer.get("event") == "DEVICE_DELETED":
                    self.deleted.append(answer["data"].get("device"))
                elif "error" in answer:
                    raise RuntimeError(f"{name} {arguments}: {answer['error']['desc']}")
                elif "return" in answer:
                    return answer["return"]
        except ConnectionError:
            pass
        raise RuntimeError(f"{EMULATOR} ended{self._end()} during {name}: {self.emulator_said()}")

    def _end(self):
        """How the emulator ended: a negative status is the signal that killed it, a crash of its own."""
        try:
            return f" with status {self.process.wait(timeout=5.0)}"
        except subprocess.TimeoutExpired:
            return " the connection but still runs"

    def plug(self, number, serial):
        self.tell("device_add", driver="usb-serial", id=f"adapter{number}", chardev=f"line{number}", bus="usb.0", serial=serial)

    def unplug(self, number):
        self.tell("device_del", id=f"adapter{number}")

    # --- commands inside ---

    def _listen(self):
        self.console.settimeout(None)
        for text in self.console.makefile("r", encoding="utf-8", errors="replace"):
            now = time.monotonic()
            words = text.split()
            with self.changed:
                if len(words) == 5 and words[0] == "done" and words[1].isdigit():
                    out, err = (base64.b64decode(word[:-1]).decode() for word in words[3:])
                    self.answers[int(words[1])] = Finished(int(words[2]), out, err, now)
                else:
                    self.answers.setdefault("said", []).append(text.strip())
                self.changed.notify_all()

    def _wait(self, condition, limit_s, what):
        until = time.monotonic() + limit_s
        with self.changed:
            while not (found := condition()):
                left = until - time.monotonic()
                if left <= 0 or self.process.poll() is not None:
                    raise AssertionError(f"{what}: not within {limit_s:g} s; the machine's last words:\n"
                                         + self.kernel_said()[-1500:] + self.emulator_said())
                self.changed.wait(min(left, 0.5))
            return found

    def boot(self, limit_s):
        """Everything said until "ready", that included; trouble with modules shows here."""
        return self._wait(lambda: [text for text in self.answers.get("said", []) if text.startswith("ready")]
                          and self.answers["said"], limit_s, "the machine boots")

    def start(self, script):
        """Starts a shell script inside; its number for `wait`."""
        encoded = base64.b64encode(script.encode())
        if len(encoded) > 3500:  # a terminal keeps 4096 bytes that nobody has read yet
            raise ValueError("script too long for the console")
        self.count += 1
        self.console.sendall(b"%d %s\n" % (self.count, encoded))
        return self.count

    def wait(self, number, limit_s):
        return self._wait(lambda: self.answers.get(number), limit_s, f"command {number} ends")

    def run(self, script, limit_s=60.0):
        return self.wait(self.start(script), limit_s)

    def until(self, script, limit_s=30.0):
        """Repeats a script until it ends with 0; its last output."""
        until = time.monotonic() + limit_s
        while (done := self.run(script)).status != 0:
            if time.monotonic() > until:
                raise AssertionError(f"{script}: not within {limit_s:g} s; {done!r}\n{self.kernel_said()[-1500:]}")
            time.sleep(0.1)
        return done.out

    def stop(self):
        if self.process and self.process.poll() is None:
            self.process.kill()  # it has no disk, so nothing to save
        if self.process:
            self.process.wait(10)
        for line in self.sockets:
            line.close()
        self.sockets = []
