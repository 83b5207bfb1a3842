"""Readings to verdicts: levels, error rates, failure directions, cautions.

The statistics are plain functions on arrays; ``settings`` holds the design file's section and ``decide`` joins the two.
"""
