"""Chromium and JupyterLab for the browser tests; a page that logs an error fails its test.

Without Chromium the tests are skipped with the reason, unless KT_BROWSER_REQUIRED=1 is set.
"""

from __future__ import annotations

import os
import shutil
import socket
import subprocess
import sys
import time
import urllib.error
import urllib.request
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

TOKEN = "only-for-this-test"
OPTIONS = [
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]
REPOSITORY = Path(__file__).parents[2]


def missing(reason: str) -> None:
    if os.environ.get("KT_BROWSER_REQUIRED") == "1":
        pytest.fail(reason)
    pytest.skip(reason)


@pytest.fixture(scope="session")
def chromium() -> Iterator[Any]:
    """A running Chromium."""
    names = ("chromium", "chromium-browser", "google-chrome", "google-chrome-stable")
    found = next(filter(None, map(shutil.which, names)), None)
    if found is None:
        missing("no Chromium was found on the path: " + ", ".join(names))
    try:
        from playwright.sync_api import sync_playwright
    except ImportError:
        missing("playwright is not installed")
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=found, args=OPTIONS)
        yield browser
        browser.close()


@pytest.fixture
def chromium_page(chromium: Any) -> Iterator[Any]:
    """A page of its own profile; errors in its console and uncaught errors fail the test at the end."""
    context = chromium.new_context(viewport={"width": 1280, "height": 900})
    page = context.new_page()
    page.set_default_timeout(30_000)
    errors: list[str] = []
    page.on("pageerror", lambda error: errors.append(f"uncaught: {error}"))
    page.on(
        "console",
        lambda message: (
            errors.append(f"{message.text} ({message.location})") if message.type == "error" else None
        ),
    )
    yield page
    context.close()
    assert not errors, "\n".join(errors)


class Lab:
    """A JupyterLab of its own configuration over one folder."""

    def __init__(self, folder: Path, address: str) -> None:
        self.folder, self.address = folder, address

    def open(self, page: Any, notebook: str) -> None:
        """Open a notebook of the folder and wait until its kernel is idle."""
        page.goto(f"{self.address}/doc/tree/{notebook}?reset&token={TOKEN}")
        page.wait_for_selector(".jp-Notebook")
        self.idle(page)

    def idle(self, page: Any, seconds: float = 60) -> None:
        page.wait_for_function(
            "() => window.jupyterapp?.shell.currentWidget?.sessionContext?.session?.kernel"
            "?.status === 'idle'",
            timeout=1000 * seconds,
        )

    def run(self, page: Any, seconds: float = 120) -> None:
        """Run all cells; a cell that fails fails the test."""
        done = page.evaluate("() => window.jupyterapp.commands.execute('notebook:run-all-cells')")
        self.idle(page, seconds)
        failed = page.locator(".jp-OutputArea-output[data-mime-type='application/vnd.jupyter.stderr']")
        errors = [text for text in failed.all_inner_texts() if "Traceback" in text]
        assert done is not False
        assert not errors, "\n".join(errors)

    def value(self, page: Any, expression: str) -> str:
        """The text of a Python expression in the notebook's kernel."""
        answer = page.evaluate(
            """async (expression) => {
                const kernel = window.jupyterapp.shell.currentWidget.sessionContext.session.kernel;
                const future = kernel.requestExecute(
                    {code: "", user_expressions: {value: expression}, store_history: false});
                return (await future.done).content.user_expressions.value;
            }""",
            expression,
        )
        assert answer["status"] == "ok", answer
        return str(answer["data"]["text/plain"])


@pytest.fixture(scope="session")
def lab(chromium: Any, tmp_path_factory: pytest.TempPathFactory) -> Iterator[Lab]:
    """A JupyterLab server on a free port of the loopback, with configuration folders of its own."""
    home, folder = tmp_path_factory.mktemp("jupyter"), tmp_path_factory.mktemp("notebooks")
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        port = probe.getsockname()[1]
    settings = home / "settings" / "@jupyterlab" / "apputils-extension"
    settings.mkdir(parents=True)
    # No question about news in a corner of the page.
    (settings / "notification.jupyterlab-settings").write_text('{"fetchNews": "false"}')
    own = {f"JUPYTER_{kind}_DIR": str(home / kind.lower()) for kind in ("CONFIG", "DATA", "RUNTIME")}
    own |= {
        "JUPYTERLAB_SETTINGS_DIR": str(home / "settings"),
        "JUPYTERLAB_WORKSPACES_DIR": str(home / "workspaces"),
        "IPYTHONDIR": str(home / "ipython"),
        "JUPYTER_PREFER_ENV_PATH": "1",
        "PYTHONPATH": os.pathsep.join(filter(None, [str(REPOSITORY), os.environ.get("PYTHONPATH")])),
    }
    command = [
        *(sys.executable, "-m", "jupyterlab", "--no-browser"),
        *(f"--port={port}", "--ServerApp.port_retries=0"),
        *(f"--ServerApp.root_dir={folder}", f"--IdentityProvider.token={TOKEN}"),
        "--LabApp.expose_app_in_browser=True",
        "--LabApp.check_for_updates_class=jupyterlab.NeverCheckForUpdate",
    ]
    if hasattr(os, "geteuid") and os.geteuid() == 0:
        command.append("--allow-root")
    log = home / "log.txt"
    with log.open("w") as out:
        server = subprocess.Popen(command, stdout=out, stderr=out, env={**os.environ, **own})
    try:
        _wait_for(f"http://127.0.0.1:{port}/api?token={TOKEN}", server, log)
        yield Lab(folder, f"http://127.0.0.1:{port}")
    finally:
        server.terminate()
        try:
            server.wait(20)
        except subprocess.TimeoutExpired:
            server.kill()


def _wait_for(address: str, server: subprocess.Popen[bytes], log: Path, seconds: float = 60) -> None:
    end = time.monotonic() + seconds
    while time.monotonic() < end:
        if server.poll() is not None:
            break
        try:
            with urllib.request.urlopen(address, timeout=5):
                return
        except (urllib.error.URLError, OSError):
            time.sleep(0.2)
    raise RuntimeError("JupyterLab did not start:\n" + log.read_text()[-4000:])
