"""Rules of prices and economics: what an objective, a currency, a quote or a year needs beside it."""

from __future__ import annotations

from typing import Any

from optimiser.inputs.document import Path_
from optimiser.inputs.draft import Draft, Problems
from optimiser.inputs.money import ASSET_SIZES, COST_YEAR
from optimiser.inputs.paths import mapping
from optimiser.quantities import DIMENSIONS, dimension_of


def _product_price(draft: Draft) -> Problems:
    """Profit needs something to sell."""
    if draft.mapping().get("objective") == "annual profit" and "product" not in draft.mapping("prices"):
        yield draft.document.problem(
            ("prices", "product"), "", "`product:`, the price that annual profit needs"
        )


def _exchange_rate(draft: Draft) -> Problems:
    """Equipment is costed in USD."""
    economics, path = draft.mapping("economics"), ("economics", "exchange_rate")
    currency = economics.get("currency")
    if currency == "USD" and "exchange_rate" in economics:
        yield draft.document.problem(path, None, "no exchange rate for a case in USD", key=True)
    elif (
        currency is not None
        and currency == draft.money.currency != "USD"
        and "exchange_rate" not in economics
    ):
        sample = DIMENSIONS["exchange_rate"].sample(currency)
        yield draft.document.problem(
            path, "", f"`exchange_rate:` for equipment costed in USD, such as `{sample}`"
        )


def _catalyst_price(draft: Draft) -> Problems:
    """The model's price of catalyst is in one currency only."""
    theirs, own = draft.catalyst_currency, draft.money.currency
    if theirs not in (None, own) and "catalyst" not in draft.mapping("prices"):
        wanted = f"`catalyst:`, its price in {own}; the model's is in {theirs}"
        yield draft.document.problem(("prices", "catalyst"), "", wanted)


def _quotes(draft: Draft) -> Problems:
    """The size of a quoted item is what that kind of item is sized by."""
    for name, quote in draft.mapping("economics", "quoted").items():
        path = ("economics", "quoted", name, "size")
        text = draft.document.text(path)
        if name not in ASSET_SIZES or not isinstance(quote, dict) or not text:
            continue
        kind = DIMENSIONS[ASSET_SIZES[name]]
        if dimension_of(text, ("power", "area", "volume"), draft.money) != kind.name:
            yield draft.document.problem(path, None, f"{kind.words}, such as `{kind.sample('EUR')}`")


def _cost_year(draft: Draft) -> Problems:
    """Years are those whose plant cost index is shipped, or the index is stated."""
    economics = draft.mapping("economics")
    years: list[tuple[Path_, Any]] = []
    if "cost_index" not in economics:
        years.append((("economics", "cost_year"), economics.get("cost_year", COST_YEAR)))
    for name, quote in draft.mapping("economics", "quoted").items():
        if isinstance(quote, dict):
            years.append((("economics", "quoted", name, "year"), quote.get("year", COST_YEAR)))
    # The shipped index always has the default year; the file is only read for others.
    odd = [(path, year) for path, year in years if isinstance(year, int) and year != COST_YEAR]
    if not odd:
        return
    known = indexed_years()
    for path, year in odd:
        if year not in known:
            hint = " or economics.cost_index" if path[-1] == "cost_year" else ""
            yield draft.document.problem(path, None, f"one of {', '.join(map(str, known))}{hint}")


def indexed_years() -> list[int]:
    """Years whose plant cost index is shipped."""
    from optimiser.inputs.lookup import shipped
    from optimiser.inputs.yaml_reader import read_document

    equipment = read_document(shipped("models") / "equipment.yaml").data
    return sorted(int(year) for year in mapping(equipment, "cost_index", "years"))


RULES = (_product_price, _exchange_rate, _catalyst_price, _quotes, _cost_year)
