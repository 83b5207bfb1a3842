"""Outcomes for people: text now, pictures and pages beside it. Draws an Outcome, computes nothing."""
