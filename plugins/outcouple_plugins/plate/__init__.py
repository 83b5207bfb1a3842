"""Optics of plates lit at their edges, shared by the plate geometries.

The room promises how light enters and leaves through an edge (``edge``: :class:`Port`), the fan it makes inside
(``fan``: :class:`Fan`), the straight ways across the plate with their mirror images (``ways``), and the sections every
plate's design file has (``parameters``). It knows no read-out.
"""
