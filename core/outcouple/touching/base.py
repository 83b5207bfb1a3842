"""What a contact preset is: a few numbers a person knows, and the cover they stand for."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, ClassVar

from outcouple.contact.cover import Cover
from outcouple.fields import Section
from outcouple.notes import Note

__all__ = ["Touching"]


class Touching(Section):
    """A contact preset. Its fields are the keys of a state's ``touching`` table.

    A preset is an ordinary cover that a user could write out as patches; it only saves the writing. One whose numbers
    are known as a range gives three covers, "low", "mid" and "high" (by how much light it takes); one without gives a
    single cover under "".
    """

    what: ClassVar[str]
    """Name in a design file, lower case with hyphens."""
    summary: ClassVar[str]
    """One line for ``outcouple list touching``."""
    kind: ClassVar[str] = "any"
    """"whole": covers a face all over; "object": lies on a spot of given size; "any": either."""

    @classmethod
    def build(cls, p: Any) -> Mapping[str, Cover]:
        """The covers for parameters ``p`` (every float leaf a float or an array over samples)."""
        raise NotImplementedError

    @classmethod
    def notes(cls, p: Any) -> tuple[Note, ...]:
        """Cautions of the preset's own."""
        return ()
