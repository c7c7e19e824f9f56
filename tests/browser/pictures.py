"""Makes the README's pictures from the running demo: ``uv run python -m tests.browser.pictures``.

Starts ``platewright demo`` in a temporary folder, takes each page as a browser shows it, and writes the
pictures into ``demo_meet/pictures``. Needs Debian's chromium.
"""

from __future__ import annotations

import socket
import subprocess
import sys
import tempfile
import time
import urllib.error
import urllib.request
from pathlib import Path

from playwright.sync_api import Browser, sync_playwright

PICTURES = Path(__file__).resolve().parents[2] / "demo_meet" / "pictures"
CHROMIUM = ["--no-sandbox", "--disable-gpu", "--disable-background-networking", "--no-first-run"]
SHOTS = (
    ("table.png", "/platforms/1/table", 1366, 900),
    ("crew.png", "/platforms/1/crew", 1280, 800),
    ("crew-belt.png", "/platforms/2/crew", 1280, 800),
    ("card.png", "/platforms/1/cards/1/1/2", 1000, 1180),
)


def main() -> None:
    """Start the demo, take the pictures, stop it."""
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        port = probe.getsockname()[1]
    with tempfile.TemporaryDirectory() as folder:
        command = [sys.executable, "-m", "app.cli", "demo", "--port", str(port), "--data", folder]
        with subprocess.Popen(command, stdout=subprocess.DEVNULL) as server:
            try:
                wait_until_up(f"http://127.0.0.1:{port}/")
                with sync_playwright() as playwright:
                    browser = playwright.chromium.launch(executable_path="/usr/bin/chromium", args=CHROMIUM)
                    take(browser, f"http://127.0.0.1:{port}")
            finally:
                server.terminate()


def wait_until_up(url: str, tries: int = 100) -> None:
    """Ask until the server answers."""
    for _ in range(tries):
        try:
            urllib.request.urlopen(url).close()
        except urllib.error.URLError:
            time.sleep(0.1)
        else:
            return
    raise SystemExit(f"Nothing answers at {url}.")


def take(browser: Browser, base: str) -> None:
    """One picture after another."""
    PICTURES.mkdir(exist_ok=True)
    for name, path, width, height in SHOTS:
        page = browser.new_page(viewport={"width": width, "height": height})
        page.goto(base + path)
        page.wait_for_selector("[data-age]:has-text('connected')") if "card" not in name else None
        page.screenshot(path=PICTURES / name)
        page.close()


if __name__ == "__main__":
    main()
