"""The command line: ``kt-widgets lab`` opens the start notebook, ``kt-widgets dossier`` writes a folder."""

from __future__ import annotations

import argparse
import os
import shutil
import sys
from collections.abc import Mapping, Sequence
from importlib.resources import files
from pathlib import Path
from typing import NoReturn

from kt_widgets.errors import KtError

__all__ = ["NOTEBOOKS", "START", "copy_notebooks", "lab_arguments", "main", "shipped_notebooks"]

NOTEBOOKS = "kt-widgets-notebooks"
"""The folder, in the current one, that the notebooks are copied to."""

START = "start.ipynb"

BAD_INPUT = 2
"""Exit code for input that is not accepted, a folder that cannot be written included."""


class _Parser(argparse.ArgumentParser):
    def error(self, message: str) -> NoReturn:
        # One line, as for every other error; --help shows the rest.
        self.exit(BAD_INPUT, f"kt-widgets: {message}; see {self.prog} --help\n")


def _parser() -> _Parser:
    from kt_widgets import __version__

    parser = _Parser(
        prog="kt-widgets",
        description="Checked Alexander modules of knots and links, with their figures.",
        allow_abbrev=False,
    )
    parser.add_argument("--version", action="version", version=f"kt-widgets {__version__}")
    commands = parser.add_subparsers(dest="command", required=True, metavar="command")
    commands.add_parser(
        "lab",
        help="open the start notebook in JupyterLab",
        description=f"Copy the notebooks to ./{NOTEBOOKS} (files already there stay as they are) and open "
        "the start notebook in JupyterLab. All further options are handed on to JupyterLab, such as "
        "--port=9000, --no-browser, or --ip=0.0.0.0 in a container.",
        usage="kt-widgets lab [-h] [JupyterLab options]",
        allow_abbrev=False,
    )
    dossier = commands.add_parser(
        "dossier",
        help="write the whole chain of evidence for a diagram to a folder, without a browser",
        description="Write dossier.html (a page that needs no network), dossier.json (the exact data), "
        "verify.py (checks dossier.json, with Python alone), the figures and the formulas to a folder.",
        epilog='examples: kt-widgets dossier "braid 1 -2 1 -2" --out figure-eight; '
        'kt-widgets dossier "dowker 4 6 2" --out trefoil',
        allow_abbrev=False,
    )
    dossier.add_argument("line", nargs="+", help="a diagram in braid, gauss, dowker or planar notation")
    dossier.add_argument(
        "--out", metavar="DIR", required=True, help="the folder, made where it does not exist"
    )
    return parser


def shipped_notebooks() -> Path:
    """The folder of the notebooks: the repository's, otherwise the one in the installed package.

    Raises
    ------
    KtError
        If the notebooks did not travel with this installation.

    Examples
    --------
    >>> (shipped_notebooks() / START).is_file()
    True
    """
    package = Path(str(files("kt_widgets")))
    candidates = [package / "notebooks"]
    if (package.parent / "pyproject.toml").is_file():
        candidates.insert(0, package.parent / "notebooks")
    for folder in candidates:
        if (folder / START).is_file():
            return folder
    raise KtError(
        f"{START} is not part of this installation",
        where=str(package),
        accepted="a wheel or a clone of the repository",
    )


def copy_notebooks(source: Path, target: Path) -> list[Path]:
    """Copy the notebooks that are not in `target` yet; what is there is never touched.

    Returns
    -------
    list of Path
        The copies made now.
    """
    target.mkdir(parents=True, exist_ok=True)
    copies = []
    for notebook in sorted(source.glob("*.ipynb")):
        copy = target / notebook.name
        if not copy.exists():
            shutil.copyfile(notebook, copy)
            copies.append(copy)
    return copies


def _trust(notebook: Path) -> None:
    """Sign a notebook, as ``jupyter trust`` does, so that its saved pictures are shown."""
    import nbformat
    from nbformat.sign import NotebookNotary

    NotebookNotary().sign(nbformat.read(notebook, as_version=4))  # type: ignore[no-untyped-call]


def _can_open_browser(environment: Mapping[str, str], platform: str) -> bool:
    """Whether a browser with a window can be opened; a text browser would take the terminal over."""
    import webbrowser

    window = environment.get("DISPLAY") or environment.get("WAYLAND_DISPLAY") or environment.get("BROWSER")
    if platform not in ("darwin", "win32") and not window:
        return False
    try:
        webbrowser.get()
    except webbrowser.Error:
        return False
    return True


def lab_arguments(folder: Path, options: Sequence[str], *, browser: bool, root: bool) -> list[str]:
    """The arguments of JupyterLab: ours first, so that the user's options have the last word.

    Address, port and token stay Jupyter's defaults.

    Examples
    --------
    >>> lab_arguments(Path("x"), ["--port=9000"], browser=False, root=False)[1:]
    ['--LabApp.default_url=/lab/tree/start.ipynb', '--no-browser', '--port=9000']
    """
    arguments = [f"--ServerApp.root_dir={folder}", f"--LabApp.default_url=/lab/tree/{START}"]
    if not browser and "--no-browser" not in options:
        arguments.append("--no-browser")
    if root and "--allow-root" not in options:
        arguments.append("--allow-root")
    return [*arguments, *options]


def _lab(options: Sequence[str]) -> int:
    from importlib import import_module, util

    if util.find_spec("jupyterlab") is None:
        print(
            f"kt-widgets: JupyterLab is not installed; install it with: "
            f"{sys.executable} -m pip install 'kt-widgets[lab]'",
            file=sys.stderr,
        )
        return 1
    folder = Path(NOTEBOOKS).resolve()
    copies = copy_notebooks(shipped_notebooks(), folder)
    for copy in copies:
        _trust(copy)
    kept = "" if copies else " (the notebooks that were there are kept)"
    print(f"Notebook: {folder / START}{kept}")
    print("JupyterLab prints its address below; stop it with Ctrl-C.", flush=True)
    root = hasattr(os, "geteuid") and os.geteuid() == 0
    browser = _can_open_browser(os.environ, sys.platform)
    # In this process, so that Ctrl-C and the terminal are JupyterLab's.
    import_module("jupyterlab.labapp").LabApp.launch_instance(
        lab_arguments(folder, options, browser=browser, root=root)
    )
    return 0


def _dossier(line: str, folder: str) -> int:
    from kt_widgets.diagrams.diagram import Diagram
    from kt_widgets.figures.dossier_folder import dossier

    written = dossier(Diagram.parse(line), folder)
    for path in written:
        print(path)
    return 0


def _said(error: Exception) -> str:
    """An error in words; one of the system without its number, its file first."""
    if isinstance(error, OSError) and error.filename and error.strerror:
        return f"{error.filename}: {error.strerror}"
    return str(error)


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command line; the result is the exit code.

    Examples
    --------
    >>> main(["dossier", "braid 1 1 1", "--out"])
    Traceback (most recent call last):
    SystemExit: 2
    """
    parser = _parser()
    parsed, others = parser.parse_known_args(arguments)
    try:
        if parsed.command == "lab":
            return _lab(others)
        if others:
            parser.error(f"unknown option {others[0]}")
        if not parsed.out.strip():
            parser.error("--out names no folder")
        return _dossier(" ".join(parsed.line), parsed.out)
    except (KtError, OSError) as error:
        print(f"kt-widgets: {' '.join(_said(error).split())}", file=sys.stderr)
        return BAD_INPUT
    except KeyboardInterrupt:
        return 130
