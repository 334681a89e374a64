"""What pytest leaves aside: a module that needs an extra which is not installed has no doctests to run."""

from __future__ import annotations

from importlib.util import find_spec

collect_ignore = [] if find_spec("numba") else ["kt_widgets/algebra/evaluation_compiled.py"]
