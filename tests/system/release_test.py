"""docs/release.md is a story that happens: its plan is run against a virtual board, its sessions are compared word for
word. HALFLSB_UPDATE_DOCS=1 writes them anew."""
import os
import re

from support import ROOT, Case, halflsb, main

PAGE = ROOT / "docs" / "release.md"
SESSION = re.compile(r"(<!-- session: (.*?) -->\n```\n)(.*?)(```\n<!-- end of session -->)", re.S)
GOOD, CHANGED = (), ("--fault", "A01")
CHECK = ("check", "cw7.toml", "--rig", "bench.toml", "--out")
# Name of the session, what the board has, the words, the status.
STORY = (
    ("first", GOOD, (*CHECK, "candidate"), 2),
    ("accept", GOOD, ("accept", "candidate"), 0),
    ("same", GOOD, (*CHECK, "nightly"), 0),
    ("changed", CHANGED, (*CHECK, "suspect"), 1),
    ("judged", CHANGED, ("judge", "suspect"), 1),
    ("accepted", CHANGED, ("accept", "suspect"), 0),
    ("passes", CHANGED, (*CHECK, "release"), 0),
)


def settled(text):
    """What differs from run to run, as the page shows it."""
    text = re.sub(r"(?m)^  port .*$", "  port      /dev/ttyUSB0 (usb:0403:6001) at 921600 baud", text)
    return re.sub(r"\d{4}-\d\d-\d\dT\d\d:\d\d:\d\dZ", "2026-12-01T09:30:00Z", text)


class Release(Case):
    def test_the_story_of_the_page(self):
        page = PAGE.read_text()
        (self.folder / "cw7.toml").write_text(re.search(r"<!-- plan -->\n```toml\n(.*?)```", page, re.S)[1])
        rig = self.rig(name="bench.toml")
        rig.write_text(rig.read_text().replace("bench of the tests", "checkweigher CW-7, bench 3"))
        sessions = {}
        for name, faults, words, status in STORY:
            with self.virtual_board("--serial", "CW7-0003", "--build-id", "8f3a61c04be7d295" if faults == GOOD else "51d20fee9ab37c44", *faults):
                done = halflsb(*words, cwd=self.folder)
            with self.subTest(name):
                self.assert_status(done, status)
                self.assertEqual(done.err, "")
            sessions[name] = f"$ halflsb {' '.join(words)}\n{settled(done.out)}$ echo $?\n{done.status}\n"
        self.assertEqual([found[2] for found in SESSION.finditer(page)], list(sessions))
        if os.environ.get("HALFLSB_UPDATE_DOCS"):
            PAGE.write_text(SESSION.sub(lambda found: found[1] + sessions[found[2]] + found[4], page))
            return
        for found in SESSION.finditer(page):
            self.assertEqual(found[3], sessions[found[2]])


if __name__ == "__main__":
    main()
