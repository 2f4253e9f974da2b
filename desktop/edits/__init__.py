"""Changes of a plan as functions from plan to plan; no Qt, nothing but the change itself."""
