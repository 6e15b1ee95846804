"""Numbers as users write them, values of every dimension, and cases built of them."""

from hypothesis import strategies as st

from optimiser.quantities import DIMENSIONS, Limit, Quantity, Setting, parse_quantity, parse_unit

# Units that fit each dimension, beside those of the table of dimensions.
UNITS = {
    "temperature": ("K", "degC", "degF"),
    "pressure": ("Pa", "kPa", "MPa", "bar", "mbar", "atm", "psi"),
    "pressure_difference": ("Pa", "kPa", "bar"),
    "molar_flow": ("mol/s", "kmol/h", "Nm3/h"),
    "mass_flow": ("kg/s", "t/d", "kt/year", "kg/h"),
    "energy_price": ("EUR/kWh", "EUR/MWh", "EUR/GJ", "kEUR/GWh"),
    "mass_price": ("EUR/kg", "EUR/t", "kEUR/t"),
    "molar_price": ("EUR/kmol", "EUR/Nm3"),
    "money": ("EUR", "kEUR", "MEUR"),
    "money_per_year": ("EUR/year", "MEUR/year"),
    "fraction": ("", "%", "ppm", "mol%"),
    "mass_fraction": ("", "%", "wt%"),
    "ratio": ("",),
    "years": ("year", "h", "d"),
    "coefficient": ("W/m2/K", "kW/m2/K"),
    "length": ("m", "mm", "cm"),
    "volume": ("m3", "L"),
}
dimensions = st.sampled_from(sorted(DIMENSIONS))


@st.composite
def numbers(draw, low=0.0, high=1e6):
    """A number with at most nine digits, as text."""
    value = draw(st.floats(low, high, allow_nan=False))
    digits = draw(st.integers(1, 9))
    return f"{value:.{digits}g}"


@st.composite
def written(draw, dimension):
    """A quantity of a dimension, from the text that a user could write."""
    kind = DIMENSIONS[dimension]
    unit = draw(st.sampled_from(UNITS.get(dimension, (kind.shown_in("EUR"),))))
    unit = "" if unit == "-" else unit
    size = parse_unit(unit).factor / kind.unit("EUR").factor
    high = 1e6 if kind.high is None else kind.high / size
    low = 1e-6 if kind.low_open or dimension == "temperature" else 0.0
    text = draw(numbers(low, high))
    if kind.high is not None and float(text) * size > kind.high:
        text = "0"
    return parse_quantity(f"{text} {unit}", dimension)


@st.composite
def settings_of(draw, dimension):
    """A held value or a range."""
    one = draw(written(dimension))
    other = draw(st.just(one) | written(dimension).filter(lambda q: q.unit == one.unit))
    low, high = sorted((one.si, other.si))
    return Setting(low, high, one.unit, dimension)


@st.composite
def limits_of(draw, dimension):
    """A limit with one end or two."""
    setting = draw(settings_of(dimension))
    sides = draw(st.sampled_from(("low", "high", "both")))
    low = None if sides == "high" else setting.low
    high = None if sides == "low" else setting.high
    return Limit(low, high, setting.unit, dimension)


quantities = dimensions.flatmap(written)
settings = dimensions.flatmap(settings_of)
limits = dimensions.flatmap(limits_of)

__all__ = ["Quantity", "limits", "limits_of", "numbers", "quantities", "settings", "settings_of", "written"]
