"""`python -m solver VERB PLAN ...`: answers in text for people, in JSON for machines."""

from __future__ import annotations

import sys

from solver.commands import main

if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
