"""What lies on a face and how the face answers light from inside the guide; knows no sensor.

The room promises :class:`~outcouple.contact.cover.Cover` with its patches, films and drops (plain data),
:func:`~outcouple.contact.response.answer` (a cover's reflectance, transmittance and diffuse return at given angles) and
:class:`~outcouple.contact.media.Media` (indices under one state's conditions). Around them stand the models that
dimensions and presets draw on: `mechanics` (how much of a footprint touches), `wetting` and `film_dynamics` (where
liquid goes and how fast), `diffuse` (light sent back by turbid media, floors and foam), `droplet` (what drops return,
from the table that `droptable` makes by `droptrace`).
"""
