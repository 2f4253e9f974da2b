"""One adapter per grid of the plan page; columns are data."""
