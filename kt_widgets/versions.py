"""Which versions are in use: for reports of errors, since exact results depend on the libraries below."""

from __future__ import annotations

import platform
from importlib.metadata import PackageNotFoundError, version

__all__ = ["show_versions", "versions"]

PACKAGES = (
    "kt-widgets",
    "python-flint",
    "lark",
    "networkx",
    "numba",
    "numpy",
    "scipy",
    "sympy",
    "matplotlib",
    "ipywidgets",
    "anywidget",
    "jupyterlab",
)


def versions() -> dict[str, str]:
    """Versions of Python, of this package and of the libraries it uses ('not installed' where missing).

    Examples
    --------
    >>> sorted(versions())[:2]
    ['anywidget', 'ipywidgets']
    """
    found = {"python": platform.python_version()}
    for name in PACKAGES:
        try:
            found[name] = version(name)
        except PackageNotFoundError:
            found[name] = "not installed"
    return found


def show_versions() -> None:
    """Print the versions, one a line."""
    for name, number in versions().items():
        print(f"{name:14} {number}")
