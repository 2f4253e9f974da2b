"""Whole crews for a workload: the plan, the mathematics, the proof. Knows no Qt."""
