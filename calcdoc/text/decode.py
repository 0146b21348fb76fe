"""The bytes of a file as normalised text."""

from calcdoc.problems import Finding, error
from calcdoc.source import SourceFile, digest


def decoded(name: str, data: bytes) -> tuple[SourceFile, tuple[Finding, ...]]:
    r"""The normalised text: no byte-order mark, line ends as ``\\n``."""
    body = data.removeprefix(b"\xef\xbb\xbf")
    text = body.decode("utf-8", errors="replace").replace("\r\n", "\n").replace("\r", "\n")
    source = SourceFile(name, text, digest(data))
    try:
        body.decode("utf-8")
    except UnicodeDecodeError as trouble:
        before = body[: trouble.start].decode("utf-8").replace("\r\n", "\n").replace("\r", "\n")
        span = source.span(len(before), len(before) + 1)
        return source, (error("not-utf8", "the text is not UTF-8 from here on", span,
                              help="save the file as UTF-8"),)  # fmt: skip
    at = text.find("\0")
    if at >= 0:
        return source, (error("nul-character", "the text holds a NUL character",
                              source.span(at, at + 1), help="remove it"),)  # fmt: skip
    return source, ()
