"""One look for all figures: colours, shapes, and how a drawing becomes part of a page."""

from __future__ import annotations

import io
import re
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass

from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.backends.backend_svg import FigureCanvasSVG
from matplotlib.figure import Figure
from matplotlib.style import context

INK, SOFT, LINE, PAPER = "#23303a", "#5d6b75", "#c9d1d4", "#fffdf9"
MAIN, MAIN_WASH, SIGN = "#0b6e72", "#cfe3e1", "#b8450f"
CLASSES = ("#1f55b0", "#cc6a1e", "#420a0b", "#977db0", "#261b46", "#8c5847")
"""Colours of classes: at least 3:1 on the paper and apart for colour-blind readers."""
SHAPES = ("o", "s", "^", "D", "v", "p")
"""Shapes of classes, so that colour is never needed."""
OTHERS, OTHERS_SHAPE = "#66717a", "P"

AT_NIGHT = {
    INK: "#e8ecec",
    SOFT: "#a3b0b6",
    LINE: "#44525a",
    PAPER: "#1a2127",
    MAIN: "#5fc4bd",
    MAIN_WASH: "#25474a",
    SIGN: "#f0905a",
    CLASSES[0]: "#6f9bf2",
    CLASSES[1]: "#e39a4a",
    CLASSES[2]: "#f0cffe",
    CLASSES[3]: "#97678e",
    CLASSES[4]: "#bbf4b5",
    CLASSES[5]: "#5e764a",
    OTHERS: "#8d9aa2",
}
"""What each colour becomes on a dark page."""

SETTINGS: dict[str, object] = {
    "svg.fonttype": "none",
    "svg.hashsalt": "socibrain",
    "svg.id": None,
    "font.family": "DejaVu Sans",
    "font.size": 10,
    "text.parse_math": False,
    "text.color": INK,
    "axes.edgecolor": LINE,
    "axes.labelcolor": INK,
    "axes.facecolor": "none",
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.unicode_minus": True,
    "axes.labelsize": 10,
    "xtick.color": LINE,
    "ytick.color": LINE,
    "xtick.labelcolor": SOFT,
    "ytick.labelcolor": SOFT,
    "xtick.labelsize": 9,
    "ytick.labelsize": 9,
    "figure.facecolor": PAPER,
    "savefig.facecolor": PAPER,
    "figure.dpi": 72,
    "savefig.dpi": 72,
}


@dataclass(frozen=True)
class Drawing:
    """A figure with the sentence that stands for it where it cannot be seen."""

    figure: Figure
    alternative: str


@contextmanager
def our_look() -> Iterator[None]:
    """Draw with our settings whatever the user's own are."""
    with context(["default", SETTINGS]):
        yield


def blank(width: float, height: float) -> tuple[Figure, Axes]:
    """An empty figure of that many inches with one set of axes."""
    figure = Figure(figsize=(width, height), layout="constrained")
    return figure, figure.add_subplot()


def as_png(drawing: Drawing, dots_per_inch: int) -> bytes:
    """The drawing on paper colour, as a picture file."""
    FigureCanvasAgg(drawing.figure)
    buffer = io.BytesIO()
    with our_look():
        drawing.figure.savefig(buffer, format="png", dpi=dots_per_inch, metadata={"Software": None})
    return buffer.getvalue()


def as_svg(drawing: Drawing, name: str) -> str:
    """The drawing as an inline SVG element whose colours follow the page.

    Ids are made unique by ``name``; the same drawing gives the same text.
    """
    FigureCanvasSVG(drawing.figure)
    buffer = io.StringIO()
    nothing = dict.fromkeys(("Creator", "Date", "Format", "Type"))
    with our_look():
        drawing.figure.savefig(buffer, format="svg", metadata=nothing)
    text = buffer.getvalue()
    text = text[text.index("<svg") :]
    text = re.sub(r"<metadata>.*?</metadata>\s*", "", text, flags=re.S)
    text = re.sub(r"<style[^>]*>.*?</style>", "", text, flags=re.S)
    box = re.search(r'viewBox="([^"]+)"', text)
    assert box, "a drawing has a viewBox"
    opening = f'<svg viewBox="{box[1]}" role="img" aria-labelledby="{name}-says"><title id="{name}-says">'
    text = re.sub(r"<svg[^>]*>", lambda _: f"{opening}{_escape(drawing.alternative)}</title>", text, count=1)
    text = text.replace("xlink:href=", "href=")
    linked = set(re.findall(r'(?:url\(|href=")#([^)"]+)', text))
    text = re.sub(r'\s+id="([^"]+)"', lambda found: _named(found, name, linked), text)
    text = re.sub(r"(url\(|href=\")#", rf"\1#{name}-", text)
    text = re.sub(r"'DejaVu Sans'(, [^;\"]*)?", "var(--face)", text)
    for number, colour in enumerate(AT_NIGHT):
        text = re.sub(colour, f"var(--c{number})", text, flags=re.I)
    return re.sub(r"\n\s*", "\n", text).strip()


def colour_variables(*, night: bool) -> str:
    """CSS custom properties of every colour that drawings use.

    >>> colour_variables(night=False).split(";")[0]
    '--c0: #23303a'
    """
    pairs = AT_NIGHT.items() if night else ((colour, colour) for colour in AT_NIGHT)
    return "; ".join(f"--c{number}: {shown}" for number, (_, shown) in enumerate(pairs))


def _named(found: re.Match[str], name: str, linked: set[str]) -> str:
    if found[1] == f"{name}-says":
        return found[0]
    return f' id="{name}-{found[1]}"' if found[1] in linked else ""


def _escape(text: str) -> str:
    return text.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
