"""Units of everything that a user reads or writes; SI inside."""

from optimiser.quantities.amounts import (
    Limit,
    Quantity,
    Setting,
    from_shown,
    number_text,
    shown_unit,
    to_shown,
    unit_scale,
)
from optimiser.quantities.dimensions import DIMENSIONS, Dimension
from optimiser.quantities.nearest import nearest_name
from optimiser.quantities.reading import (
    Money,
    UnitProblem,
    dimension_of,
    parse_limit,
    parse_quantity,
    parse_setting,
)
from optimiser.quantities.units import CURRENCIES, Unit, UnknownUnit, parse_unit

__all__ = [
    "CURRENCIES",
    "DIMENSIONS",
    "Dimension",
    "Limit",
    "Money",
    "Quantity",
    "Setting",
    "Unit",
    "UnitProblem",
    "UnknownUnit",
    "dimension_of",
    "from_shown",
    "nearest_name",
    "number_text",
    "parse_limit",
    "parse_quantity",
    "parse_setting",
    "parse_unit",
    "shown_unit",
    "to_shown",
    "unit_scale",
]
