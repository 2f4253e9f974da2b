"""What exporting says."""

from __future__ import annotations

from desktop import messages

EXPORT = "Export"
FORMS = {  # what the dialog offers, and the suffix each stands for
    "Workbook: plan, crews, lines, near-best crews (*.xlsx)": ".xlsx",
    "Crews as a text table (*.csv)": ".csv",
    "Integer program (*.lp)": ".lp",
    "Integer program (*.mps)": ".mps",
}
STEM = "plan"
EXPORTED = "Exported as {name}."
WAITING = "Working out the near-best crews for {name}; it is written when they are there."
NOT_WRITTEN = messages.NOT_WRITTEN
NO_PLAN = "The plan has nothing to be answered yet, or entries that must be mended first."
NO_ANSWER = (
    "There is no answer yet to the plan as it stands. "
    "The integer program (.lp, .mps) can be exported without one."
)
CHANGED = "{name} was not written: the plan was changed meanwhile. Export it again."
