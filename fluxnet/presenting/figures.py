"""How every figure looks, and how it is written: the same bytes for the same input.

Colours are those of Okabe & Ito (2008, from memory), which the colour-blind can tell apart, with
grey for their yellow; each comes with a dash and a marker of its own, so that colour is never
the only sign.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from enum import Enum
from html import escape
from pathlib import Path
from typing import TYPE_CHECKING, Any

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.presenting.files import refuse_file

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = [
    "INK", "QUIET", "WIDTH", "Look", "inches_of", "look_of", "new_figure", "refuse_figure",
    "size_of", "spread", "styled", "wrapped", "write_figure",
]  # fmt: skip

INK, QUIET = "#222222", "#666666"
_COLOURS = ("#0072B2", "#D55E00", "#009E73", "#CC79A7", "#E69F00", "#56B4E9", "#000000", "#7A7A7A")
_DASHES = ("solid", (0, (6, 2)), (0, (2, 1.5)), (0, (7, 2, 1.5, 2)), (0, (1, 1)))
_MARKERS = ("o", "s", "^", "D", "v", "P", "X")
WIDTH, _HEIGHT = 7.2, 4.8
_LEFT, _RIGHT, _EDGE = 0.756, 0.25, 0.144
_LEAST_WIDTH, _LEAST_HEIGHT = 4.0, 2.9
"""Inches: the figure as a rule; what stays free of the axes; and their least size."""
_TITLE_SIZE, _TOLD_SIZE, _FOOT_SIZE = 12.5, 9, 7.2
_STYLE: Any = {
    "font.family": "sans-serif",
    "font.sans-serif": ["DejaVu Sans"],
    "font.size": 9.5,
    "axes.edgecolor": QUIET,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.8,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.unicode_minus": True,
    "xtick.color": QUIET,
    "ytick.color": QUIET,
    "xtick.labelcolor": INK,
    "ytick.labelcolor": INK,
    "text.color": INK,
    "text.parse_math": False,
    "svg.fonttype": "none",
    "svg.hashsalt": "fluxnet",
    "pdf.fonttype": 42,
    "path.simplify": False,
}


class _Format(Enum):
    """What a figure can be written as, by the end of the file's name."""

    SVG = ".svg"
    PNG = ".png"
    PDF = ".pdf"


_NO_DATES: dict[_Format, dict[str, Any]] = {
    _Format.SVG: {"Date": None, "Creator": None},
    _Format.PNG: {"Software": None},
    _Format.PDF: {"CreationDate": None, "Creator": None, "Producer": None},
}


@record
class Look:
    """Colour, dash and marker of one line."""

    colour: str
    dash: Any
    marker: str


def look_of(place: int) -> Look:
    """The look of the line at a place; lines of one colour differ in dash and marker."""
    count = len(_COLOURS)
    return Look(
        _COLOURS[place % count],
        _DASHES[(place + place // count) % len(_DASHES)],
        _MARKERS[(place + place // count) % len(_MARKERS)],
    )


def refuse_figure(path: Path, *, force: bool) -> None:
    """Refuse, before anything is computed, a figure that could not be written.

    Raises
    ------
    MisuseError
        Where the name does not end in .svg, .png or .pdf, the file exists and is not to be
        overwritten, or matplotlib is not installed.
    """
    from importlib.util import find_spec

    if path.suffix.lower() not in [f.value for f in _Format]:
        raise MisuseError(f"{path}: a figure's name ends in .svg, .png or .pdf")
    if find_spec("matplotlib") is None:
        raise MisuseError("figures need matplotlib: pip install 'fluxnet[figures]'")
    refuse_file(path, force=force)


@contextmanager
def styled() -> Iterator[None]:
    """Draw and write inside this; settings of the user's own play no part."""
    import matplotlib as mpl

    with mpl.rc_context():
        mpl.rcdefaults()
        mpl.rcParams.update(_STYLE)
        yield


def inches_of(text: str, size: float, *, bold: bool = False) -> float:
    """The width of a line of text in a figure."""
    from matplotlib.font_manager import FontProperties
    from matplotlib.textpath import TextPath

    if not text.strip():
        return 0.0
    font = FontProperties(family="DejaVu Sans", weight="bold" if bold else "normal")
    return float(TextPath((0, 0), text, size=size, prop=font).get_extents().x1) / 72


def wrapped(text: str, size: float, width: float, *, bold: bool = False) -> list[str]:
    """A text in lines that are not wider than so many inches, but for a single longer word."""
    lines: list[str] = []
    for word in text.split():
        longer = f"{lines[-1]} {word}" if lines else word
        if lines and inches_of(longer, size, bold=bold) <= width:
            lines[-1] = longer
        else:
            lines.append(word)
    return lines


def size_of(axes: Axes) -> tuple[float, float]:
    """Width and height of the axes in inches."""
    box = axes.get_position()
    width, height = axes.get_figure().get_size_inches()  # type: ignore[union-attr]
    return float(box.width * width), float(box.height * height)


def new_figure(
    title: str, finding: str, footnote: str, gutter: float = 0.0, height: float = 0.0
) -> tuple[Figure, Axes]:
    """A figure with its title, some sentences that say what is seen, and a note at its foot.

    ``gutter`` is the part of the usual width that is kept free beside the axes, and ``height``
    the least height of the axes [inches]: where they need more the figure is larger than usual.
    """
    from matplotlib.figure import Figure

    gutter *= WIDTH
    width = max(WIDTH, _LEFT + _LEAST_WIDTH + gutter + _RIGHT)
    room = width - 2 * _EDGE
    heads = wrapped(title, _TITLE_SIZE, room, bold=True)
    told = wrapped(finding, _TOLD_SIZE, room)
    foot = wrapped(footnote, _FOOT_SIZE, room)
    above = _EDGE + 0.26 * len(heads) + 0.18 * len(told) + 0.2
    below = 0.67 + 0.13 * len(foot)
    tall = max(_HEIGHT, above + max(_LEAST_HEIGHT, height) + below)
    figure = Figure(figsize=(width, tall))
    axes = figure.add_axes((
        _LEFT / width, below / tall, (width - _LEFT - gutter - _RIGHT) / width,
        1 - (above + below) / tall,
    ))  # fmt: skip
    left = _EDGE / width
    figure.text(
        left, 1 - _EDGE / tall, "\n".join(heads), fontsize=_TITLE_SIZE, fontweight="bold", va="top"
    )
    figure.text(
        left, 1 - (_EDGE + 0.26 * len(heads) + 0.03) / tall, "\n".join(told), fontsize=_TOLD_SIZE,
        color=INK, va="top", linespacing=1.35,
    )  # fmt: skip
    figure.text(
        left, 0.1 / tall, "\n".join(foot), fontsize=_FOOT_SIZE, color=QUIET, va="bottom",
        linespacing=1.3,
    )  # fmt: skip
    axes.grid(visible=True, color="#E4E4E4", linewidth=0.6)
    axes.set_axisbelow(True)
    return figure, axes


def write_figure(figure: Figure, path: Path, title: str, finding: str, *, force: bool) -> None:
    """Write a figure; an SVG gets a title and a description for those who cannot see it.

    Raises
    ------
    MisuseError
        As :func:`refuse_figure`.
    """
    from io import BytesIO

    refuse_figure(path, force=force)
    kind = _Format(path.suffix.lower())
    stream = BytesIO()
    figure.savefig(
        stream, format=kind.value[1:], dpi=160, facecolor="white", metadata=_NO_DATES[kind]
    )
    data = stream.getvalue()
    if kind is _Format.SVG:
        data = _described(data.decode("utf-8"), title, finding).encode("utf-8")
    path.write_bytes(data)


def _described(svg: str, title: str, finding: str) -> str:
    """The SVG with a title and a description right behind its opening tag."""
    start = svg.index("<svg")
    end = svg.index(">", start)
    head = f'{svg[start:end]} role="img" aria-labelledby="figure-title figure-finding">'
    told = (
        f'\n <title id="figure-title">{escape(title)}</title>'
        f'\n <desc id="figure-finding">{escape(finding)}</desc>'
    )
    return f"{svg[:start]}{head}{told}{svg[end + 1 :]}"


def spread(places: Sequence[float], least: float) -> list[float]:
    """Places moved apart, as little as may be, until neighbours are ``least`` from one another.

    Examples
    --------
    >>> spread([0.0, 1.0, 10.0], 4.0)
    [-1.5, 2.5, 10.0]
    """
    order = sorted(range(len(places)), key=lambda k: (places[k], k))
    groups: list[list[int]] = []
    centres: list[float] = []
    for k in order:
        groups.append([k])
        centres.append(places[k])
        while len(groups) > 1:
            room = least * (len(groups[-1]) + len(groups[-2])) / 2
            if centres[-1] - centres[-2] >= room:
                break
            last = groups.pop()
            centres.pop()
            groups[-1] += last
            centres[-1] = sum(places[i] for i in groups[-1]) / len(groups[-1])
    found = list(places)
    for group, centre in zip(groups, centres, strict=True):
        for place, k in enumerate(group):
            found[k] = centre + least * (place - (len(group) - 1) / 2)
    return found
