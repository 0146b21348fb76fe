"""From evaluation to record: everything a page shows, in order."""

from collections.abc import Mapping
from typing import TYPE_CHECKING

from calcdoc.analysis.evaluation import Evaluation
from calcdoc.frozen import Frozen
from calcdoc.problems import Finding
from calcdoc.problems.views import as_data, in_order
from calcdoc.records import body as prose_body
from calcdoc.records import record as r
from calcdoc.records.cases import cases
from calcdoc.records.cautions import cautions, hazards
from calcdoc.records.checks import crosschecks, relations
from calcdoc.records.criteria import criteria
from calcdoc.records.method import method_statement
from calcdoc.records.methods import applied_methods, outside_notices
from calcdoc.records.naming import name_lines
from calcdoc.records.numbers import Numbers
from calcdoc.records.quantities import quantities
from calcdoc.records.registers import assumptions, references, tally, unsourced
from calcdoc.records.restating import restated, sensitivities
from calcdoc.source import SourceFile, digest
from calcdoc.text import prose
from calcdoc.text.names import fold
from calcdoc.text.titleblock import TitleBlock

if TYPE_CHECKING:
    from calcdoc.analysis.draws import Setting


class Embedded(Frozen, frozen=True):
    """A picture of the design's folder, read and checked."""

    name: str
    sha256: str
    media_type: str
    base64: str


class Circumstances(Frozen, frozen=True):
    """What a record says of its making, besides the design."""

    tool: r.Tool
    findings: tuple[Finding, ...] = ()
    pictures: Mapping[str, Embedded] = {}
    """By path as written in the text."""
    files: Mapping[str, bytes] = {}
    """Every file of the design's folder that was used, by name."""
    today: str = ""
    """As YYYY-MM-DD: counts for acceptances where the document has no date."""
    sheets: Mapping[str, SourceFile] = {}
    """The sheets of methods, by the path that places in them name."""


def build_record(evaluation: Evaluation, made: Circumstances) -> r.Record:
    """The record of an evaluated design."""
    model = evaluation.model
    document, title = model.document, model.document.title
    numbers = Numbers(evaluation, title.digits)
    # Which blocks go to the cover does not depend on numbers; lines are numbered in what is left.
    parts = prose_body.divide(document.body, _no_values(made))
    naming = name_lines(model, parts.blocks)
    lines = quantities(numbers, naming)
    judged = criteria(numbers, naming, made.today)
    fill = _fill(lines, judged, made)
    parts = prose_body.divide(document.body, fill)
    body = prose_body.blocks(parts.blocks, naming, fill)
    register = assumptions(model, naming)
    return r.Record(
        schema=r.SCHEMA,
        document=_document(title, parts.subtitle),
        purpose=parts.purpose,
        verdict=tally(judged, register),
        source=_source(evaluation, made),
        tool=made.tool,
        sampling=_sampling(evaluation.setting),
        cases=cases(numbers, naming),
        quantities=lines,
        relations=relations(numbers, naming),
        restated=restated(numbers, naming),
        sensitivities=sensitivities(numbers, naming),
        criteria=judged,
        crosschecks=crosschecks(numbers, naming),
        assumptions=register,
        hazards=hazards(evaluation),
        cautions=cautions(evaluation, register, body),
        references=references(model, naming),
        applied=applied_methods(numbers, naming),
        methods=method_statement(
            lines, judged, title.digits, looked_up=bool(evaluation.looked), cases=bool(model.cases)
        ),
        figures=_figures(numbers, judged),
        notices=(*unsourced(model), *outside_notices(numbers)),
        problems=tuple(_problem(evaluation, made, each) for each in in_order(made.findings)),
        body=body,
    )


def _document(title: TitleBlock, subtitle: str) -> r.Document:
    return r.Document(
        number=title.number,
        title=title.title,
        subtitle=subtitle,
        revision=title.revision,
        date=title.date,
        status=title.status,
        product=title.product,
        owner=title.owner,
        language=title.language,
        paper=title.paper,
        digits=title.digits,
        replaces=title.replaces,
        people=r.People(prepared=title.prepared, checked=title.checked, approved=title.approved),
        history=tuple(
            r.Issue(revision=each.revision, date=each.date, reason=each.reason)
            for each in title.history
        ),
    )


def _figures(numbers: Numbers, judged: tuple[r.Criterion, ...]) -> tuple[r.AnyFigure, ...]:
    if not numbers.evaluation.figures:
        return ()
    from calcdoc.records.figures import figures  # noqa: PLC0415  (many designs have none)

    return figures(numbers, judged)


def _sampling(setting: "Setting | None") -> r.Sampling | None:
    if setting is None:
        return None
    return r.Sampling(
        draws=setting.total,
        seed=setting.seed,
        sequence="quasi-random" if setting.quasi_random else "random",
        generator="Sobol, scrambled 16 times" if setting.quasi_random else "PCG64",
    )


def _source(evaluation: Evaluation, made: Circumstances) -> r.Source:
    source = evaluation.model.document.source
    return r.Source(
        name=source.path.replace("\\", "/").rpartition("/")[2],
        sha256=source.sha256,
        files=tuple(
            r.File(name=name, sha256=digest(content))
            for name, content in sorted(made.files.items())
        ),
    )


def _problem(evaluation: Evaluation, made: Circumstances, finding: Finding) -> r.Problem:
    source = evaluation.model.document.source
    data = as_data(finding, {**made.sheets, source.path: source})
    path = finding.place.span.path
    return r.Problem(
        code=finding.code,
        severity=finding.severity.value,
        message=finding.message,
        line=int(str(data["line"])),
        column=int(str(data["column"])),
        help=finding.help,
        file="" if path == source.path else path,
    )


def _no_values(made: Circumstances) -> prose_body.Fill:
    return _fill((), (), made)


def _fill(
    lines: tuple[r.Quantity, ...], judged: tuple[r.Criterion, ...], made: Circumstances
) -> prose_body.Fill:
    by_symbol = {fold(each.symbol): each for each in lines}
    by_id = {fold(each.id): each for each in judged}

    def mention(node: prose.Mention) -> r.Inline:
        key = fold(node.name)
        if key in by_symbol:
            quantity = by_symbol[key]
            texts = {"least": quantity.least_text, "greatest": quantity.greatest_text}
            text = texts.get(node.form, quantity.result)
            return r.Value(symbol=quantity.symbol, form=node.form or "equation", text=text)
        if key in by_id:
            found = by_id[key]
            said = f"{found.verdict}, accepted" if found.accepted else found.verdict
            return r.Verdict(id=found.id, text=said)
        return r.Words(text=node.name)

    def picture(node: prose.Picture) -> r.Inline:
        found = made.pictures.get(node.path)
        if found is None:
            return r.Words(text=node.alternative)
        return r.Picture(name=found.name, alternative=node.alternative,
                         media_type=found.media_type, data=found.base64)  # fmt: skip

    return prose_body.Fill(mention, picture)
