"""A Debian kernel and an initramfs around the program under test.

The kernel comes from this machine's own package source, by apt, once; it stays under .cache/ of the repository. Nothing
here needs root: devices in the archive are records, not nodes.
"""
import fcntl
import pathlib
import re
import shutil
import subprocess

ROOT = pathlib.Path(__file__).resolve().parents[2]
CACHE = ROOT / ".cache" / "kernel"
# What the test loads; what these depend on, each module says itself.
MODULES = ("xhci-pci", "ftdi_sio")
BUSYBOX = pathlib.Path("/bin/busybox")


class Missing(Exception):
    """Something that the test needs is not on this machine; the text says what to install."""


def output_of(*command, cwd=None):
    done = subprocess.run(command, cwd=cwd, capture_output=True, text=True, timeout=600)
    if done.returncode != 0:
        raise Missing(f"{' '.join(command)} ended with {done.returncode}: {done.stderr.strip()[-400:]}")
    return done.stdout


def newest_kernel_package():
    """linux-image-amd64 is empty and depends on the kernel of today."""
    found = re.search(r"Depends: (linux-image-[0-9][^ \n]*-amd64)$", output_of("apt-cache", "depends", "linux-image-amd64"), re.M)
    if not found:
        raise Missing("apt knows no linux-image-amd64; run apt-get update, then again")
    return found[1]


def kernel_folder():
    """The unpacked package: boot/vmlinuz-… and lib/modules/…; the one in the cache, or else apt's of today."""
    CACHE.mkdir(parents=True, exist_ok=True)
    with open(CACHE / "lock", "w", encoding="utf-8") as lock:
        fcntl.flock(lock, fcntl.LOCK_EX)  # two build trees may run this test at once
        whole = sorted(path for path in CACHE.glob("linux-image-*") if path.is_dir())
        if whole:
            return whole[-1]
        package = newest_kernel_package()
        for left in (*CACHE.glob("*.deb"), *CACHE.glob("unpacking*")):  # by a run that was stopped
            shutil.rmtree(left) if left.is_dir() else left.unlink()
        try:
            output_of("apt-get", "download", package, cwd=CACHE)
        except Missing as reason:
            raise Missing(f"{reason}; is the network up? apt-get update may be due") from None
        part = CACHE / "unpacking"
        for archive in CACHE.glob("*.deb"):
            output_of("dpkg", "-x", str(archive), str(part))
            archive.unlink()
        part.rename(CACHE / package)
        return CACHE / package


def modules_in_order(kernel, names):
    """Files of the modules, each behind those it needs. A package has no modules.dep: depmod writes that where a
    kernel is installed, from these same entries."""
    by_name = {path.stem.replace("-", "_"): path for path in (kernel / "lib" / "modules").rglob("*.ko")}
    order = []

    def add(name):
        path = by_name.get(name.replace("-", "_"))
        if path is None:
            raise Missing(f"the kernel {kernel.name} has no module {name}")
        if path in order:
            return
        needs = re.search(rb"\0depends=([^\0]*)\0", path.read_bytes())
        for need in needs[1].decode().split(",") if needs and needs[1] else ():
            add(need)
        order.append(path)

    for name in names:
        add(name)
    return order


def shared_libraries(program):
    """Absolute names, the dynamic loader among them."""
    return [pathlib.Path(name) for name in re.findall(r"(/\S+) \(0x", output_of("ldd", str(program)))]


class Archive:
    """A cpio archive of the form that a kernel unpacks ("newc": 13 numbers of 8 hex digits)."""

    def __init__(self):
        self.parts, self.names = [], set()

    def _record(self, name, mode, content=b"", device=(0, 0)):
        self.names.add(name)
        encoded = name.encode() + b"\0"
        numbers = (len(self.parts) + 1, mode, 0, 0, 1, 0, len(content), 0, 0, *device, len(encoded), 0)
        record = b"070701" + b"".join(b"%08X" % number for number in numbers) + encoded
        record += b"\0" * (-len(record) % 4) + content
        self.parts.append(record + b"\0" * (-len(record) % 4))

    def folder(self, name):
        for parent in [*reversed(pathlib.PurePosixPath(name).parents), pathlib.PurePosixPath(name)]:
            if str(parent) != "." and str(parent) not in self.names:
                self._record(str(parent), 0o040755)

    def file(self, name, content, mode=0o644):
        self.folder(str(pathlib.PurePosixPath(name).parent))
        self._record(name, 0o100000 | mode, content)

    def console(self):
        self.folder("dev")
        self._record("dev/console", 0o020600, device=(5, 1))

    def bytes(self):
        self._record("TRAILER!!!", 0)
        return b"".join(self.parts)


def initramfs(kernel, program, init, files):
    """`files`: name -> text. The program lies at /halflsb, modules in /modules named so that * is the order to load."""
    linked = subprocess.run(["ldd", str(BUSYBOX)], capture_output=True, text=True)
    if not BUSYBOX.is_file() or not re.search("not a dynamic executable|statically linked", linked.stdout + linked.stderr):
        raise Missing(f"{BUSYBOX} is missing, or needs shared libraries; the Debian package is busybox-static")
    archive = Archive()
    archive.console()
    archive.file("bin/busybox", BUSYBOX.read_bytes(), 0o755)
    archive.file("bin/sh", BUSYBOX.read_bytes(), 0o755)
    archive.file("init", init.encode(), 0o755)
    archive.file("halflsb", program.read_bytes(), 0o755)
    for library in shared_libraries(program):
        archive.file(str(library).lstrip("/"), library.read_bytes(), 0o755)
    for number, module in enumerate(modules_in_order(kernel, MODULES)):
        archive.file(f"modules/{number:02}-{module.name}", module.read_bytes())
    for name, text in files.items():
        archive.file(name.lstrip("/"), text.encode())
    return archive.bytes()
