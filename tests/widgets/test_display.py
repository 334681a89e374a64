"""Values show their pictures in IPython, and `import kt_widgets` loads nothing for that."""

from __future__ import annotations

import subprocess
import sys

CODE = """
import sys
from IPython.core.interactiveshell import InteractiveShell
shell = InteractiveShell.instance()
import kt_widgets as kt
assert "matplotlib" not in sys.modules and "kt_widgets.diagrams.diagram" not in sys.modules
d = kt.Diagram.from_braid([1, 1, 1])
for value in (d, d.cover()):
    data, metadata = shell.display_formatter.format(value)
    assert {"image/svg+xml", "image/png", "text/plain"} <= set(data), sorted(data)
    assert data["text/plain"] == repr(value)
print("shown")
"""


def test_diagrams_and_covers_are_shown_as_pictures() -> None:
    done = subprocess.run([sys.executable, "-c", CODE], capture_output=True, text=True, check=False)
    assert done.stdout == "shown\n", done.stderr


def test_without_a_shell_nothing_happens() -> None:
    code = "import IPython, kt_widgets; print(kt_widgets.__version__ != '')"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.stdout == "True\n", done.stderr
