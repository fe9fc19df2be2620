"""The demo itself, from another folder: exits 0, shows both verdicts, leaves no process behind."""
import subprocess

from support import Case, ROOT, main


class Demo(Case):
    def test_it_shows_a_pass_and_a_refusal_and_leaves_nothing_running(self):
        done = subprocess.run([ROOT / "rigs" / "demo"], cwd=self.folder, capture_output=True, text=True, timeout=850,
                              env={**__import__("os").environ, "TMPDIR": str(self.folder)})
        self.assertEqual(done.returncode, 0, done.stdout + done.stderr)
        self.assertIn("3 pass, 0 fail", done.stdout)
        self.assertIn("first bad sample", done.stdout)
        self.assertIn("as they should", done.stdout)
        left = subprocess.run(["pgrep", "-f", str(self.folder)], capture_output=True, text=True).stdout
        self.assertEqual(left, "")


if __name__ == "__main__":
    main()
