"""A headless Chromium for tests, driven through chromedriver's plain HTTP interface (W3C WebDriver). No network."""

import base64
import json
import re
import shutil
import subprocess
import tempfile
import time
from contextlib import suppress
from pathlib import Path
from urllib.request import Request, urlopen

ARGUMENTS = (
    "--headless=new",
    "--no-sandbox",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-default-apps",
    "--disable-dev-shm-usage",
    "--disable-extensions",
    "--disable-sync",
    "--no-first-run",
    "--hide-scrollbars",
    "--force-device-scale-factor=1",
    "--host-resolver-rules=MAP * ~NOTFOUND",
)
SOFTWARE_WEBGL = ("--use-gl=angle", "--use-angle=swiftshader", "--enable-unsafe-swiftshader")
NO_WEBGL = ("--disable-gpu", "--disable-3d-apis")
ELEMENT = "element-6066-11e4-a52e-4f735466cecf"
"""The key under which WebDriver names an element."""

PATIENCE_S = 60.0


class Browser:
    """One browser with one page. `webgl` = whether it has WebGL, drawn in software."""

    def __init__(self, webgl: bool = True) -> None:
        driver, browser = shutil.which("chromedriver"), shutil.which("chromium") or shutil.which("google-chrome")
        assert driver, "chromedriver is not installed (Debian: apt-get install chromium-driver)"
        assert browser, "chromium is not installed (Debian: apt-get install chromium)"
        self._profile = tempfile.TemporaryDirectory(ignore_cleanup_errors=True)
        self._log = Path(self._profile.name) / "chromedriver.log"
        with self._log.open("wb") as log:
            self._process = subprocess.Popen([driver, "--port=0"], stdout=log, stderr=subprocess.STDOUT)
        arguments = [*ARGUMENTS, *(SOFTWARE_WEBGL if webgl else NO_WEBGL), f"--user-data-dir={self._profile.name}/user"]
        wishes = {
            "browserName": "chrome",
            "goog:chromeOptions": {"binary": browser, "args": arguments},
            "goog:loggingPrefs": {"browser": "ALL"},
        }
        self._root = ""
        try:
            self._root = f"http://127.0.0.1:{self._port()}/session"
            session = self._call("POST", "", {"capabilities": {"alwaysMatch": wishes}})
        except BaseException:
            self.close()
            raise
        self._root += f"/{session['sessionId']}"

    def __enter__(self) -> "Browser":
        return self

    def __exit__(self, *what: object) -> None:
        self.close()

    def close(self) -> None:
        """End the browser and its driver."""
        if self._root.rpartition("/")[2] != "session" and self._process.poll() is None:
            with suppress(OSError):
                self._call("DELETE", "", None)
        self._process.terminate()
        self._process.wait(PATIENCE_S)
        self._profile.cleanup()

    def _port(self) -> int:
        until = time.monotonic() + PATIENCE_S
        while time.monotonic() < until and self._process.poll() is None:
            if found := re.search(r"started successfully on port (\d+)", self._log.read_text("utf-8", "replace")):
                return int(found[1])
            time.sleep(0.05)
        raise AssertionError(f"chromedriver did not start: {self._log.read_text('utf-8', 'replace')}")

    def _call(self, method: str, path: str, body: object) -> object:
        data = None if body is None else json.dumps(body).encode()
        request = Request(self._root + path, data, {"Content-Type": "application/json"}, method=method)
        with urlopen(request, timeout=PATIENCE_S) as answer:
            return json.load(answer)["value"]

    def open(self, page: Path) -> None:
        """Open a page from disk and wait until it has loaded."""
        self._call("POST", "/url", {"url": page.absolute().as_uri()})

    def run(self, script: str, *arguments: object) -> object:
        """Run JavaScript in the page (`return` what is wanted); the arguments are `arguments[0]` and so on."""
        return self._call("POST", "/execute/sync", {"script": script, "args": list(arguments)})

    def wait(self, script: str, *arguments: object) -> object:
        """The first true value of a script, tried again until it is; fails when it never is."""
        until = time.monotonic() + PATIENCE_S
        while not (found := self.run(script, *arguments)):
            assert time.monotonic() < until, f"never true: {script} {arguments}"
            time.sleep(0.05)
        return found

    def find(self, selector: str) -> dict:
        """The first element of a CSS selector; fails when there is none."""
        return self._call("POST", "/element", {"using": "css selector", "value": selector})

    def click(self, selector: str) -> None:
        """Click an element as a person would: it must be in sight, and nothing over it."""
        self._call("POST", f"/element/{self.find(selector)[ELEMENT]}/click", {})

    def type(self, *keys: str) -> None:
        """Press keys one after the other, for whatever has the focus."""
        actions = [{"type": kind, "value": key} for key in keys for kind in ("keyDown", "keyUp")]
        self._call("POST", "/actions", {"actions": [{"type": "key", "id": "keys", "actions": actions}]})

    def press_at(self, selector: str, x: float, y: float) -> None:
        """Press and let go the mouse's main button so far [px] right of and below an element's top left corner."""
        self.drag(selector, [(x, y)])

    def drag(self, selector: str, points: list[tuple[float, float]]) -> None:
        """Press at the first point of an element [px from its top left], move along the others, let go at the last."""
        left, top = self.run(
            "const e = arguments[0]; e.scrollIntoView({block: 'center'}); const r = e.getBoundingClientRect();"
            "return [r.left, r.top]",
            self.find(selector),
        )
        spots = [(round(left + x), round(top + y)) for x, y in points]
        moves = [{"type": "pointerMove", "duration": 0, "x": x, "y": y} for x, y in spots]
        actions = [moves[0], {"type": "pointerDown", "button": 0}, *moves[1:], {"type": "pointerUp", "button": 0}]
        self._call("POST", "/actions", {"actions": [{"type": "pointer", "id": "mouse", "actions": actions}]})

    def text(self, selector: str) -> str:
        """The text of an element as it is shown."""
        return str(self._call("GET", f"/element/{self.find(selector)[ELEMENT]}/text", None))

    def shown(self, selector: str) -> bool:
        """Whether an element is shown and takes room."""
        return bool(self._call("GET", f"/element/{self.find(selector)[ELEMENT]}/displayed", None))

    def picture(self, selector: str = "") -> bytes:
        """What is seen of an element, or of the page, as PNG."""
        path = f"/element/{self.find(selector)[ELEMENT]}/screenshot" if selector else "/screenshot"
        return base64.b64decode(self._call("GET", path, None))

    def look(self, width: int = 800, height: int = 1000, media: str = "", **features: str) -> None:
        """Size of the window [px]; medium ("print"); media features (`prefers_color_scheme="dark"`)."""
        size = {"width": width, "height": height, "deviceScaleFactor": 1, "mobile": False}
        self.command("Emulation.setDeviceMetricsOverride", **size)
        named = [{"name": name.replace("_", "-"), "value": value} for name, value in features.items()]
        self.command("Emulation.setEmulatedMedia", media=media, features=named)

    def command(self, name: str, **values: object) -> dict:
        """A command of the browser's own protocol."""
        return self._call("POST", "/goog/cdp/execute", {"cmd": name, "params": values})

    def go_offline(self) -> None:
        """Cut the page off from every network, as where the antenna is built."""
        self.command("Network.enable")
        self.command(
            "Network.emulateNetworkConditions", offline=True, latency=0, downloadThroughput=0, uploadThroughput=0
        )

    def complaints(self) -> list[str]:
        """What the console has reported since the last call, warnings and errors."""
        entries = self._call("POST", "/se/log", {"type": "browser"})
        return [entry["message"] for entry in entries if entry["level"] in ("WARNING", "SEVERE")]
