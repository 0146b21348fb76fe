"""The sheets of the sample record."""

import io
import sys
from datetime import UTC, datetime
from pathlib import Path

import pikepdf
import pytest

from calcdoc.errors import MissingLibrary
from calcdoc.page.pdf import pdf, sheet_html
from tests.helpers.pages import pdf_text
from tests.helpers.sample_record import DATA, TEXT, sample

ISSUED = datetime(2026, 11, 20, tzinfo=UTC)

pytestmark = [
    pytest.mark.slow,
    pytest.mark.timeout(120),
    # the layout engine leaves its colour profile open
    pytest.mark.filterwarnings("ignore::ResourceWarning"),
    pytest.mark.filterwarnings("ignore::pytest.PytestUnraisableExceptionWarning"),
]


@pytest.fixture(scope="module")
def written() -> bytes:
    return pdf(sample(), TEXT, DATA, issued=ISSUED, files={"sheets/a.md": b"# A\n"})


@pytest.fixture(scope="module")
def text(written: bytes, tmp_path_factory: pytest.TempPathFactory) -> str:
    path = tmp_path_factory.mktemp("pdf") / "record.pdf"
    path.write_bytes(written)
    return pdf_text(path, "-layout")


def test_no_mathml_reaches_the_sheets() -> None:
    """The layout engine would drop it without a word."""
    assert "<math" not in sheet_html(sample(), DATA, ISSUED)


def test_same_record_same_bytes(written: bytes) -> None:
    """Equal input gives an equal file."""
    again = pdf(sample(), TEXT, DATA, issued=ISSUED, files={"sheets/a.md": b"# A\n"})
    assert again == written


def test_file_is_an_archive_with_title_language_and_bookmarks(written: bytes) -> None:
    """PDF/A-3a, tagged, the title shown, the sections as bookmarks."""
    with pikepdf.open(io.BytesIO(written)) as file:
        meta = file.open_metadata()
        assert (meta["pdfaid:part"], meta["pdfaid:conformance"]) == ("3", "A")
        assert file.Root.Lang == "en"
        assert file.Root.MarkInfo.Marked
        assert file.Root.ViewerPreferences.DisplayDocTitle
        assert str(file.docinfo["/Title"]) == "QSL-CAL-01 revision B: Quay stair light, 230 V"
        with file.open_outline() as outline:
            titles = [each.title for top in outline.root for each in top.children]
        assert "3 Reservoir voltage and ripple" in titles


def test_text_and_record_travel_with_the_sheets(written: bytes) -> None:
    """Each attachment is listed once, with what it is to the document."""
    with pikepdf.open(io.BytesIO(written)) as file:
        listed = {str(each.UF): str(each.AFRelationship) for each in file.Root.AF}
        assert len(file.Root.AF) == 3
        assert listed == {"stair.md": "/Source", "sheets/a.md": "/Source", "record.json": "/Data"}
        assert file.attachments["record.json"].get_file().read_bytes() == DATA
        assert file.attachments["stair.md"].get_file().read_bytes() == TEXT


@pytest.mark.parametrize(
    "words",
    [
        "sheet 1 of",
        "QSL-CAL-01 · revision B",
        "uncontrolled when printed",
        "text 4f1c 92ab · record",
        "323.4 V",
        "−3.2 V",
        "least 290.9 V",
        "used in 3.4, R1",
        "issued when all three signatures are present",
        "end of record QSL-CAL-01 revision B",
        "kΩ",
        "≤",
        "√",
    ],
)
def test_words_can_be_found(text: str, words: str) -> None:
    """Numbers, symbols and marks of the sheets are text that can be searched."""
    assert words in text.replace("\u00a0", " ")


def test_draft_is_marked_on_every_sheet(tmp_path: Path) -> None:
    """The word stands on each sheet, and the boxes say that nothing can be signed."""
    path = tmp_path / "draft.pdf"
    path.write_bytes(pdf(sample(status="draft", paper="letter"), TEXT, DATA, issued=ISSUED))
    sheets = pdf_text(path, "-layout").split("\f")[:-1]
    assert sheets
    assert all("DRAFT" in sheet for sheet in sheets)
    assert "".join(sheets).count("draft: cannot be signed") == 3


def test_missing_system_library_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    """A machine without the text libraries is told which Debian packages to install."""

    class Broken:
        def find_spec(self, name: str, *_: object) -> None:
            if name == "weasyprint":
                raise OSError("cannot load library 'libpango-1.0-0'")

    monkeypatch.delitem(sys.modules, "weasyprint", raising=False)
    monkeypatch.setattr(sys, "meta_path", [Broken(), *sys.meta_path])
    with pytest.raises(MissingLibrary, match=r"apt-get install libpango-1\.0-0 libpangoft2-1\.0-0"):
        pdf(sample(), TEXT, DATA, issued=ISSUED)
