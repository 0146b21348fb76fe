"""The calculation: quantities, cases, criteria, cross-checks, relations, with their numbers."""

from calcdoc.records.plain import Plain


class CaseValues(Plain, frozen=True):
    """A quantity in one case that changes it, in its unit; null where it cannot be computed."""

    nominal: float | list[float] | None
    least: float | list[float] | None
    greatest: float | list[float] | None
    text: str
    """The nominal value and, when it varies, its band, typeset; empty for a series."""
    reason: str
    """Why it cannot be computed."""


class Quantity(Plain, frozen=True):
    """One quantity: an input with its band or a working line. Numbers are in ``unit``."""

    symbol: str
    line: str
    kind: str
    """``condition``, ``input``, ``assumption``, ``derived`` (later: solved, settled, method)."""
    unit: str
    """Empty for a plain number."""
    nominal: float | list[float]
    least: float | list[float]
    greatest: float | list[float]
    index: tuple[int, ...] | None
    at_least: dict[str, str]
    """The combination that gives the least value, e.g. ``{"V_line": "207 V"}``."""
    at_greatest: dict[str, str]
    proof: str
    """``exact``, ``bounded`` or ``searched``."""
    formula: str
    """Empty for an input."""
    substitution: str
    """The formula with nominal values; empty for an input."""
    result: str
    """The nominal value with unit, as in ``323.4 V``."""
    steps: tuple[str, ...]
    residual: str | None
    depends_on: tuple[str, ...]
    used_by: tuple[str, ...]
    """Symbols and criterion ids, in order."""
    description: str
    basis: str
    by_case: dict[str, CaseValues]
    # beyond the contract, for the pages
    id: str
    """Id of an assumption (``A1``), else empty."""
    state: str
    """``open`` or ``closed`` for an assumption, else empty."""
    units_carried: str
    """As in ``mA·ms/µF = V``; empty where nothing is reduced."""
    tolerance: str
    """The band as a reader writes it: ``230 V × (1 ± 10 %)``, ``(230 ± 23) V``,
    typeset already (no-break spaces, true minus); empty when the quantity does not vary."""
    least_text: str
    greatest_text: str
    varies: bool
    from_relation: str
    """Names of the relations it was solved from, as in ``charge``; else empty."""
    unverified: tuple[str, ...]
    """Tables of which this line itself uses a row that is not verified."""
    makeup: tuple[str, ...]
    """What a tolerance is made of, typeset: the random part, biases, like parts."""
    notes: tuple[str, ...]
    """Sentences for the reader: the extreme lies inside the band, the nominal is the middle, ..."""


class CaseChange(Plain, frozen=True):
    """What one case changes."""

    symbol: str
    text: str
    """As written: ``n_LED = n_LED - 1``."""
    formula: str
    """The right side, when it is a formula of normal values; else empty."""
    normal: str
    """The nominal value otherwise."""
    result: str
    """The nominal value in this case."""
    band: str
    """Its band in this case, typeset; empty when it does not vary."""


class Case(Plain, frozen=True):
    """A case the design is judged in; ``normal`` changes nothing."""

    name: str
    kind: str
    """``normal``, ``mode`` or ``fault``."""
    line: str
    changes: tuple[CaseChange, ...]
    description: str
    basis: str


class CriterionCase(Plain, frozen=True):
    """A criterion in one case."""

    value: float | None
    limit: float | None
    margin: float | None
    margin_abs: float | None
    verdict: str
    margin_text: str
    """As in ``8.2 %`` or ``4.1 K``; empty where there is nothing to compare."""
    accepted: str | None
    reason: str
    """Why it is not decided, not applicable, or fails for another reason than its numbers."""


class Share(Plain, frozen=True):
    """How many draws meet a criterion that is judged by sampling; shares of one."""

    asked: float
    met: float
    lower: float
    """One-sided bound: the true share is at least this, with 95 % confidence."""
    upper: float
    """The same: it is at most this."""
    lost: int
    """Draws that could not be computed; they count as not meeting it."""


class Contribution(Plain, frozen=True):
    """What one part contributes to a criterion by root sum square, in the criterion's unit."""

    symbol: str
    effect: float
    """To the limit at which the margin falls: zero or negative."""


class Criterion(Plain, frozen=True):
    """One acceptance criterion with its verdict. Numbers are in ``unit`` at the governing point."""

    id: str
    line: str
    text: str
    """The inequality as written, or the text of a test, without the clauses."""
    method: str
    """``extremes``, ``nominal``, ``point`` (extremes at an operating point), ``root sum square``,
    ``sampling``, ``any of``, ``test``, ``inspection`` or ``none``."""
    value: float | None
    limit: float | None
    unit: str
    relation: str
    """``<=``, ``>=``, ``<`` or ``>`` of the governing side, read value first; empty for a test."""
    margin: float | None
    margin_abs: float | None
    verdict: str
    """``pass``, ``fail``, ``not decided``, ``not applicable``, ``by test``, ``by inspection``."""
    accepted: str | None
    case: str
    governing: dict[str, str]
    by_case: dict[str, CriterionCase]
    route_of: str
    """The criterion of which this is one of several routes; then it counts through that one."""
    rows: tuple["CriterionRow", ...]
    interval: tuple[float | None, float | None] | None
    """By sampling: 95 % confidence interval of ``value``, which is then a quantile."""
    standard_error: float | None
    """Of the same."""
    share: Share | None
    """By sampling."""
    contributions: tuple[Contribution, ...]
    """By root sum square, the greatest first."""
    unverified: tuple[str, ...]
    description: str
    basis: str
    reason: str
    """Why it is not applicable or not decided; for a test, what is open."""
    # beyond the contract, for the pages
    clauses: str
    """The clauses as written: ``by extremes with margin 10 %``; may be empty."""
    substitution: str
    """The value side with numbers, when it is more than one symbol; else empty."""
    value_text: str
    limit_text: str
    """Rounded to as many digits as the verdict needs, e.g. ``88.1 V``."""
    margin_text: str
    """``8.2 %`` or, where there is no share, ``4.1 K``."""
    remark: str
    """As in ``short by 7.2 V (-180 % of the limit)``, ``equal to the limit``; may be empty."""
    statistics: tuple[str, ...]
    """By root sum square or sampling: how the parts were combined, typeset sentences."""
    proof: str
    """Empty by root sum square and by sampling, which prove nothing."""


class CriterionRow(Plain, frozen=True):
    """One element of a criterion over a series, at the point that governs it."""

    index: int
    value: float
    limit: float
    margin: float | None
    verdict: str
    value_text: str
    limit_text: str
    margin_text: str


class Crosscheck(Plain, frozen=True):
    """Two ways to one quantity, compared at nominal and over all bands."""

    id: str
    first: str
    second: str
    """Both sides as written."""
    unit: str
    """Of the difference: per cent of the second for ``against``, else the quantity's unit."""
    difference: float | None
    """The difference farthest from agreement: first less second."""
    allowed: float | None
    """The share that is allowed, or zero for a bound."""
    agrees: bool
    # beyond the contract, for the pages
    line: str
    form: str
    """``against``, ``not below``, ``not above`` or ``measured against``."""
    first_text: str
    second_text: str
    """Both sides at nominal."""
    difference_text: str
    allowed_text: str
    at: dict[str, str]
    """The combination at which the difference is worst, empty at nominal; the conditions of a
    measurement."""
    proof: str
    description: str
    basis: str
    first_band: str
    """Of a measurement: the band of the instrument, typeset, as in ``4.61 W × (1 ± 1.5 %)``."""
    second_band: str
    """Of a measurement: the band of the computed value at its conditions."""


class Relation(Plain, frozen=True):
    """An equation that is stated and solved elsewhere."""

    name: str
    line: str
    left: str
    right: str
    description: str
    basis: str
    solved_in: tuple[str, ...]
    """Line numbers of the quantities solved from it."""


class Restated(Plain, frozen=True):
    """A result in terms of chosen quantities, with its own numbers."""

    line: str
    symbol: str
    terms: tuple[str, ...]
    formula: str
    substitution: str
    result: str
    residual: str
    """How well it agrees with the line it restates."""
    description: str


class SensitivityRow(Plain, frozen=True):
    """How a quantity answers to one of the quantities it depends on."""

    symbol: str
    formula: str
    """The partial derivative."""
    value: float
    """At nominal, in ``unit``."""
    unit: str
    value_text: str
    per_cent_text: str
    """The change that one per cent of the input makes; empty where the input is a temperature."""
    full: float
    """The greater of the two changes that the full tolerance makes, in the quantity's unit."""
    low_text: str
    high_text: str
    """The changes at the input's least and greatest value, all others at nominal."""


class Sensitivity(Plain, frozen=True):
    """The sensitivities of one quantity, the greatest effect of a full tolerance first."""

    line: str
    symbol: str
    description: str
    rows: tuple[SensitivityRow, ...]
