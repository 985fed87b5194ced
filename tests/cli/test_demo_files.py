"""What the demo writes is the scenario alone."""

from __future__ import annotations

from pathlib import Path

import pytest

from fluxnet.cli import demo


def test_scripts_that_an_installation_compiled_are_no_part_of_the_scenario(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    compiled = tmp_path / "examples" / "1-story" / "__pycache__" / "make.cpython-311.pyc"
    compiled.parent.mkdir(parents=True)
    compiled.write_bytes(b"")
    compiled.parent.with_name("make.py").write_text("")
    monkeypatch.setattr(demo, "resource_folder", lambda name: tmp_path / name)

    written = demo._files("1-story", Path("there"))

    assert list(written) == [Path("there/make.py")]
