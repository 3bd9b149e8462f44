"""A waste container: how full, what may join it, and the label it wears.

A container takes acid COD digest only (bases, cyanide, sulfide, metal and
organics react with it). How full it may become is a setting; leaving about a
tenth of it empty is common practice. 80 % full reminds, the limit stops.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date
from typing import Literal

from app.errors import InputError
from app.safety.waste import Characteristic, Totals

COD_DIGEST = "acid COD digest"
CONTENTS = "Spent COD digest: sulfuric acid, chromium(VI), mercury, silver"
HAZARDS = ("corrosive", "toxic", "oxidiser", "toxic to aquatic life")

State = Literal["in use", "closed", "picked up"]


@dataclass(frozen=True)
class Container:
    """A waste container as it stands now.

    Parameters
    ----------
    name : str
        Its id on the label.
    capacity_ml, filled_ml : float
        Volumes.
    contents : str
        The one stream it takes.
    state : {"in use", "closed", "picked up"}
        "in use" is the only state that takes waste; between uses its lid is on.
    """

    name: str
    capacity_ml: float
    filled_ml: float = 0.0
    contents: str = COD_DIGEST
    state: State = "in use"

    def __post_init__(self) -> None:
        """Refuse volumes that cannot be."""
        if not self.capacity_ml > 0:
            raise InputError("A container needs a capacity.", {"capacity_ml": ["must be above 0"]})
        if not self.filled_ml >= 0:
            raise InputError(
                "A container cannot be filled below nothing.", {"filled_ml": ["must be 0 or more"]}
            )

    @property
    def share(self) -> float:
        """Filled share of the capacity, 0 to 1."""
        return self.filled_ml / self.capacity_ml


@dataclass(frozen=True)
class Room:
    """Whether a container takes the waste of a run.

    Parameters
    ----------
    blocked : bool
        It does not.
    why : tuple of str
        What stands against it.
    reminders : tuple of str
        What to think of although it does.
    share_after : float
        Filled share afterwards.
    """

    blocked: bool
    why: tuple[str, ...]
    reminders: tuple[str, ...]
    share_after: float


def room_for(
    container: Container,
    volume_ml: float,
    contents: str = COD_DIGEST,
    *,
    fill_limit: float = 0.9,
    remind_at: float = 0.8,
) -> Room:
    """Say whether a container may take a volume of a stream.

    Parameters
    ----------
    container : Container
        As it stands.
    volume_ml : float
        What would be added.
    contents : str
        The stream that would be added.
    fill_limit, remind_at : float
        Shares of the capacity that stop and that remind; settings.

    Returns
    -------
    Room
    """
    after = (container.filled_ml + volume_ml) / container.capacity_ml
    why = []
    if container.state != "in use":
        why.append(f"container {container.name} is {container.state}: choose one in use")
    if container.contents != contents:
        why.append(f"container {container.name} holds {container.contents}, not {contents}: they may react")
    if after > fill_limit + 1e-9:
        why.append(
            f"container {container.name} would be {100 * after:.0f} % full, above {100 * fill_limit:.0f} %"
        )
    reminders = (
        () if after < remind_at or why else (f"container {container.name} will be {100 * after:.0f} % full",)
    )
    return Room(bool(why), tuple(why), reminders, after)


@dataclass(frozen=True)
class Label:
    """The words of a container's label.

    Parameters
    ----------
    title : str
        "Hazardous Waste".
    contents : str
        In words.
    hazards : tuple of str
        In words; pictograms are added by the printed form.
    codes : tuple of str
        Codes of 40 CFR 261 that shipment needs.
    generator, container : str
        Who, and which one.
    started : datetime.date or None
        First day of central accumulation; None at the point of generation.
    note : str
        Who decides.
    """

    title: str
    contents: str
    hazards: tuple[str, ...]
    codes: tuple[str, ...]
    generator: str
    container: str
    started: date | None
    note: str


def label(
    container: Container, codes: Sequence[Characteristic], generator: str, started: date | None = None
) -> Label:
    """Return the words of a container's label.

    Parameters
    ----------
    container : Container
        Which one.
    codes : sequence of Characteristic
        From :func:`app.safety.waste.waste_codes`.
    generator : str
        Name, address and site id.
    started : datetime.date, optional
        First day of central accumulation.

    Returns
    -------
    Label

    References
    ----------
    40 CFR 262.15(a)(5) and 262.17(a)(5): the words, a hazard indication, the date.
    """
    contents = CONTENTS if container.contents == COD_DIGEST else container.contents
    return Label(
        "Hazardous Waste",
        contents,
        HAZARDS,
        tuple(c.code for c in codes),
        generator,
        container.name,
        started,
        "Acid-resistant plastic or glass, vented cap, lid on between uses. State and local rules decide.",
    )


def fill(container: Container, waste: Totals) -> Container:
    """Return the container after a run's waste has joined it; the caller asks :func:`room_for` first."""
    return Container(
        container.name,
        container.capacity_ml,
        container.filled_ml + waste.volume_ml,
        container.contents,
        container.state,
    )
