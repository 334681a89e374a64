"""The command line: exit codes and messages, the notebooks it copies, the arguments JupyterLab gets."""

from __future__ import annotations

import json
import os
import socket
import subprocess
import sys
import time
import urllib.request
import zipfile
from pathlib import Path

import pytest

import kt_widgets
from kt_widgets import command

ROOT = Path(kt_widgets.__file__).parent.parent


def run(*arguments: str, cwd: Path = ROOT, **extra: str) -> subprocess.CompletedProcess[str]:
    """The command in a process of its own."""
    environment = {**os.environ, "PYTHONPATH": str(ROOT), **extra}
    return subprocess.run(
        [sys.executable, "-m", "kt_widgets", *arguments],
        cwd=cwd,
        env=environment,
        capture_output=True,
        text=True,
        timeout=120,
    )


def test_version_and_help_load_no_heavy_library():
    code = (
        "import sys\nfrom kt_widgets.command import main\n"
        "try: main(['--help'])\nexcept SystemExit as stop: assert not stop.code\n"
        "heavy = {'flint', 'numpy', 'matplotlib', 'sympy', 'networkx', 'scipy', 'ipywidgets', 'jupyterlab'}\n"
        "assert not heavy & set(sys.modules), heavy & set(sys.modules)"
    )
    subprocess.run([sys.executable, "-c", code], cwd=ROOT, check=True, capture_output=True)
    shown = run("--version")
    assert (shown.returncode, shown.stdout) == (0, f"kt-widgets {kt_widgets.__version__}\n")


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        ([], "command"),
        (["frobnicate"], "frobnicate"),
        (["dossier"], "line"),
        (["dossier", "braid 1 1 1"], "--out"),
        (["dossier", "braid 1 1 1", "--out", "x", "--colour"], "--colour"),
        (["dossier", "brain 1 1 1", "--out", "x"], "the nearest is braid"),
        (["dossier", "braid 1 0 1", "--out", "x"], "letter 2"),
        (["dossier", "gauss 1 -2 signs + +", "--out", "x"], "accepted"),
        (["dossier", "dowker 4 6 3", "--out", "x"], "entry 3"),
        (["dossier", "dowker 4 6 8 10 2", "--out", "x"], "not realisable"),
        (["dossier", "planar 1,4,2,5; 5,2,6,3; 3,6,4,2", "--out", "x"], "label"),
        (["dossier", "braid 1 1 1", "--out", ""], "--out names no folder"),
    ],
)
def test_bad_input_is_one_line_and_exit_code_2(tmp_path, arguments, said):
    answer = run(*arguments, cwd=tmp_path)
    assert answer.returncode == 2
    assert answer.stdout == ""
    assert answer.stderr.startswith("kt-widgets: ")
    assert answer.stderr.count("\n") == 1
    assert said in answer.stderr
    assert list(tmp_path.iterdir()) == []


def test_a_folder_that_is_a_file_is_refused(tmp_path):
    occupied = tmp_path / "out"
    occupied.write_text("mine")
    answer = run("dossier", "braid 1 1 1", "--out", str(occupied))
    assert (answer.returncode, answer.stderr.count("\n")) == (2, 1)
    assert str(occupied) in answer.stderr
    assert occupied.read_text() == "mine"


@pytest.mark.skipif(not Path("/proc").is_dir(), reason="needs a folder that not even root can write")
def test_a_folder_that_cannot_be_written_is_refused():
    answer = run("dossier", "braid 1 1 1", "--out", "/proc/dossier")
    assert (answer.returncode, answer.stderr.count("\n")) == (2, 1)
    assert "/proc/dossier: No such file or directory" in answer.stderr
    assert "Errno" not in answer.stderr


def test_words_need_no_quotes(tmp_path):
    answer = run("dossier", "braid", "1", "-2", "1", "-2", "--out", str(tmp_path / "out"))
    assert answer.returncode == 0, answer.stderr
    data = json.loads((tmp_path / "out" / "dossier.json").read_text())
    assert data["data"]["subject"]["line"] == "braid 1 -2 1 -2"
    assert str(tmp_path / "out" / "dossier.html") in answer.stdout.splitlines()


def test_notebooks_are_copied_and_never_overwritten(tmp_path):
    source, target = tmp_path / "source", tmp_path / "target"
    source.mkdir()
    for name in ("start.ipynb", "more.ipynb"):
        (source / name).write_text(name)
    (source / "notes.txt").write_text("not a notebook")
    assert command.copy_notebooks(source, target) == [target / "more.ipynb", target / "start.ipynb"]
    (target / "start.ipynb").write_text("edited by the user")
    (source / "new.ipynb").write_text("new")
    assert command.copy_notebooks(source, target) == [target / "new.ipynb"]
    assert (target / "start.ipynb").read_text() == "edited by the user"
    assert not (target / "notes.txt").exists()


def test_the_repository_comes_before_the_package():
    assert command.shipped_notebooks() == ROOT / "notebooks"


def test_jupyter_defaults_stay_and_options_go_through(tmp_path):
    given = ["--ip=0.0.0.0", "--port", "9000", "--no-browser"]
    passed = command.lab_arguments(tmp_path, given, browser=False, root=True)
    assert passed[-4:] == given
    assert passed.count("--no-browser") == 1
    assert passed.count("--allow-root") == 1
    # No address, port, token or other setting of Jupyter's.
    assert command.lab_arguments(tmp_path, [], browser=True, root=False) == [
        f"--ServerApp.root_dir={tmp_path}",
        "--LabApp.default_url=/lab/tree/start.ipynb",
    ]


@pytest.mark.parametrize(
    ("environment", "platform", "expected"),
    [({}, "linux", False), ({"DISPLAY": ":0", "BROWSER": "true %s"}, "linux", True)],
)
def test_a_browser_needs_a_window(monkeypatch, environment, platform, expected):
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "BROWSER"):
        monkeypatch.delenv(name, raising=False)
    for name, value in environment.items():
        monkeypatch.setenv(name, value)
    monkeypatch.setattr("webbrowser._tryorder", None)
    assert command._can_open_browser(environment, platform) is expected


def test_without_jupyterlab_the_pip_line_is_shown(monkeypatch, capsys, tmp_path):
    monkeypatch.chdir(tmp_path)
    monkeypatch.setattr("importlib.util.find_spec", lambda name: None)
    assert command.main(["lab"]) == 1
    assert "pip install 'kt-widgets[lab]'" in capsys.readouterr().err
    assert list(tmp_path.iterdir()) == []


def jupyter_environment(folder: Path) -> dict[str, str]:
    return {f"JUPYTER_{name}_DIR": str(folder / name.lower()) for name in ("CONFIG", "DATA", "RUNTIME")}


def served(process: subprocess.Popen[str], seconds: float = 60) -> str:
    """The address that JupyterLab prints."""
    assert process.stderr is not None
    stop = time.monotonic() + seconds
    while time.monotonic() < stop:
        line = process.stderr.readline()
        if "http://" in line and "token=" in line:
            return line[line.index("http://") :].strip()
    raise AssertionError("no address was printed")


def fetched(address: str, token: str, seconds: float = 30) -> bytes:
    """What the server answers, once it listens: the address is printed a moment earlier."""
    request = urllib.request.Request(address, headers={"Authorization": f"token {token}"})
    stop = time.monotonic() + seconds
    while True:
        try:
            with urllib.request.urlopen(request, timeout=10) as answer:
                return answer.read()
        except OSError:
            if time.monotonic() > stop:
                raise
            time.sleep(0.2)


@pytest.mark.slow
def test_lab_serves_the_trusted_start_notebook(tmp_path):
    pytest.importorskip("jupyterlab")
    environment = {**os.environ, "PYTHONPATH": str(ROOT), **jupyter_environment(tmp_path / "jupyter")}
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        port = probe.getsockname()[1]
    process = subprocess.Popen(
        [sys.executable, "-m", "kt_widgets", "lab", f"--port={port}", "--no-browser"],
        cwd=tmp_path,
        env=environment,
        stderr=subprocess.PIPE,
        stdout=subprocess.DEVNULL,
        text=True,
    )
    try:
        address = served(process)
        assert "/lab/tree/start.ipynb?token=" in address
        base, token = address.split("/lab/")[0], address.split("token=")[1]
        cells = json.loads(fetched(f"{base}/api/contents/start.ipynb", token))["content"]["cells"]
        code = [cell for cell in cells if cell["cell_type"] == "code"]
        assert code
        assert all(cell["metadata"]["trusted"] for cell in code)
    finally:
        process.terminate()
        process.wait(30)


@pytest.mark.slow
def test_notebooks_travel_in_the_wheel(tmp_path):
    subprocess.run(
        [sys.executable, "-m", "pip", "wheel", "--no-deps", "--no-build-isolation", "-w", tmp_path, ROOT],
        check=True,
        capture_output=True,
        timeout=300,
    )
    (wheel,) = tmp_path.glob("*.whl")
    with zipfile.ZipFile(wheel) as archive:
        names = archive.namelist()
        archive.extractall(tmp_path / "site")
    shipped = {f"kt_widgets/notebooks/{path.name}" for path in (ROOT / "notebooks").glob("*.ipynb")}
    assert "kt_widgets/notebooks/start.ipynb" in shipped
    assert shipped <= set(names)
    assert {"kt_widgets/py.typed", "kt_widgets/text/grammar.lark", "kt_widgets/verify.py"} <= set(names)
    assert {name for name in names if name.startswith("kt_widgets/figures/static/")}
    code = "from kt_widgets.command import shipped_notebooks; print(shipped_notebooks())"
    found = subprocess.run(
        [sys.executable, "-c", code],
        cwd=tmp_path,
        env={**os.environ, "PYTHONPATH": str(tmp_path / "site")},
        check=True,
        capture_output=True,
        text=True,
    )
    assert found.stdout.strip() == str(tmp_path / "site" / "kt_widgets" / "notebooks")
