"""A record made by hand, before any text is read: a stair light, its numbers invented."""

from typing import Any

from calcdoc.records import record as r
from tests.helpers.sample_parts import CASES, CRITERIA, GIVEN, NB, REFERENCES, WORKED, given

DATA = b'{"schema":"calcdoc-record/1","note":"</script><b>&"}'
TEXT = b"# Quay stair light\n"


def words(text: str) -> r.Paragraph:
    """A paragraph of plain text."""
    return r.Paragraph(inline=(r.Words(text=text),))


def heading(number: str, title: str, level: int = 2) -> r.Heading:
    """A numbered heading."""
    anchor = title.lower().replace(" ", "-")
    return r.Heading(level=level, number=number, anchor=anchor, inline=(r.Words(text=title),))


def lines_of(start: str) -> tuple[r.Block, ...]:
    """The quantity lines of a section."""
    quantities = (*map(given, GIVEN), *WORKED)
    return tuple(
        r.QuantityLine(symbol=each.symbol) for each in quantities if each.line.startswith(start)
    )


def body() -> tuple[r.Block, ...]:
    """Prose and lines of the sample in order."""
    ripple = r.Paragraph(
        inline=(
            r.Words(
                text="Between two refills the reservoir alone feeds the string: it falls from "
            ),
            r.Value(symbol="V_pk", form="equation", text="323.4 V"),
            r.Words(text=" in a straight line, and the charge lost is the current times "),
            r.Emphasis(strong=False, inline=(r.Words(text="the time the bridge blocks"),)),
            r.Words(text=", see "),
            r.Verdict(id="R2", text="fail"),
            r.Words(text=". A <tag> & an ampersand stay text; "),
            r.Code(text="a < b"),
            r.Words(text="."),
        )
    )
    return (
        heading("1", "Operating conditions"),
        *lines_of("1."),
        heading("2", "Parts and assumptions"),
        *lines_of("2."),
        r.SentenceLine(id="A2"),
        heading("3", "Reservoir voltage and ripple"),
        ripple,
        *lines_of("3."),
        heading("4", "Regulator"),
        *lines_of("4."),
        r.CautionBox(
            signal="warning", blocks=(words("The tab of the regulator is at mains potential."),)
        ),
        heading("5", "After disconnection"),
        *lines_of("5."),
        r.Grid(
            align=("left", "right"),
            head=((r.Words(text="wait"),), (r.Words(text="voltage"),)),
            rows=(((r.Words(text="1 s"),), (r.Words(text="21.6 V"),)),),
        ),
        r.Items(
            start=None, items=((words("discharge by suitable means"),), (words("then measure"),))
        ),
        heading("6", "Acceptance"),
        *(r.CriterionLine(id=each.id) for each in CRITERIA),
    )


def sample(**changes: object) -> r.Record:
    """The whole record; fields of the title block may be changed."""
    title_block: dict[str, Any] = {
        "number": "QSL-CAL-01",
        "title": "Quay stair light, 230 V",
        "subtitle": "Electrical design of the light engine",
        "revision": "B",
        "date": "2026-11-20",
        "status": "for issue",
        "product": "QSL",
        "owner": "Lantern works",
        "language": "en",
        "paper": "A4",
        "digits": 4,
        "replaces": "revision A",
        "people": r.People(prepared="Ida Roth", checked="Jonas Vik", approved=""),
        "history": (
            r.Issue(revision="A", date="2026-10-02", reason="first issue"),
            r.Issue(revision="B", date="2026-11-20", reason="reservoir 6.8 µF to 10 µF"),
        ),
    }
    title_block.update(changes)
    return r.Record(
        schema=r.SCHEMA,
        document=r.Document(**title_block),
        purpose="This record covers the rectifier, the reservoir capacitor, the LED string and the"
        " series current regulator of the stair light, over supply voltage, component tolerance,"
        " ambient temperature and one shorted LED.",
        verdict=r.Tally(
            passed=3,
            failed=1,
            accepted=1,
            undecided=0,
            not_applicable=1,
            by_test=1,
            by_inspection=0,
            open_assumptions=1,
            unverified=1,
            bottom_line="3 pass, 1 fail, 1 fails but is accepted, 1 not applicable, 1 by test",
        ),
        source=r.Source(name="designs/stair.md", sha256="4f1c92ab" * 8, files=()),
        tool=r.Tool(version="0.1", libraries={"numpy": "2.4.6", "pint": "0.25.3"}),
        sampling=None,
        cases=CASES,
        quantities=(*map(given, GIVEN), *WORKED),
        relations=(),
        restated=(),
        sensitivities=(),
        criteria=CRITERIA,
        crosschecks=(),
        assumptions=(
            r.Assumption(
                id="A1",
                text="R_th_JA = 60 K/W ± 15 %",
                symbol="R_th_JA",
                reason="lamp in free air",
                state="open",
                note="thermal test planned",
                rests_on_it=("4.2", "R4"),
                line="2.7",
            ),
            r.Assumption(
                id="A2",
                text="The string is wired without taps",
                symbol="",
                reason="drawing QSL-11",
                state="closed",
                note="inspection 2026-10-30",
                rests_on_it=("3.5",),
                line="2.8",
            ),
        ),
        hazards=(),
        cautions=(
            r.Caution(
                signal="danger",
                origin="hazards",
                text="Mains voltage can kill. The circuit is"
                " not isolated from the mains: do not connect earthed instruments. After"
                f" disconnection the reservoir stays charged above 60{NB}V for 14{NB}s.",
            ),
            r.Caution(
                signal="warning",
                origin="author",
                text="The tab of the regulator is at mains potential.",
            ),
            r.Caution(
                signal="notice",
                origin="general",
                text="This calculation supports the design"
                " and is no evidence of conformity by itself.",
            ),
            r.Caution(signal="notice", origin="general", text="Competent persons only."),
        ),
        references=tuple(
            r.Reference(
                key=key, title=title, edition=edition, held="project folder", cited_by=cited
            )
            for key, title, edition, cited in REFERENCES
        ),
        applied=(),
        methods=(
            "Conditions and tolerances stand at their ends, in all combinations.",
            "Exact where marked exact; searched where marked searched.",
        ),
        figures=(),
        notices=("n_LED has no source.",),
        problems=(
            r.Problem(
                code="no-source",
                severity="warning",
                message="n_LED has no source",
                line=31,
                column=1,
                help="add a basis",
            ),
        ),
        body=body(),
    )
