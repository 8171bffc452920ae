"""A drawing that stands alone: outside its page, in a folder or inside a PDF.

A page's drawing takes its pens from two style sheets, by custom properties. Viewers and printers of
SVG files know neither, so the rules that a drawing uses are written into it with the colours of
print, and letters of other scripts are given the font that has them. Some of them paint the white
edge of letters over their neighbours; words with such an edge get a white ground instead.
"""

from __future__ import annotations

import re
from functools import cache, partial
from html import unescape
from pathlib import Path
from typing import Final

from structures.drawing.letters import SCRIPTS
from structures.drawing.places import Label
from structures.drawing.written import ATTRIBUTE, WORDS, anchor_of, size_mm

STYLES: Final = Path(__file__).resolve().parents[1] / "static" / "underbund"
LATIN_FONT: Final = "Noto Sans"
GROUND_OPACITY: Final = 0.85  # lets a line show through, so that it is seen to go on
COMMENT: Final = re.compile(r"/\*.*?\*/", re.DOTALL)
PROPERTY: Final = re.compile(r"(--[a-z0-9-]+)\s*:\s*([^;]+);")
DECLARATION: Final = re.compile(r"([a-z-]+)\s*:\s*([^;]+?)\s*(?:;|$)")
USE: Final = re.compile(r"var\((--[a-z0-9-]+)\)")
ROOT: Final = re.compile(r":root\s*\{([^}]*)\}")
RULE: Final = re.compile(r"(?<![\w@])(\.dw[^{}@]*)\{([^}]*)\}")
CLASSES: Final = re.compile(r'class="([^"]*)"')
CLASS: Final = re.compile(r"\.([a-z][a-z0-9-]*)")
# Rules of size and place belong to the page that a drawing stands in.
OF_THE_PAGE: Final = ("display", "max-width", "height", "font-family", "font-variant-numeric")


def standalone(markup: str) -> str:
    """Give the SVG file of a drawing, styles and colours written in.

    Parameters
    ----------
    markup
        A drawing as it is made for a page.
    """
    used = {name for group in CLASSES.findall(markup) for name in group.split()} | {"fill-paper"}
    rules = "".join(
        f"{selector}{{{body}}}"
        for selector, body in _rules()
        if set(CLASS.findall(selector)) <= used
    )
    style = f"<style>.dw text{{font-family:'{LATIN_FONT}',sans-serif}}{rules}</style>"
    paper = '<rect class="fill-paper" width="100%" height="100%"/>'
    head, rest = markup.split("</defs>", 1)
    body = WORDS.sub(partial(_words, narrow="dw-narrow" in used), rest)
    styled = f"{head}</defs>{style}{paper}{body}"
    return f'<?xml version="1.0" encoding="UTF-8"?>\n{styled}\n'


def _words(match: re.Match[str], *, narrow: bool) -> str:
    """Write one text: on a white ground where it had a white edge, each script in its font."""
    start, words, stop = match.groups()
    ground = ""
    given = dict(ATTRIBUTE.findall(start))
    css = given.get("class", "").split()
    if "halo" in css:
        start = start.replace(given["class"], " ".join(name for name in css if name != "halo"))
        ground = _white_ground(given, unescape(words), narrow=narrow)
    for letters, font in SCRIPTS:
        words = letters.sub(
            lambda run, font=font: f'<tspan font-family="{font}">{run[0]}</tspan>', words
        )
    return f"{ground}{start}{words}{stop}"


def _white_ground(given: dict[str, str], words: str, *, narrow: bool) -> str:
    css = given["class"].split()
    size = size_mm(css, narrow=narrow)
    place = float(given["x"]), float(given["y"])
    box = Label(*place, (words,), anchor_of(css), "strong" in css).box(size, size)
    turn = f' transform="{given["transform"]}"' if "transform" in given else ""
    return (
        f'<rect class="fill-paper" fill-opacity="{GROUND_OPACITY:g}" x="{box.left:.2f}"'
        f' y="{box.top:.2f}" width="{box.right - box.left:.2f}"'
        f' height="{box.bottom - box.top:.2f}"{turn}/>'
    )


@cache
def _print_tokens() -> dict[str, str]:
    """Give colours of print: those of the light page, and what print changes of them."""
    text = COMMENT.sub("", (STYLES / "tokens.css").read_text(encoding="utf-8"))
    before, _, after = text.partition("@media print")
    light = ROOT.search(before)
    printed = ROOT.search(after)
    if light is None or printed is None:
        raise ValueError("tokens.css names no colours for screen and print")
    return dict(PROPERTY.findall(light[1])) | dict(PROPERTY.findall(printed[1]))


@cache
def _rules() -> tuple[tuple[str, str], ...]:
    """Give selector and resolved body of every rule that draws."""
    text = COMMENT.sub("", (STYLES / "drawing.css").read_text(encoding="utf-8"))
    tokens = _print_tokens()
    rules = []
    for selectors, body in RULE.findall(_outside_blocks(text)):
        kept = [
            f"{name}:{USE.sub(lambda use: tokens[use[1]], value)}"
            for name, value in DECLARATION.findall(body)
            if name not in OF_THE_PAGE
        ]
        if kept:
            rules += [(one.strip(), ";".join(kept)) for one in selectors.split(",")]
    return tuple(rules)


def _outside_blocks(text: str) -> str:
    """Leave out blocks that begin with @: they speak of screens, not of pens."""
    kept, depth, at_block = [], 0, False
    for piece in re.split(r"([{}])", text):
        if piece == "{":
            depth += 1
        if not at_block and depth == 0 and "@" in piece:
            at_block = True
        if not at_block:
            kept.append(piece)
        if piece == "}":
            depth -= 1
            at_block = at_block and depth > 0
    return "".join(kept)
