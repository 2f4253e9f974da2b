"""The printed recommendation: one page, the same on paper, in a PDF file and in the preview."""

from desktop.page.asking import NoAnswer
from desktop.page.compose import Details, recommend
from desktop.page.layout import PageTooFull, Sheet, lay_out
from desktop.page.paper import PaperSize, paper
from desktop.page.pdf import page_bytes, paint_on, paint_page, save_page, write_page
from desktop.page.recommendation import Recommendation, Stamp
from desktop.page.stamp import stamp

__all__ = [
    "Details",
    "NoAnswer",
    "PageTooFull",
    "PaperSize",
    "Recommendation",
    "Sheet",
    "Stamp",
    "lay_out",
    "page_bytes",
    "paint_on",
    "paint_page",
    "paper",
    "recommend",
    "save_page",
    "stamp",
    "write_page",
]
