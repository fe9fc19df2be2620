"""The files that lie in the machine: plans, rigs, users."""
from kernel_image import ROOT
from machine import COMMANDS

ANY, A, B = "usb:0403:6001", "usb:0403:6001:CW7-A", "usb:0403:6001:CW7-B"
BAUDS = (115200, 250000, 921600, 3000000, 4000000)
# Longer than a loaded machine stalls, shorter than the tests wait for a check: an unplug must not need it.
ANSWER_S = 30


def rig(port, baud=921600, answer_s=ANSWER_S, greet_s=ANSWER_S):
    return f"""[board]
name = "checkweigher CW-7 behind a USB adapter"
isolated = true
[link]
use = "serial"
port = "{port}"
baud = {baud}
[wire]
form = "framed"
answer_s = {answer_s}
greet_s = {greet_s}
"""


def two_cases(second_samples):
    return f"""title = "a short case, then a long one"
[signal]
rate_hz = 1200.0
input = "q15"
output = "q15"
filter = "load-cell"
[[filter]]
kind = "moving-average"
points = 16
[[rule]]
kind = "error"
max_lsb = 0.5
[[case]]
name = "step"
[case.stimulus]
shape = "step"
level_ratio = 0.5
at_samples = 10
length_samples = 600
[[case]]
name = "long"
[case.stimulus]
shape = "noise"
level_ratio = 0.9
seed = 3
length_samples = {second_samples}
"""


def files():
    found = {f"root/{name}-{baud}.toml": rig(port, baud) for baud in BAUDS for name, port in (("any", ANY), ("a", A), ("b", B))}
    found |= {f"root/ttyUSB{n}.toml": rig(f"/dev/ttyUSB{n}") for n in range(2)}
    found |= {f"root/uart-{baud}.toml": rig("/dev/ttyS2", baud) for baud in (115200, 921600)}
    found["root/b-silent.toml"] = rig(B, answer_s=1, greet_s=1)
    found["root/acceptance.toml"] = (ROOT / "rigs" / "cw-7" / "acceptance.toml").read_text()
    found["root/two.toml"] = two_cases(20_000)
    found["root/seconds.toml"] = two_cases(500_000)
    found["root/unplug.toml"] = two_cases(20_000_000)
    found["commands"] = COMMANDS
    found["etc/passwd"] = "root:x:0:0::/root:/bin/sh\noperator:x:1000:1000::/tmp:/bin/sh\n"
    found["etc/group"] = "root:x:0:\ndialout:x:20:\noperator:x:1000:\n"
    return found
