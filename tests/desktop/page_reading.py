"""Reading a printed page back: its signs with their boxes, and what stands where."""

from __future__ import annotations

import unicodedata
from dataclasses import dataclass

import pymupdf


@dataclass(frozen=True)
class Sign:
    """A letter, digit or mark with its box in points."""

    left: float
    top: float
    right: float
    bottom: float
    text: str

    def overlap(self, other: Sign) -> tuple[float, float]:
        """Width and height of what both boxes cover."""
        wide = min(self.right, other.right) - max(self.left, other.left)
        high = min(self.bottom, other.bottom) - max(self.top, other.top)
        return max(0.0, wide), max(0.0, high)


def signs_of(content: bytes) -> tuple[list[Sign], pymupdf.Rect]:
    """Every sign of the only page, and the page's box."""
    spans, box = _spans(content)
    signs = [Sign(*sign["bbox"], sign["c"]) for span in spans for sign in span["chars"]]
    return [sign for sign in signs if sign.text.strip() and sign.right > sign.left], box


def sizes_of(content: bytes) -> set[float]:
    """Every type size on the page."""
    spans, _ = _spans(content)
    return {round(s["size"], 2) for s in spans if any(sign["c"].strip() for sign in s["chars"])}


def _spans(content: bytes) -> tuple[list[dict], pymupdf.Rect]:
    with pymupdf.open(stream=content, filetype="pdf") as document:
        assert document.page_count == 1
        page = document[0]
        blocks = page.get_text("rawdict")["blocks"]
        lines = [line for block in blocks for line in block.get("lines", ())]
        return [span for line in lines for span in line["spans"]], page.rect


def text_of(content: bytes) -> str:
    """The words of the page in reading order, single spaces between them."""
    with pymupdf.open(stream=content, filetype="pdf") as document:
        return " ".join(document[0].get_text().split())


def letters(text: str) -> str:
    """The letters and digits of `text` in any order of writing, shaped Arabic taken back to plain letters."""
    plain = unicodedata.normalize("NFKC", text)
    return "".join(sorted(c for c in plain if unicodedata.category(c)[0] in "LN"))


def overlapping(signs: list[Sign], slack: float) -> list[tuple[str, str]]:
    """Pairs of signs whose boxes share more than `slack` points of height and a third of a width.

    Less is what fonts do themselves: kerning pulls "To" together.
    """
    found = []
    ordered = sorted(signs, key=lambda s: s.top)
    for at, one in enumerate(ordered):
        for other in ordered[at + 1 :]:
            if other.top > one.bottom - slack:
                break
            wide, high = one.overlap(other)
            if high > slack and wide > min(one.right - one.left, other.right - other.left) / 3:
                found.append((one.text, other.text))
    return found
