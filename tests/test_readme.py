"""README holds: its Python runs and prints what it says, its pictures are what the tool draws now."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from tests.publish import PICTURES, pictures

README = (Path(__file__).parents[1] / "README.md").read_text(encoding="utf-8")


def test_its_python_prints_what_it_says(
    capsys: pytest.CaptureFixture[str], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    (block,) = re.findall(r"```python\n(.*?)```", README, re.DOTALL)
    said = re.findall(r"^print\(.*\)\s+# (.*)$", block, re.MULTILINE)
    exec(compile(block, "README.md", "exec"), {})
    assert capsys.readouterr().out.splitlines() == said
    assert (tmp_path / "figure-eight.pdf").read_bytes().startswith(b"%PDF")


@pytest.mark.parametrize("name", sorted(pictures()))
def test_its_pictures_are_drawn_by_the_tool(name: str) -> None:
    assert f"notebooks/pictures/{name}" in README
    assert (PICTURES / name).read_text(encoding="utf-8") == pictures()[name].svg()


def test_its_pictures_are_all_there_are() -> None:
    assert {path.name for path in PICTURES.iterdir()} == set(pictures())
