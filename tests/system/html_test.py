"""report.html in a real browser: no error on its console, nothing loaded, the figures those of run.json, plots that zoom
by mouse, keys and buttons, a table of the values, and text of the plan that stays text."""
import json
import os
import pathlib
import re
import subprocess
import sys

from browser import Browser
from support import LIMIT_S, NOISE, STEP, Case, halflsb, main

RESPONSE = """[[case.rule]]
kind = "response"
bands = [{from_hz = 0.0, to_hz = 20.0, min_db = -1.5, max_db = 0.5}, {from_hz = 300.0, to_hz = 600.0, max_db = -12.0}]
"""
HOSTILE = """[[case]]
name = '</script><img src=x onerror="document.title=1"> & "quotes"'
[case.stimulus]
shape = "chirp"
level_ratio = 0.8
from_hz = 1.0
to_hz = 500.0
length_samples = 20000
"""
FIGURES = """
return [...document.querySelectorAll('.case')].map((section) => [
  Number(section.dataset.number), section.dataset.verdict,
  [...section.querySelectorAll('.rule')].map((rule) => [
    rule.dataset.rule, Number(rule.dataset.channel), rule.dataset.verdict,
    [...rule.querySelectorAll('tr[data-figure]')].map((row) => [row.dataset.figure, row.dataset.verdict,
      ...['value', 'limit', 'margin'].map((key) => {
        const value = row.querySelector(`[data-key=${key}]`).dataset.value;
        return value === undefined ? null : Number(value); })])])]);
"""
DRAW_ALL = """
for (const details of document.querySelectorAll('details.case')) details.open = true;
const next = document.querySelector('.plot:not([data-drawn])');
if (next) next.scrollIntoView();
return !next;
"""
# Where the curves of a panel lie on the screen, and what of the axis the plot shows.
PANEL = """
const plot = document.querySelectorAll('.plot')[arguments[0]], panel = plot.querySelectorAll('.panel')[arguments[1]];
panel.scrollIntoView({block: 'center'});
const box = panel.getBoundingClientRect();
return {x: box.x, y: box.y, width: box.width, height: box.height, from: Number(plot.dataset.from), to: Number(plot.dataset.to)};
"""
# Pixels with anything on them, of all canvases of a plot.
INK = """
let ink = 0;
for (const canvas of document.querySelectorAll('.plot')[arguments[0]].querySelectorAll('.panel canvas')) {
  // A copy: the browser logs advice about canvases that are read.
  const copy = new OffscreenCanvas(canvas.width, canvas.height).getContext('2d', {willReadFrequently: true});
  copy.drawImage(canvas, 0, 0);
  const bytes = copy.getImageData(0, 0, canvas.width, canvas.height).data;
  for (let i = 3; i < bytes.length; i += 4) if (bytes[i] > 0) ++ink;
}
return ink;
"""


def recorded_figures(record):
    return sorted([case["number"], case["verdict"],
                   sorted([rule["kind"], rule["channel"] or 0, rule["verdict"],
                           [[figure["name"], figure["verdict"], figure["value"], figure["limit"], figure["margin"]]
                            for figure in rule["figures"]]] for rule in case["rules"])]
                  for case in record["verdict"]["cases"])


class Html(Case):
    def captured(self, cases, faults=(), status=0, **more):
        with self.virtual_board(*[word for fault in faults for word in ("--fault", fault)]):
            done = self.check(self.plan(cases, **more), self.rig())
        self.assert_status(done, status)
        return self.folder / "run" / "report.html"

    def assert_quiet(self, browser):
        self.assertEqual(browser.console(), [])

    def shown_figures(self, browser):
        return sorted([number, verdict, sorted(rules)] for number, verdict, rules in browser.run(FIGURES))

    def test_the_page_shows_the_figures_of_the_record_and_draws_every_plot(self):
        for faults, status in (((), 0), (("S02",), 1), (("S01",), 1)):
            with self.subTest(faults):
                page = self.captured(NOISE + RESPONSE + STEP + HOSTILE, faults, status)
                with Browser() as browser:
                    browser.open(page)
                    browser.until(DRAW_ALL)
                    record = self.record()
                    self.assertEqual(self.shown_figures(browser), recorded_figures(record))
                    plots = browser.run("return document.querySelectorAll('.plot').length")
                    self.assertGreaterEqual(plots, 5)
                    for plot in range(plots):
                        self.assertGreater(browser.run(INK, plot), 500, f"plot {plot} is empty")
                    counts = browser.run("return Object.fromEntries([...document.querySelectorAll('.counts li')].map("
                                         "(item) => [item.dataset.count, Number(item.querySelector('b').textContent)]))")
                    self.assertEqual(counts, record["verdict"]["counts"])
                    self.assertEqual(browser.run("return document.getElementById('verdict').dataset.verdict"),
                                     "fail" if faults else "pass")
                    text = browser.run("return document.body.textContent")
                    for part in (record["plan"]["sha256"], record["rig"]["sha256"], record["board"]["build_id"], "proven",
                                 "not verified", "isolated = true", "not a safety approval",
                                 *(case["capture"]["sha256"] for case in record["cases"])):
                        self.assertIn(part, text)
                    self.assert_quiet(browser)
                page.unlink()
                for path in sorted((self.folder / "run").rglob("*"), reverse=True):
                    path.rmdir() if path.is_dir() else path.unlink()

    def test_text_of_the_plan_stays_text_and_nothing_is_loaded(self):
        page = self.captured(HOSTILE)
        with Browser() as browser:
            browser.open(page)
            browser.until(DRAW_ALL)
            self.assertEqual(browser.run("return document.querySelectorAll('img, iframe, link, object, embed').length"), 0)
            self.assertEqual(browser.run("return document.querySelectorAll('script').length"),
                             2 + browser.run("return document.querySelectorAll('.plot').length"))
            self.assertIn('</script><img src=x onerror="document.title=1"> & "quotes"',
                          browser.run("return document.querySelector('.case h3').textContent"))
            self.assertEqual(browser.run("return performance.getEntriesByType('resource').length"), 0)
            # Even a script that got in would not run.
            browser.run("const script = document.createElement('script'); script.textContent = 'window.ran = true'; "
                        "document.body.append(script)")
            self.assertIsNone(browser.run("return window.ran ?? null"))
            self.assertEqual(len([line for line in browser.console() if "Content Security Policy" in line["message"]]), 1)

    def test_plots_zoom_by_mouse_by_keys_and_back(self):
        page = self.captured(NOISE + RESPONSE)
        with Browser() as browser:
            browser.open(page)
            browser.until(DRAW_ALL)
            plots = browser.run("return [...document.querySelectorAll('.plot')].map("
                                "(plot) => plot.querySelectorAll('.panel').length)")
            self.assertEqual(plots, [2, 2, 2])
            for plot in range(3):
                whole = browser.run(PANEL, plot, 0)
                before = browser.run(INK, plot)
                # From 40 % to 60 % of the panel: a fifth of what was seen, more or less the room of the axis.
                y = whole["y"] + whole["height"] * 0.5
                browser.drag((whole["x"] + whole["width"] * 0.4, y), (whole["x"] + whole["width"] * 0.6, y + 3))
                zoomed = browser.run(PANEL, plot, 1)
                ratio = (zoomed["to"] - zoomed["from"]) / (whole["to"] - whole["from"])
                self.assertTrue(0.18 < ratio < 0.25, ratio)
                self.assertNotEqual(browser.run(INK, plot), before)
                # The panel below shows the same stretch: its axis is drawn anew.
                labels = browser.run("return [...document.querySelectorAll('.plot')[arguments[0]].querySelectorAll('.panel')].map("
                                     "(panel) => [...panel.querySelectorAll('.dygraph-axis-label-x')].map((label) => label.textContent))", plot)
                self.assertEqual(labels[0], labels[1])
                self.assertGreater(len(labels[0]), 1)
                browser.run("document.querySelectorAll('.plot')[arguments[0]].querySelector('.panel').focus()", plot)
                browser.press("+")
                closer = browser.run(PANEL, plot, 0)
                self.assertAlmostEqual((closer["to"] - closer["from"]) / (zoomed["to"] - zoomed["from"]), 0.6, 6)
                browser.press("\ue014")  # arrow right
                self.assertGreater(browser.run(PANEL, plot, 0)["from"], closer["from"])
                browser.press("\ue00c")  # Escape
                after = browser.run(PANEL, plot, 0)
                self.assertEqual((after["from"], after["to"]), (whole["from"], whole["to"]))
            self.assert_quiet(browser)

    def test_a_frequency_axis_can_be_logarithmic_and_zooms_there_too(self):
        page = self.captured(NOISE + RESPONSE)
        with Browser() as browser:
            browser.open(page)
            browser.until(DRAW_ALL)
            browser.run("[...document.querySelectorAll('button')].find((node) => node.textContent === 'logarithmic axis').click()")
            whole = browser.run(PANEL, 2, 0)
            self.assertGreater(whole["from"], 0)
            self.assertGreater(browser.run(INK, 2), 500)
            y = whole["y"] + whole["height"] * 0.5
            browser.drag((whole["x"] + whole["width"] * 0.4, y), (whole["x"] + whole["width"] * 0.6, y + 3))
            zoomed = browser.run(PANEL, 2, 0)
            self.assertGreater(zoomed["from"], whole["from"])
            self.assertLess(zoomed["to"], whole["to"])
            self.assert_quiet(browser)

    def test_a_plot_has_a_label_and_its_values_as_a_table(self):
        page = self.captured(STEP)
        with Browser() as browser:
            browser.open(page)
            browser.until(DRAW_ALL)
            label = browser.run("return document.querySelector('.panel[role=img][tabindex=\"0\"]').getAttribute('aria-label')")
            self.assertIn("signal, LSB over time; stimulus from 0 to 16384", label)
            browser.run("document.querySelector('.values').open = true")
            rows = browser.until("return document.querySelectorAll('.values tbody tr').length")
            self.assertEqual(rows, 600)
            cells = browser.run("return [...document.querySelectorAll('.values tbody tr')[20].children].map((cell) => cell.textContent)")
            self.assertEqual(cells[0], "20")
            # 11 of 16 points have seen the step of 16384.
            self.assertEqual(cells[2:], ["16384", "11264", "11264", "0"])
            self.assert_quiet(browser)

    def test_colours_follow_the_scheme_and_paper_is_light(self):
        page = self.captured(STEP)
        with Browser() as browser:
            browser.open(page)
            browser.until(DRAW_ALL)
            ground = "return getComputedStyle(document.body).backgroundColor"
            light = browser.run(ground)
            pixels = browser.run("return document.querySelector('.panel canvas').toDataURL()")
            browser.command("Emulation.setEmulatedMedia", features=[{"name": "prefers-color-scheme", "value": "dark"}])
            self.assertNotEqual(browser.run(ground), light)
            browser.until("return document.querySelector('.panel canvas').toDataURL() !== " + json.dumps(pixels))
            browser.pdf(self.folder / "page.pdf")
            self.assertGreater((self.folder / "page.pdf").stat().st_size, 10000)
            browser.run("dispatchEvent(new Event('beforeprint'))")
            self.assertEqual(browser.run(ground), light)
            browser.run("dispatchEvent(new Event('afterprint'))")
            self.assertNotEqual(browser.run(ground), light)
            self.assert_quiet(browser)

    def test_ten_cases_are_below_two_megabytes(self):
        cases = "".join(re.sub('name = "noise"', f'name = "noise {i}"', NOISE + RESPONSE).replace("6000", "60000")
                        for i in range(10))
        page = self.captured(cases)
        self.assertLess(page.stat().st_size, 2_000_000)
        print(f"report of 10 cases of noise with a response rule: {page.stat().st_size} bytes")

    def test_judging_again_writes_the_page_where_asked_and_changes_nothing_else(self):
        page = self.captured(NOISE + RESPONSE + STEP, ("A01",), 1)
        run, again = self.folder / "run", self.folder / "again.html"
        first = page.read_text()
        kept = {path: path.read_bytes() for path in run.rglob("*") if path.is_file()}
        plain = halflsb("judge", run, cwd=self.folder)
        done = halflsb("judge", run, "--html", again, cwd=self.folder)
        self.assertEqual((done.status, done.out), (plain.status, plain.out))
        self.assertEqual({path: path.read_bytes() for path in run.rglob("*") if path.is_file()}, kept)
        with Browser() as browser:
            browser.open(again)
            self.assertEqual(self.shown_figures(browser), recorded_figures(self.record()))
        # The same plots from the captures as while they came.
        data = re.compile(r'<script type="application/json">.*?</script>')
        self.assertEqual(data.findall(again.read_text()), data.findall(first))
        self.assertGreater(len(data.findall(first)), 3)
        # In the folder only report.html may be replaced.
        self.assert_status(halflsb("judge", run, "--html", run / "report.html", cwd=self.folder), 1)
        for name in ("run.json", "plan.toml", "captures/001-noise.npy"):
            before = (run / name).read_bytes()
            refused = halflsb("judge", run, "--html", run / name, cwd=self.folder)
            self.assert_status(refused, 64)
            self.assertEqual((run / name).read_bytes(), before)
        self.assert_status(halflsb("judge", run, "--html", self.folder / "no" / "folder.html", cwd=self.folder), 73)

    def test_a_case_that_was_not_captured_says_so_and_has_no_plot(self):
        with self.virtual_board("--fault", "unplug=4"):
            done = self.check(self.plan(NOISE + STEP), self.rig(wire="answer_s = 0.5\ngreet_s = 1.0\n"))
        self.assert_status(done, 3)
        with Browser() as browser:
            browser.open(self.folder / "run" / "report.html")
            self.assertEqual(browser.run("return document.getElementById('verdict').dataset.verdict"), "invalid")
            self.assertEqual(browser.run("return document.querySelectorAll('.plot').length"), 0)
            text = browser.run("return document.body.textContent")
            invalid = self.record()["verdict"]["cases"][0]["invalid"]
            self.assertIn("unplugged", invalid["problem"])
            for part in ("Nothing was judged", "The run ended early", "not run", "not complete", invalid["problem"], invalid["remedy"]):
                self.assertIn(part, text)
            self.assert_quiet(browser)

    def test_a_browser_leaves_nothing_behind_even_when_its_test_fails(self):
        page = self.write("page.html", "<p>x</p>")
        home = {"TMPDIR": str(self.folder / "tmp"), "HOME": str(self.folder / "home")}
        script = ("import pathlib, sys; from browser import Browser\nwith Browser() as browser:\n"
                  "    browser.open(pathlib.Path(sys.argv[1])); raise SystemExit(7)")
        for folder in home.values():
            pathlib.Path(folder).mkdir()
        done = subprocess.run([sys.executable, "-B", "-c", script, str(page)], cwd=pathlib.Path(__file__).parent,
                              env={**os.environ, **home}, timeout=LIMIT_S)
        self.assertEqual(done.returncode, 7)
        self.assertEqual([name for folder in home.values() for name in os.listdir(folder)], [])


if __name__ == "__main__":
    main()
