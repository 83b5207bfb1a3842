"""Contact presets: what commonly touches a sensor, as ordinary covers a user could write out.

The room promises :data:`BUILT_IN`, the presets in the order they are listed, and :class:`Touching`, what a further one
(from a plugin) must be.
"""

from __future__ import annotations

from outcouple.touching.base import Touching
from outcouple.touching.clear import Droplets, Dry, Immersed, Patches, ResidualFilm
from outcouple.touching.liquids import Bubbles, Condensate, Foam, Milky, OilSmear, Wall
from outcouple.touching.skin import ChildFinger, Fingertip, GreasyFinger, Palm, WetFinger
from outcouple.touching.solids import Cloth, Deposit, ElastomerTip, Gasket, Glove, Ice, Ink, Label, Scratch

__all__ = ["BUILT_IN", "Touching"]

BUILT_IN: tuple[type[Touching], ...] = (
    Dry,
    Immersed,
    ResidualFilm,
    Droplets,
    Condensate,
    Foam,
    Bubbles,
    Milky,
    Wall,
    OilSmear,
    Deposit,
    Ice,
    Scratch,
    Ink,
    Label,
    Gasket,
    Fingertip,
    WetFinger,
    GreasyFinger,
    ChildFinger,
    Palm,
    Glove,
    ElastomerTip,
    Cloth,
    Patches,
)
