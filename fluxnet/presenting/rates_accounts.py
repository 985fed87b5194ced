"""The accounts over time: broth in the vessel, carbon used and found; courses as data."""

from __future__ import annotations

import numpy as np

from fluxnet.cultivation.result import CultivationRates
from fluxnet.cultivation.volumes import Account
from fluxnet.ground.table import Align, Cell, Column, Table

__all__ = ["account_tables", "time_tables"]

_MOST_TIMES = 8
_SMALL = 5e-4
"""Of the largest: a line of an account that never grows above it is not shown."""


def account_tables(found: CultivationRates) -> tuple[Table, ...]:
    """The accounts at some times, for the screen."""
    return tuple(
        _carbon(one) if one.title == "carbon" else _broth(one) for one in found.accounts
    )


def _places(account: Account) -> list[int]:
    count = account.time.size
    return sorted({round(k) for k in np.linspace(0, count - 1, min(count, _MOST_TIMES))})


def _broth(account: Account) -> Table:
    largest = max(float(np.abs(line.amount).max()) for line in account.lines)
    lines = [x for x in account.lines if float(np.abs(x.amount).max()) > _SMALL * largest]
    columns = (
        Column("time, h", "", align=Align.RIGHT),
        *(Column(x.name, "", align=Align.RIGHT, decimals=4, wrap=11) for x in lines[1:]),
        Column("expected", "expected", align=Align.RIGHT), Column("", "sd", sd_of="expected"),
        Column("found", "", align=Align.RIGHT, decimals=3),
    )  # fmt: skip
    rows: list[tuple[Cell, ...]] = []
    for k in _places(account):
        time = float(account.time[k])
        rows.append((
            time, *(float(x.amount[k]) for x in lines[1:]), float(account.expected[k]),
            float(account.expected_sd[k]), _found_at(account, time),
        ))  # fmt: skip
    notes = [f"{account.lines[0].amount[0]:.4g} {account.unit} at the start"]
    if account.closure is not None:
        notes.append(f"found over expected at the end: {100 * account.closure:.2f} %")
    title = f"Account of the broth [{account.unit}]"
    return Table("", title, columns, tuple(rows), tuple(notes))


def _found_at(account: Account, time: float) -> float | None:
    if not account.found_time.size:
        return None
    near = int(np.argmin(np.abs(account.found_time - time)))
    return float(account.found[near]) if abs(account.found_time[near] - time) < 0.01 else None


def _carbon(account: Account) -> Table:
    made = [x for x in account.lines if x.amount[-1] > 0]
    columns = (
        Column("time, h", "", align=Align.RIGHT),
        Column("used", "", align=Align.RIGHT, decimals=1),
        *(Column(x.name, "", align=Align.RIGHT, decimals=1) for x in made),
        Column("found - used", "gap", align=Align.RIGHT),
        Column("", "sd", sd_of="gap", says_exact=False),
        Column("recovery", "recovery", "%", Align.RIGHT),
        Column("", "recovery_sd", sd_of="recovery"),
    )  # fmt: skip
    rows: list[tuple[Cell, ...]] = []
    for k in _places(account):
        used, found, sd = (
            float(a[k]) for a in (account.expected, account.found, account.expected_sd)
        )
        told = used > 3 * sd > 0
        rows.append((
            float(account.time[k]), used, *(float(x.amount[k]) for x in made), found - used, sd,
            100 * found / used if told else None, 100 * sd / used if told else None,
        ))  # fmt: skip
    return Table("", "Account of carbon [C-mmol]", columns, tuple(rows))


def time_tables(found: CultivationRates) -> tuple[Table, ...]:
    """Accounts and courses at all times, as data."""
    accounts: list[tuple[Cell, ...]] = []
    for one in found.accounts:
        told = [(x.name, x.amount) for x in one.lines]
        told += [("expected", one.expected), ("expected sd", one.expected_sd)]
        accounts += [
            (one.title, name, float(t), float(v), one.unit)
            for name, values in told
            for t, v in zip(one.time, values, strict=True)
        ]
        accounts += [
            (one.title, "found", float(t), float(v), one.unit)
            for t, v in zip(one.found_time, one.found, strict=True)
        ]
    courses = tuple(
        (c.name, float(t), float(v), float(s), c.unit)
        for c in found.courses
        for t, v, s in zip(c.time, c.value, c.sd, strict=True)
    )
    return (
        Table("accounts", "", _columns("account", "line", "time", "amount", "unit"),
              tuple(accounts), run=found.name),
        Table("courses", "", _columns("name", "time", "value", "sd", "unit"), courses,
              run=found.name),
    )  # fmt: skip


def _columns(*keys: str) -> tuple[Column, ...]:
    return tuple(Column("", key) for key in keys)
