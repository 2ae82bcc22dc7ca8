"""What a rule file may say. Anything else is an error; every number has a unit and the clause that gives it.

The models hold what is written. Values become SI in the loader.
"""

from __future__ import annotations

from typing import Annotated, Any, ClassVar

from pydantic import BaseModel, ConfigDict, Field, model_validator
from pydantic_core import PydanticCustomError

from ifcaudit.errors import QuantityError
from ifcaudit.model.loads import LoadCase
from ifcaudit.model.material import MaterialFamily
from ifcaudit.units import factor

UNIT_EXAMPLES = {
    "pressure": "psf, ksi, kPa, MPa, kN/m2",
    "density": "pcf, kg/m3",
    "length": "ft, in, m, mm",
    "area": "ft2, m2",
    "ratio": "ratio",
}
CASES_BY_SYMBOL: dict[str, tuple[LoadCase, ...]] = {
    "D": (LoadCase.DEAD,),
    "L": (LoadCase.LIVE, LoadCase.LIVE_UNREDUCED),
    "Lr": (LoadCase.ROOF_LIVE,),
    "S": (LoadCase.SNOW,),
}
"""A factor on L counts for every live load, reducible or not."""

Text = Annotated[str, Field(min_length=1)]
Words = list[Annotated[str, Field(min_length=2)]]
Number = Annotated[float, Field(ge=0.0, allow_inf_nan=False)]


class Strict(BaseModel):
    """Base of every model: no unknown keys, no silent conversions."""

    model_config = ConfigDict(extra="forbid", strict=True, frozen=True)


class Quantity(Strict):
    """A number as written: value, unit, clause."""

    DIMENSION: ClassVar[str] = "ratio"

    value: Number
    unit: Text
    clause: Text

    @model_validator(mode="after")
    def _unit_fits(self) -> Quantity:
        check_unit(self.unit, self.DIMENSION)
        return self

    @property
    def in_si(self) -> float:
        """The value in SI."""
        return self.value * unit_factor(self.unit, self.DIMENSION)

    @property
    def text(self) -> str:
        """The value as written, with its unit; a ratio without one."""
        return f"{self.value:g}" if self.unit == "ratio" else f"{self.value:g} {self.unit}"


class Ratio(Quantity):
    """A pure number; its unit is written ``ratio``."""


class Pressure(Quantity):
    """A load per area, or a stress."""

    DIMENSION = "pressure"


class Density(Quantity):
    """A mass per volume."""

    DIMENSION = "density"


class Length(Quantity):
    """A length."""

    DIMENSION = "length"


class Area(Quantity):
    """An area."""

    DIMENSION = "area"


def unit_factor(unit: str, dimension: str) -> float:
    """Factor from a unit to SI; the unit of a ratio is the word ``ratio``."""
    return 1.0 if dimension == "ratio" else factor(unit, dimension)


def check_unit(unit: str, dimension: str) -> None:
    """Raise the error a person can act on where a unit does not measure the dimension."""
    allowed = (
        f"a unit of {dimension}, such as {UNIT_EXAMPLES[dimension]}" if dimension != "ratio" else 'the word "ratio"'
    )
    problem = PydanticCustomError("unit", "{found};{allowed}", {"found": f'the unit "{unit}"', "allowed": allowed})
    if (unit == "ratio") is not (dimension == "ratio"):
        raise problem
    try:
        unit_factor(unit, dimension)
    except QuantityError:
        raise problem from None


class Load(Strict):
    """An area load: either the name of an occupancy, or value, unit and clause."""

    occupancy: Text | None = None
    value: Number | None = None
    unit: Text | None = None
    clause: Text | None = None

    @model_validator(mode="after")
    def _one_of_both(self) -> Load:
        given = [name for name in ("value", "unit", "clause") if getattr(self, name) is not None]
        if (self.occupancy is None) is (len(given) < 3) or (self.occupancy is not None and given):
            found = ", ".join([*(["occupancy"] if self.occupancy is not None else []), *given]) or "nothing"
            allowed = "either occupancy alone, or value, unit and clause"
            raise PydanticCustomError("load", "{found};{allowed}", {"found": found, "allowed": allowed})
        if self.unit is not None:
            check_unit(self.unit, "pressure")
        return self


class Files(Strict):
    """Other rule files by name, or by path from the file that names them."""

    combinations: Text
    materials: Text
    occupancies: Text
    sections: Annotated[list[Text], Field(min_length=1)]


class Loads(Strict):
    """Area loads where the model says nothing."""

    floor_live: Load
    partitions: Load
    partitions_not_required_from: Pressure
    superimposed_dead: Load
    roof_live: Load
    roof_superimposed_dead: Load
    snow: Load
    slab_weight_default: Density


class Reduction(Strict):
    """Floor live-load reduction."""

    enabled: bool
    clause: Text
    element_factor: Ratio
    constant: Ratio
    area_coefficient: Length
    least_influence_area: Area
    least_ratio_one_floor: Ratio
    live_load_limit: Pressure


class Divisor(Ratio):
    """Span divided by this is the limit; zero would be no limit at all."""

    value: Annotated[float, Field(gt=0.0, allow_inf_nan=False)]


class Share(Ratio):
    """A part of a whole."""

    value: Annotated[float, Field(ge=0.0, le=1.0)]


class Deflection(Strict):
    """Deflection limits."""

    floor_live_divisor: Divisor
    floor_total_divisor: Divisor
    roof_live_divisor: Divisor
    roof_total_divisor: Divisor
    steel_dead_share: Share


class ResistanceFactor(Ratio):
    """A factor that multiplies a nominal strength."""

    value: Annotated[float, Field(gt=0.0, le=1.0)]


class StandardFile(Strict):
    """``rules/standards/*.toml``: a rule set."""

    title: Text
    editions: Annotated[list[Text], Field(min_length=1)]
    steel_method: Text
    files: Files
    loads: Loads
    reduction: Reduction
    deflection: Deflection
    resistance_factors: dict[Text, ResistanceFactor]


class Occupancy(Pressure):
    """A live load by the use of the floor."""

    reducible: bool


class OccupancyFile(Strict):
    """``rules/occupancies/*.toml``."""

    title: Text
    occupancies: dict[Text, Occupancy]


class Combination(Strict):
    """Factors by the symbol of the load case."""

    name: Text
    factors: Annotated[dict[str, Number], Field(min_length=1)]
    clause: Text

    @model_validator(mode="after")
    def _known_cases(self) -> Combination:
        unknown = [symbol for symbol in self.factors if symbol not in CASES_BY_SYMBOL]
        if unknown:
            found = "a factor on " + ", ".join(unknown)
            allowed = "factors on " + ", ".join(CASES_BY_SYMBOL)
            raise PydanticCustomError("cases", "{found};{allowed}", {"found": found, "allowed": allowed})
        return self


class CombinationFile(Strict):
    """``rules/combinations/*.toml``."""

    title: Text
    combinations: Annotated[list[Combination], Field(min_length=1)]


class Steel(Strict):
    """What all structural steels share."""

    modulus_of_elasticity: Pressure
    shear_modulus: Pressure
    density: Density


class Grade(Strict):
    """A steel grade."""

    aliases: list[Text] = []
    yield_strength: Pressure
    ultimate_strength: Pressure


class DefaultGrade(Strict):
    """The grade assumed for a section series."""

    grade: Text
    clause: Text


class WordDensity(Density):
    """A density with the words that name its material."""

    words: Words


class OneWay(Strict):
    """Words of slabs that span one way."""

    words: Words


class MaterialFile(Strict):
    """``rules/materials/*.toml``."""

    title: Text
    steel: Steel
    default_grades: dict[Text, DefaultGrade]
    grades: Annotated[dict[Text, Grade], Field(min_length=1)]
    family_words: dict[str, Words]
    one_way: OneWay
    densities: dict[Text, WordDensity]

    @model_validator(mode="after")
    def _names_agree(self) -> MaterialFile:
        for series, default in self.default_grades.items():
            if default.grade not in self.grades:
                _disagree(f'default_grades."{series}" names {default.grade}', "grades of this file", self.grades)
        families = [family.value for family in MaterialFamily]
        for family in self.family_words:
            if family not in families:
                _disagree(f"family_words.{family}", "families", families)
        if "*" not in self.default_grades:
            _disagree("no default_grades.*", "a grade for every other section", ["*"])
        return self


def _disagree(found: str, what: str, allowed: Any) -> None:
    raise PydanticCustomError(
        "names", "{found};{allowed}", {"found": found, "allowed": f"{what}: " + ", ".join(allowed)}
    )
