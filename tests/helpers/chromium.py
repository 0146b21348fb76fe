"""A real browser without a window, driven over a pipe."""

import json
import os
import shutil
import subprocess
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import IO, Any

NAMES = ("chromium", "chromium-browser", "google-chrome")
QUIET = (
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-dev-shm-usage",
    "--disable-background-networking",
    "--disable-component-update",
    "--no-first-run",
    "--remote-debugging-pipe",
)


def installed() -> str | None:
    """The path of a browser, or None."""
    return next(filter(None, map(shutil.which, NAMES)), None)


class Tab:
    """One page of the browser, and what was heard of it."""

    def __init__(self, to: IO[bytes], back: IO[bytes]) -> None:
        self.to, self.back = to, back
        self.number = 0
        self.session = ""
        self.heard: list[dict[str, Any]] = []
        target = self.ask("Target.createTarget", url="about:blank")["targetId"]
        self.session = self.ask("Target.attachToTarget", targetId=target, flatten=True)["sessionId"]
        for domain in ("Page", "Runtime", "Log", "Network"):
            self.ask(f"{domain}.enable")

    def ask(self, method: str, **parameters: object) -> dict[str, Any]:
        """Send a command and wait for its answer."""
        self.number += 1
        command: dict[str, object] = {"id": self.number, "method": method, "params": parameters}
        if self.session:
            command["sessionId"] = self.session
        self.to.write(json.dumps(command).encode() + b"\0")
        self.to.flush()
        while True:
            message = self._next()
            if message.get("id") == self.number:
                assert "error" not in message, message
                answer: dict[str, Any] = message["result"]
                return answer

    def _next(self) -> dict[str, Any]:
        read = bytearray()
        while (byte := self.back.read(1)) not in (b"\0", b""):
            read += byte
        assert read, "the browser hung up"
        message: dict[str, Any] = json.loads(read)
        if "method" in message:
            self.heard.append(message)
        return message

    def open(self, path: Path, width: int = 1200) -> None:
        """Show a file and wait until all of it is there."""
        self.ask("Emulation.setDeviceMetricsOverride", width=width, height=800,
                 deviceScaleFactor=1, mobile=False)  # fmt: skip
        self.heard.clear()
        self.ask("Page.navigate", url=path.as_uri())
        while not any(each["method"] == "Page.loadEventFired" for each in self.heard):
            self._next()

    def value(self, expression: str) -> Any:  # noqa: ANN401
        """What an expression has in the page."""
        answer = self.ask("Runtime.evaluate", expression=expression, returnByValue=True)
        assert "exceptionDetails" not in answer, answer
        return answer["result"].get("value")

    def click(self, x: float, y: float) -> None:
        """Press and let go at a point of the window."""
        for kind in ("mousePressed", "mouseReleased"):
            self.ask("Input.dispatchMouseEvent", type=kind, x=x, y=y, button="left", clickCount=1)

    def of(self, method: str) -> list[dict[str, Any]]:
        """The parameters of events of one kind since the page was opened."""
        return [each["params"] for each in self.heard if each["method"] == method]


@contextmanager
def browser() -> Iterator[Tab]:
    """A browser with a fresh profile; it is ended afterwards."""
    path = installed()
    assert path is not None
    down, to = os.pipe()
    back, up = os.pipe()

    def pipes() -> None:
        """The browser reads its commands from 3 and answers on 4."""
        low, high = os.dup(down), os.dup(up)
        os.dup2(low, 3)
        os.dup2(high, 4)

    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as profile:
        process = subprocess.Popen(  # noqa: S603
            [path, *QUIET, f"--user-data-dir={profile}"],
            stdin=subprocess.DEVNULL,
            stdout=subprocess.DEVNULL,
            stderr=subprocess.DEVNULL,
            close_fds=False,
            preexec_fn=pipes,  # noqa: PLW1509  nothing else runs in this process
        )
        os.close(down)
        os.close(up)
        try:
            with open(to, "wb") as commands, open(back, "rb") as answers:  # noqa: PTH123
                yield Tab(commands, answers)
        finally:
            process.terminate()
            process.wait(timeout=20)
