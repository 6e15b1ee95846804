"""The result of `solve` and `check` as plain data: what `--json` prints and what the pages are made from.

Every number stands beside its unit, in the units of the case. There is no NaN and no text in a numeric field;
what does not apply is null. A run that ended without a point has `status`, `stopped`, `grade`, `warnings`,
`starts`, `timing` and `provenance`, and leaves out the rest.
"""

from __future__ import annotations

from typing import Literal, NotRequired, TypedDict


class Amount(TypedDict):
    """A number and its unit."""

    value: float | None
    unit: str


class ObjectiveValue(TypedDict):
    """What is optimised; `direction` says whether more is better."""

    name: str
    value: float | None
    unit: str
    direction: Literal["maximise", "minimise"]


class Decision(TypedDict):
    """One setting of the case: its value, its range (null when held) and where in the range it ended."""

    value: float
    unit: str
    low: float | None
    high: float | None
    at: Literal["inside", "low", "high", "held"]


class BindingLimit(TypedDict):
    """A limit that holds the optimum back.

    `path` is what `--set` takes to move just this limit. `worth` is the improvement of the objective for each
    unit by which the limit is relaxed; `worth_per_year` the same in money, null where product itself is
    limited, and then `marginal_cost` says what one more unit of product costs.
    """

    path: str
    name: str
    value: float
    limit: float
    unit: str
    side: Literal["low", "high"]
    worth: float
    worth_unit: str
    worth_per_year: float | None
    worth_per_year_unit: str | None
    marginal_cost: NotRequired[Amount | None]


class StreamState(TypedDict):
    """State of one stream; mole fractions of the whole stream, both phases together."""

    temperature: Amount
    pressure: Amount
    flow: Amount
    vapour_fraction: float | None
    composition: dict[str, float]


class CostItem(TypedDict):
    """One line of the annual cost; `share` is its part of the cost before credits. Credits are negative."""

    value: float
    unit: str
    share: float | None


class Costs(TypedDict):
    """Annual cost by item, its total, and the capital behind it by item."""

    currency: str
    items: dict[str, CostItem]
    total: Amount
    capital: dict[str, Amount]


# What is made: contained product, its purity, its levelised cost, its yield on the feed, and what one more
# unit costs. Written this way because "yield" is a word of the language.
Product = TypedDict(
    "Product",
    {
        "rate": Amount,
        "purity": NotRequired[Amount],
        "cost": NotRequired[Amount | None],
        "yield": NotRequired[Amount | None],
        "marginal_cost": NotRequired[Amount | None],
    },
)


class AuditLine(TypedDict):
    """One quantity computed twice: by the optimiser's equations and apart from them."""

    what: str
    model: float | None
    audit: float | None
    difference: float | None
    allowed: float
    unit: str
    passed: bool


class WorstLine(TypedDict):
    """The line of the audit that came closest to failing, or failed most."""

    what: str
    difference: float | None
    allowed: float
    unit: NotRequired[str]


class Audit(TypedDict):
    """Whether the independent calculation agrees, and where it agrees least."""

    passed: bool
    worst: WorstLine | None
    lines: NotRequired[list[AuditLine]]


class Start(TypedDict):
    """How one start ended; `status` is `converged` where the solver met its tolerance."""

    objective: float | None
    status: str
    iterations: int
    seconds: NotRequired[float]


class Hashed(TypedDict):
    """A file that went in, by name and hash."""

    file: str
    sha256: str | None


class Provenance(TypedDict):
    """What a reader needs to make the same result again."""

    setpoise: str
    python: str
    packages: dict[str, str]
    case: Hashed
    model: NotRequired[Hashed]
    seed: int
    starts: int
    backend: str


class Result(TypedDict, total=False):
    """What `solve` finds."""

    status: Literal["optimal", "calculated", "conflict", "failed"]
    stopped: str
    grade: str
    objective: ObjectiveValue | None
    decisions: dict[str, Decision]
    binding: list[BindingLimit]
    streams: dict[str, StreamState]
    beds: dict[str, dict[str, Amount | None]]
    costs: Costs | None
    recycle_ratio: Amount | None
    product: Product | None
    quantities: dict[str, Amount]
    audit: Audit | None
    starts: list[Start]
    warnings: list[str]
    timing: dict[str, float]
    provenance: Provenance


class Range(TypedDict):
    """A path with two ends; null where it has none."""

    path: str
    low: float | None
    high: float | None
    unit: str


class Held(TypedDict):
    """A path that keeps its value."""

    path: str
    value: float
    unit: str


class CheckResult(TypedDict):
    """What `check` finds.

    `freedom` is variables less equations [-]; `groups` names what is specified too much or too little.
    """

    status: Literal["ready", "over-specified", "under-specified", "conflict"]
    free: list[Range]
    held: list[Held]
    limits: list[Range]
    variables: int
    equations: int
    freedom: int
    groups: list[str]
    warnings: list[str]


class BackendRow(TypedDict):
    """Whether one solver works here."""

    backend: str
    ok: bool
    versions: dict[str, str]
    message: str
