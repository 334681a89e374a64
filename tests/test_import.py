"""What `import kt_widgets` may cost: no heavy library is loaded until a name is used."""

import subprocess
import sys
from importlib.util import find_spec

import pytest

import kt_widgets as kt

DRAWING = {"sympy", "matplotlib", "networkx", "scipy", "ipywidgets", "anywidget", "traitlets", "IPython"}
HEAVY = {*DRAWING, "lark"}


def loaded_after(statement: str) -> set[str]:
    code = f"import sys; {statement}; print(*sorted(sys.modules))"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    return set(done.stdout.split())


def test_import_loads_no_heavy_library() -> None:
    assert loaded_after("import kt_widgets").isdisjoint(HEAVY)


def test_algebra_loads_no_heavy_library() -> None:
    used = loaded_after("import kt_widgets as kt; f = kt.LaurentPolynomial([1, -1, 1]); print(f * f)")
    assert used.isdisjoint(HEAVY)


def test_the_exact_chain_draws_and_graphs_nothing() -> None:
    chain = "kt.Diagram.from_braid([1, -2, 1, -2]).cover().chains().homology(1).over('Q').order()"
    assert loaded_after(f"import kt_widgets as kt; {chain}").isdisjoint(DRAWING)


@pytest.mark.parametrize("name", kt.__all__)
def test_every_public_name_loads(name: str) -> None:
    assert getattr(kt, name) is not None


@pytest.mark.parametrize("name", kt.figures.__all__)
def test_no_file_of_figures_has_the_name_of_a_figure(name: str) -> None:
    # Importing such a file would put the module in the function's place.
    assert find_spec(f"kt_widgets.figures.{name}") is None


def test_unknown_names_are_refused() -> None:
    with pytest.raises(AttributeError, match="no_such_name"):
        kt.no_such_name  # noqa: B018
