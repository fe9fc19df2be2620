"""Samples in README.md are what the program takes and prints: its plan and rig are run against a virtual board without
a rounding constant, and its session is compared line by line. HALFLSB_UPDATE_DOCS=1 writes the session anew."""
import os
import re

from support import ROOT, Case, halflsb, main

README = ROOT / "README.md"
SESSION = re.compile(r"(<!-- session: .*? -->\n```\n)(.*?)(```\n<!-- end of session -->)", re.S)


def settled(text):
    """What differs from run to run, as the page shows it: the port, the time in the folder's name."""
    text = re.sub(r"(?m)^  port .*$", "  port      /dev/ttyUSB0 (usb:0403:6001) at 921600 baud", text)
    return re.sub(r"\d{8}T\d{6}Z", "20261201T093000Z", text)


class Documents(Case):
    def test_the_session_of_the_readme(self):
        page = README.read_text()
        plan, rig = re.findall(r"```toml\n(.*?)```", page, re.S)
        self.write("quick.toml", plan)
        self.write("bench.toml", rig.replace('"usb:0403:6001"', '"./uart"'))
        with self.virtual_board("--fault", "A01", "--serial", "CW7-0003", "--build-id", "8f3a61c04be7d2950e1fb8a7c3d94e6072a5180c"):
            done = halflsb("check", "quick.toml", "--rig", "bench.toml", cwd=self.folder, environment={"COLUMNS": "100"})
        self.assert_status(done, 1)
        session = "$ halflsb check quick.toml --rig bench.toml\n" + settled(done.out) + f"$ echo $?\n{done.status}\n"
        if os.environ.get("HALFLSB_UPDATE_DOCS"):
            README.write_text(SESSION.sub(lambda found: found[1] + session + found[3], page))
            return
        self.assertEqual(SESSION.search(page)[2], session)

    def test_every_page_that_the_readme_names_is_there(self):
        for path in re.findall(r"\]\(([^)]+)\)", README.read_text()):
            self.assertTrue((ROOT / path).is_file(), path)
        for path in re.findall(r"`((?:rigs|docs|tests|runner)/[\w./-]+)`", README.read_text()):
            self.assertTrue((ROOT / path).exists(), path)

    def test_help_names_every_status_of_the_page(self):
        text = halflsb("--help").out
        for status in re.findall(r"(?m)^\| (\d+) \|", (ROOT / "docs" / "exit-status.md").read_text()):
            self.assertRegex(text, rf"(?m)^ +{status}  ")


if __name__ == "__main__":
    main()
