"""Light to electrons: detectors, amplifiers, converters, cameras, ambient light and drift.

The physics modules are plain functions on arrays over samples and channels and know no optics; ``settings`` holds the
design file's section and ``chain`` joins the two.
"""
