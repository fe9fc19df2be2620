"""A headless Chromium, driven through chromedriver over plain HTTP (W3C WebDriver) with the standard library alone."""
import base64
import json
import os
import pathlib
import re
import shutil
import subprocess
import tempfile
import time
import urllib.error
import urllib.request

# A browser starts in 1 to 3 s; generous, for a loaded machine.
START_S, ANSWER_S = 60, 120


class Browser:
    """One window, empty at first; gone at the end of `with`, and with it the folder that takes whatever the browser and
    its driver write: profile, caches, crash dumps, sockets."""

    def __init__(self, width=1100, height=900, dark=False):
        self.arguments = ["--headless=new", "--no-sandbox", "--disable-gpu", "--disable-dev-shm-usage", "--hide-scrollbars",
                          f"--window-size={width},{height}"] + (["--blink-settings=preferredColorScheme=0"] if dark else [])

    def __enter__(self):
        self.folder = pathlib.Path(tempfile.mkdtemp(prefix="halflsb-browser-"))
        try:
            return self.start()
        except BaseException:
            self.remove_folder()
            raise

    def start(self):
        home = {name: str(self.folder) for name in ("HOME", "TMPDIR", "XDG_CONFIG_HOME", "XDG_CACHE_HOME", "XDG_RUNTIME_DIR")}
        # Port 0: the driver takes a free one and says which.
        self.driver = subprocess.Popen(["chromedriver", "--port=0"], stdout=subprocess.PIPE, stderr=subprocess.DEVNULL,
                                       text=True, start_new_session=True, env={**os.environ, "LC_ALL": "C.UTF-8", **home})
        try:
            said = next((line for line in self.driver.stdout if "successfully on port" in line), "")
            self.base = f"http://127.0.0.1:{re.search('[0-9]+', said)[0]}"
            wanted = {"browserName": "chrome", "goog:loggingPrefs": {"browser": "ALL"},
                      "goog:chromeOptions": {"args": [*self.arguments, f"--user-data-dir={self.folder / 'profile'}"]}}
            begun = self.ask("POST", "/session", {"capabilities": {"alwaysMatch": wanted}}, START_S)
        except BaseException:
            self.end_driver()
            raise
        self.session = f"/session/{begun['sessionId']}"
        return self

    def __exit__(self, *_):
        try:
            self.ask("DELETE", self.session)
        finally:
            self.end_driver()
            self.remove_folder()

    def end_driver(self):
        self.driver.terminate()
        self.driver.wait(20)
        self.driver.stdout.close()

    def remove_folder(self):
        """Helpers of the browser end a moment after it, and write until then."""
        deadline = time.monotonic() + 10
        while self.folder.exists() and time.monotonic() < deadline:
            shutil.rmtree(self.folder, ignore_errors=True)
            time.sleep(0.02)

    def ask(self, method, path, body=None, limit_s=ANSWER_S):
        data = None if method == "GET" else json.dumps(body or {}).encode()
        request = urllib.request.Request(self.base + path, data, {"Content-Type": "application/json"}, method=method)
        # No proxy for what is on this machine.
        opener = urllib.request.build_opener(urllib.request.ProxyHandler({}))
        try:
            with opener.open(request, timeout=limit_s) as answer:
                return json.load(answer)["value"]
        except urllib.error.HTTPError as error:
            raise AssertionError(f"{method} {path}: {error.read().decode()}") from None

    def open(self, path):
        self.ask("POST", self.session + "/url", {"url": path.resolve().as_uri()})

    def run(self, script, *arguments):
        """What the body of a function returns in the page."""
        return self.ask("POST", self.session + "/execute/sync", {"script": script, "args": list(arguments)})

    def until(self, script, limit_s=30):
        deadline = time.monotonic() + limit_s
        while not (value := self.run(script)):
            if time.monotonic() > deadline:
                raise AssertionError(f"never became true: {script}")
            time.sleep(0.05)
        return value

    def drag(self, from_xy, to_xy):
        def move(x, y):
            return {"type": "pointerMove", "duration": 50, "x": round(x), "y": round(y)}
        middle = [(a + b) / 2 for a, b in zip(from_xy, to_xy)]
        actions = [move(*from_xy), {"type": "pointerDown", "button": 0}, move(*middle), move(*to_xy),
                   {"type": "pointerUp", "button": 0}]
        self.ask("POST", self.session + "/actions",
                 {"actions": [{"type": "pointer", "id": "mouse", "parameters": {"pointerType": "mouse"}, "actions": actions}]})

    def press(self, key):
        self.ask("POST", self.session + "/actions",
                 {"actions": [{"type": "key", "id": "keys",
                               "actions": [{"type": "keyDown", "value": key}, {"type": "keyUp", "value": key}]}]})

    def console(self):
        """What the page logged since the last call."""
        return self.ask("POST", self.session + "/se/log", {"type": "browser"})

    def command(self, name, **parameters):
        """One of the DevTools protocol."""
        return self.ask("POST", self.session + "/goog/cdp/execute", {"cmd": name, "params": parameters})

    def screenshot(self, path, whole=True):
        parameters = {"format": "png", "captureBeyondViewport": whole}
        if whole:
            size = self.command("Page.getLayoutMetrics")["cssContentSize"]
            parameters["clip"] = {"x": 0, "y": 0, "width": size["width"], "height": size["height"], "scale": 1}
        path.write_bytes(base64.b64decode(self.command("Page.captureScreenshot", **parameters)["data"]))

    def pdf(self, path):
        printed = self.command("Page.printToPDF", printBackground=True, paperWidth=8.27, paperHeight=11.69)
        path.write_bytes(base64.b64decode(printed["data"]))
