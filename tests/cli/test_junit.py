"""`check --format junit`: whole documents, valid by the schema of Jenkins' xUnit plugin.

`reports/junit-10.xsd` is that schema, with its licence (MIT) in it, as pytest's sources carry it.
"""

from xml.etree.ElementTree import Element, fromstring

import pytest
import xmlschema

from calcdoc.commands.checked import check_file
from calcdoc.commands.junit import junit
from calcdoc.frozen import replace
from tests.cli.reported import FILES, REPORTS, put_files, undecided
from tests.helpers.checking import TITLE
from tests.helpers.command import Shell

XSD = xmlschema.XMLSchema(str(REPORTS / "junit-10.xsd"))


def _read(document: bytes) -> Element:
    """The document, valid by the schema and with counts that are true."""
    text = document.decode()
    XSD.validate(text)
    root = fromstring(text)  # noqa: S314  (we wrote it)
    for each in (root, *root.iter("testsuite")):
        cases = list(each.iter("testcase"))
        assert each.get("tests") == str(len(cases))
        for count, element in (("failures", "failure"), ("errors", "error")):
            assert each.get(count) == str(sum(case.find(element) is not None for case in cases))
    return root


def test_whole_document(shell: Shell) -> None:
    """Every verdict, a text with errors and a file that is not there, to the byte; status 3."""
    put_files(shell)
    said = shell("check", *FILES, "--format", "junit")
    assert said.out == (REPORTS / "junit.xml").read_text(encoding="utf-8")
    assert said.status == 3
    _read(said.out.encode())


@pytest.mark.parametrize(
    ("name", "status"), [("small.md", 1), ("wrong.md", 2), ("none.md", 3), ("good.md", 0)]
)
def test_status_is_that_of_check(shell: Shell, name: str, status: int) -> None:
    """The form of the output changes neither the exit status nor what is said of problems."""
    put_files(shell)
    shell.put("good.md", TITLE)
    text, report = shell("check", name), shell("check", name, "--format", "junit")
    assert (report.status, report.err) == (text.status, text.err)
    assert report.status == status
    _read(report.out.encode())


def test_not_decided_is_an_error(shell: Shell) -> None:
    """What is not decided is an error with its reason, apart from what fails."""
    put_files(shell)
    root = _read(junit([undecided()]))
    case = root.find("testsuite/testcase")
    assert case is not None
    assert case.get("name") == "R1: load <current> & more"
    assert [each.tag for each in case] == ["error"]
    assert dict(case[0].items()) == {
        "type": "not decided",
        "message": (
            "value 550.0\xa0mA, limit ≤ 600.0\xa0mA, margin 8.3\xa0%, at V_a = 5.5\xa0V;"
            " no bound on it could be proven"
        ),
    }
    assert (root.get("failures"), root.get("errors")) == ("2", "1")


def test_cases_routes_and_acceptances(shell: Shell) -> None:
    """Accepted failures fail and say so, routes are cases with their numbers, to the byte."""
    shell.put("cases.md", (REPORTS / "cases.md").read_bytes())
    said = shell("check", "cases.md", "--format", "junit")
    assert said.out == (REPORTS / "cases-junit.xml").read_text(encoding="utf-8")
    assert said.status == 1
    root = _read(said.out.encode())
    (route,) = [each for each in root.iter("testcase") if each.get("name") == "H1: first way"]
    assert [each.tag for each in route] == ["system-out"]


def test_what_xml_cannot_hold(shell: Shell) -> None:
    """A character that XML has no spelling for is replaced, so that the document can be read."""
    put_files(shell)
    odd = replace(check_file("none.md"), name="a\x01\ud800.md", trouble="bell \x07 rings")
    case = _read(junit([odd])).find("testsuite/testcase")
    assert case is not None
    assert case.get("classname") == "a\ufffd\ufffd.md"
    assert case[0].get("message") == "bell \ufffd rings"


def test_the_schema_refuses() -> None:
    """The schema that the documents are held against does refuse a wrong one."""
    with pytest.raises(xmlschema.XMLSchemaValidationError, match="missing required attribute"):
        XSD.validate("<testsuites><testsuite name='a'/></testsuites>")
