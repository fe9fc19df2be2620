#!/usr/bin/python3
"""Holds the table of rooms: which folder may include which, and which outside headers.

The table is that of docs/architecture.md. "Sees" is transitive. Run with the root of the sources as
argument; prints each include that the table does not allow and exits 1 when there is one.
"""
import pathlib
import re
import sys

ORACLE = ["oracle/filters", "oracle/arithmetic", "oracle/measure", "oracle/rules", "oracle/judge", "oracle/explain"]

# room: (rooms it sees directly, outside headers it may include besides the standard library)
ROOMS = {
    "stimuli": ([], []),
    "oracle/filters": (["stimuli"], ["kissfft/"]),
    "oracle/arithmetic": (["oracle/filters"], []),
    "oracle/measure": (["stimuli"], ["kissfft/", "boost/math/distributions/"]),
    "oracle/rules": (["oracle/measure"], []),
    "oracle/judge": (["oracle/rules", "oracle/arithmetic"], []),
    "oracle/explain": (["oracle/judge"], ["Eigen/"]),
    "runner/world": (ORACLE + ["stimuli"], ["spdlog/", "sha2.h", "os"]),
    "runner/link": (["runner/world", "stimuli"], ["boost/asio", "libserialport.h", "spdlog/", "os"]),
    "runner/wire": (["runner/link"], ["boost/crc.hpp", "spdlog/", "unistd.h"]),
    "runner/capture": (["runner/wire", "runner/world"], ["spdlog/"]),
    "runner/config": (ORACLE + ["runner/world"], ["toml++/", "spdlog/", "os"]),
    "runner/record": (["runner/world"], ["nlohmann/", "spdlog/", "os"]),
    "runner/report": (["runner/world"], ["nlohmann/", "pugixml.hpp"]),
    "runner/cli": (["runner/world"], ["CLI/", "spdlog/", "os"]),
    "runner": (["runner/world", "runner/link", "runner/wire", "runner/capture", "runner/config", "runner/record",
                "runner/report", "runner/cli"], ["spdlog/", "os"]),
}
# Of runner/world, what link and wire may include (design: "world's clock and files").
LINK_SEES_OF_WORLD = {"runner/world/clock.hpp", "runner/world/files.hpp", "runner/world/interrupt.hpp",
                      "runner/world/file_descriptor.hpp"}
# One narrow door for each heavy header.
ONLY_IN = {
    "boost/asio": "runner/link/asio.hpp",
}
KIT_HEADERS = {"stddef.h", "stdint.h", "string.h"}
# rigs must not share arithmetic with the oracle, else every check is circular.
RIGS_MAY_NOT = ("stimuli/", "oracle/", "runner/")

STANDARD = set("""algorithm array atomic bit cassert cctype cerrno cfenv cfloat charconv chrono cinttypes climits
cmath compare complex concepts condition_variable csignal cstdarg cstddef cstdint cstdio cstdlib cstring ctime deque
exception filesystem forward_list fstream functional future initializer_list iomanip ios iosfwd iostream istream
iterator limits list locale map memory mutex new numbers numeric optional ostream queue random ratio regex set span
sstream stack stdexcept streambuf string string_view system_error thread tuple type_traits typeinfo unordered_map
unordered_set utility valarray variant vector version""".split())
# What a room without I/O must not include, standard or not.
NO_IO = {"cstdio", "fstream", "iostream", "filesystem", "thread", "mutex", "locale", "random", "chrono", "ctime"}

INCLUDE = re.compile(r'^\s*#\s*include\s*([<"])([^>"]+)[>"]', re.M)


def reach(room):
    seen, todo = set(), [room]
    while todo:
        here = todo.pop()
        if here not in seen:
            seen.add(here)
            todo += ROOMS[here][0]
    return seen


def room_of(path):
    parts = path.split("/")
    for depth in (2, 1):
        name = "/".join(parts[:depth])
        if len(parts) > depth and name in ROOMS:
            return name
    return None


def check(root):
    problems, files = [], 0
    for file in sorted(root.rglob("*")):
        path = file.relative_to(root).as_posix()
        if file.suffix not in (".cpp", ".hpp", ".c", ".h") or path.startswith("."):
            continue
        text = file.read_text(encoding="utf-8")
        if path.startswith("rigs/"):
            files += 1
            for _, name in INCLUDE.findall(text):
                if name.startswith(RIGS_MAY_NOT):
                    problems.append(f"{path}: includes {name}; firmware must not share code with the oracle")
                if path.startswith("rigs/kit/") and name not in KIT_HEADERS and not (file.parent / name).exists():
                    problems.append(f"{path}: includes {name}; the kit knows only C99 and itself")
            continue
        room = room_of(path)
        if room is None:
            if path.split("/")[0] in ("stimuli", "oracle", "runner"):
                problems.append(f"{path}: stands in no room of the table")
            continue
        files += 1
        allowed, outside = reach(room), ROOMS[room][1]
        for bracket, name in INCLUDE.findall(text):
            target = room_of(name)
            if target is not None:
                if target not in allowed:
                    problems.append(f"{path}: {room} must not see {name}")
                if room in ("runner/link", "runner/wire") and target == "runner/world" and name not in LINK_SEES_OF_WORLD:
                    problems.append(f"{path}: of runner/world, {room} sees only {', '.join(sorted(LINK_SEES_OF_WORLD))}")
                continue
            if bracket == '"':
                problems.append(f"{path}: include \"{name}\" does not name its room")
                continue
            if name in STANDARD:
                if (room == "stimuli" or room.startswith("oracle/")) and name in NO_IO:
                    problems.append(f"{path}: {room} does no I/O, has no locale and no clock; it includes <{name}>")
                continue
            if any(prefix != "os" and name.startswith(prefix) for prefix in outside):
                for prefix, door in ONLY_IN.items():
                    if name.startswith(prefix) and path != door:
                        problems.append(f"{path}: <{name}> enters only through {door}")
                continue
            if "os" in outside and re.fullmatch(r"[a-z0-9_/]+\.h", name) and not name.startswith(("boost", "toml")):
                continue
            problems.append(f"{path}: {room} may not include <{name}>")
    return problems, files


def main():
    root = pathlib.Path(sys.argv[1])
    problems, files = check(root)
    for problem in problems:
        print(problem)
    print(f"{files} files, {len(problems)} includes outside the table")
    # A table that matches nothing would pass for ever.
    if files < 20:
        print("too few files were read: is this the root of the sources?")
        return 1
    return 1 if problems else 0


if __name__ == "__main__":
    sys.exit(main())
