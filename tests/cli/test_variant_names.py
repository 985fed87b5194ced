"""A product of variants is named as it was typed, by every command that takes one."""

from __future__ import annotations

import json
import re
from pathlib import Path

import pytest

from fluxnet.cli.main import run
from fluxnet.cli.new import MODEL

MORE = "limit glucose <= 10\nvariant first\n    limit oxygen <= 8\n"
MORE += "variant second\n    set PO = 1.2\n"
COMMANDS = [
    ["check", "model.flux", "--variant"],
    ["solve", "model.flux", "--maximise", "ethanol", "--variant"],
    ["routes", "model.flux", "--from", "glucose", "--to", "ethanol", "--variant"],
    ["frontier", "model.flux", "mu", "ethanol", "--across"],
    ["compare", "model.flux", "--product", "ethanol", "--from", "glucose", "--across"],
]


@pytest.mark.parametrize("words", COMMANDS, ids=lambda words: words[0])
@pytest.mark.parametrize("typed", ["second * first", "first * second"])
def test_the_order_is_the_one_typed(
    words: list[str], typed: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:  # fmt: skip
    (tmp_path / "model.flux").write_text(MODEL + MORE, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    run([*words, typed, "--json"])
    text = capsys.readouterr().out
    names = set(re.findall(r"(?:first|second) \* (?:first|second)", text))

    assert json.loads(text)["document"].startswith(words[0])
    assert names == {typed}
