"""Cushions: catalogue materials, and the stacks that are cut from them."""

from __future__ import annotations

from dataclasses import dataclass, field

from matchup.errors import Element
from matchup.model.cost import Amount
from matchup.model.rules import Rules

WEAR_STATES = ("new", "worn")
CUSHION_USES = ("hammer", "pile", "both")


@dataclass(frozen=True, slots=True)
class CushionMaterial:
    """A row of the cushion catalogue.

    Parameters
    ----------
    name : str
    use : str
        ``hammer``, ``pile`` or ``both``.
    modulus : float
        Modulus in compression when new. [Pa]
    restitution : float
        Coefficient of restitution when new, in (0, 1]. [-]
    sheet : float or None
        Thickness of one sheet when new; None for a material cut to any thickness. [m]
    worn_modulus, worn_restitution : float or None
        The same when worn; None where wear does not change it. [Pa], [-]
    worn_thickness : float
        Thickness when worn over thickness when new, in (0, 1]. [-]
    new_for, life : float or None
        Blows after which the cushion counts as worn, and after which it is replaced. [-]
    price : Amount or None
        Money for one sheet, or for a whole cushion of a material that comes in none.
    source : str
        Where the numbers come from.
    extra : dict
        Catalogue columns that the program does not use, as typed.
    """

    name: str
    use: str
    modulus: float
    restitution: float
    sheet: float | None = None
    worn_modulus: float | None = None
    worn_thickness: float = 1.0
    worn_restitution: float | None = None
    new_for: float | None = None
    life: float | None = None
    price: Amount | None = None
    source: str = ""
    extra: dict[str, str] = field(default_factory=dict, compare=False)

    def __post_init__(self) -> None:
        rules = Rules(f"cushion {self.name!r}")
        rules.must(bool(self.name.strip()), "name", "must not be empty", self.name)
        rules.one_of("use", self.use, CUSHION_USES)
        rules.positive("modulus", self.modulus, "modulus")
        rules.fraction("restitution", self.restitution)
        rules.positive("sheet", self.sheet, "thickness")
        rules.positive("worn_modulus", self.worn_modulus, "modulus")
        rules.fraction("worn_thickness", self.worn_thickness)
        rules.fraction("worn_restitution", self.worn_restitution)
        rules.positive("new_for", self.new_for)
        rules.positive("life", self.life)
        rules.not_negative("price", None if self.price is None else self.price.value)
        if self.life and self.new_for:
            rules.must(not self.life < self.new_for, "life", "must be >= `new_for`", self.life)
        rules.close()


@dataclass(frozen=True, slots=True)
class Spring:
    """A cushion as the wave solver sees it.

    Parameters
    ----------
    stiffness : float
        On first loading. [N/m]
    restitution : float
        Coefficient of restitution: unloading runs along ``stiffness / restitution**2``. [-]
    """

    stiffness: float
    restitution: float

    def __post_init__(self) -> None:
        rules = Rules("cushion spring")
        rules.positive("stiffness", self.stiffness, "stiffness")
        rules.fraction("restitution", self.restitution)
        rules.close()


@dataclass(frozen=True, slots=True)
class Cushion:
    """One pile cushion: a material, its thickness and its area.

    Parameters
    ----------
    material : CushionMaterial
    thickness : float
        When new. [m]
    area : float
        Area that carries the blow. [m2]
    sheets : int or None
        Number of sheets where the material comes in sheets.
    """

    material: CushionMaterial
    thickness: float
    area: float
    sheets: int | None = None

    def spring(self, wear: str) -> Spring:
        """Return stiffness and restitution in the wear state ``new`` or ``worn``."""
        material = self.material
        if wear == "new":
            return Spring(material.modulus * self.area / self.thickness, material.restitution)
        modulus = material.worn_modulus or material.modulus
        thickness = self.thickness * material.worn_thickness
        restitution = material.worn_restitution or material.restitution
        return Spring(modulus * self.area / thickness, restitution)


@dataclass(frozen=True, slots=True)
class HammerCushion:
    """A hammer cushion offered as an alternative to the catalogue's.

    Parameters
    ----------
    text : str
        In words, for the output.
    spring : Spring
    """

    text: str
    spring: Spring


@dataclass(frozen=True, slots=True)
class Stack:
    """All that lies between ram and pile but the helmet.

    Parameters
    ----------
    pile : Cushion or None
        None for a helmet that sits on the pile.
    hammer : HammerCushion or None
        None for the hammer's own.
    """

    pile: Cushion | None = None
    hammer: HammerCushion | None = None


@dataclass(frozen=True, slots=True)
class CushionSpace:
    """Every pile cushion that the job allows.

    Parameters
    ----------
    materials : tuple of CushionMaterial
    sheets : tuple of int
        Allowed sheet counts, ascending; empty where `thicknesses` is given.
    thicknesses : tuple of float
        Allowed thicknesses, ascending; empty where `sheets` is given. [m]
    area : float
        Area that carries the blow. [m2]
    wears : tuple of str
        Wear states that a plan must stand: ``new``, ``worn`` or both.
    """

    materials: tuple[CushionMaterial, ...]
    sheets: tuple[int, ...]
    thicknesses: tuple[float, ...]
    area: float
    wears: tuple[str, ...] = WEAR_STATES

    def __post_init__(self) -> None:
        rules = Rules("pile cushion")
        rules.must(bool(self.materials), "materials", "must name at least one cushion", "")
        given = bool(self.sheets or self.thicknesses)
        rules.must(given, "sheets", "must be given, or `thickness`", "")
        both = bool(self.sheets and self.thicknesses)
        must = "must not be given together with `thickness`"
        rules.must(not both, "sheets", must, list(self.sheets))
        for sheets in self.sheets:
            rules.must(sheets >= 1, "sheets", "must be >= 1", sheets)
        for thickness in self.thicknesses:
            rules.positive("thickness", thickness, "thickness")
        rules.positive("area", self.area, "area")
        rules.must(bool(self.wears), "wear", "must name at least one state: new, worn", "")
        for wear in self.wears:
            rules.one_of("wear", wear, WEAR_STATES)
        for material in self.materials:
            rules.must(
                material.use in ("pile", "both"),
                "materials",
                "must be cushions whose `use` is pile or both",
                Element(f"{material.name}, whose use is {material.use}"),
            )
            rules.must(
                not self.sheets or material.sheet is not None or material.use == "hammer",
                "materials",
                "must be cushions with a `sheet` thickness where `sheets` are counted",
                Element(f"{material.name}, which has none"),
                do="Give `thickness` in place of `sheets`, or the sheet in the catalogue.",
            )
        rules.close()

    def holding(self, cushion: Cushion) -> CushionSpace:
        """Return the space with this one cushion."""
        sheets = () if cushion.sheets is None else (cushion.sheets,)
        thicknesses = (cushion.thickness,) if cushion.sheets is None else ()
        return CushionSpace((cushion.material,), sheets, thicknesses, cushion.area, self.wears)

    def cushions(self) -> list[Cushion]:
        """Return every cushion of the space: by material, thin to thick."""
        made = []
        for material in self.materials:
            for sheets in self.sheets:
                assert material.sheet is not None
                made.append(Cushion(material, sheets * material.sheet, self.area, sheets))
            for thickness in self.thicknesses:
                made.append(Cushion(material, thickness, self.area))
        return made
