"""Operating points: symbols with their values, as in ``at V_line = 230 V ± 2 %, T_a = 25 °C``."""

import re
from typing import Final

from calcdoc.text.cells import used
from calcdoc.text.given import given, no_makeup
from calcdoc.text.scan import Scanner
from calcdoc.text.statements import Label, PointValue

_COMMA: Final = re.compile(r",")
_EQUALS: Final = re.compile(r"=(?!=)")


def point(scanner: Scanner, wanted: str) -> tuple[PointValue, ...]:
    """``point = SYMBOL "=" given ("," SYMBOL "=" given)*``"""
    values: list[PointValue] = []
    while True:
        symbol: Label = used(scanner, wanted)
        scanner.expect(_EQUALS, "`=`")
        values.append(PointValue(symbol, given(scanner)))
        no_makeup(scanner)
        if scanner.take(_COMMA) is None:
            return tuple(values)
