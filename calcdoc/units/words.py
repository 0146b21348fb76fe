"""The closed list of unit words: those of the SI, those accepted beside it, those of the trade.

Each word maps to the name it has in ``registry.txt``, where Pint finds its factor and dimension.
"""

from typing import Final

PREFIXES: Final = {
    "q": "quecto", "r": "ronto", "y": "yocto", "z": "zepto", "a": "atto", "f": "femto",
    "p": "pico", "n": "nano", "µ": "micro", "m": "milli", "c": "centi", "d": "deci",
    "da": "deca", "h": "hecto", "k": "kilo", "M": "mega", "G": "giga", "T": "tera",
    "P": "peta", "E": "exa", "Z": "zetta", "Y": "yotta", "R": "ronna", "Q": "quetta",
}  # fmt: skip
"""SI prefixes."""

PREFIXED: Final = {
    "m": "metre", "g": "gram", "s": "second", "A": "ampere", "K": "kelvin", "mol": "mole",
    "cd": "candela", "Hz": "hertz", "rad": "radian", "sr": "steradian", "N": "newton",
    "Pa": "pascal", "J": "joule", "W": "watt", "C": "coulomb", "V": "volt", "F": "farad",
    "Ω": "ohm", "S": "siemens", "Wb": "weber", "T": "tesla", "H": "henry", "lm": "lumen",
    "lx": "lux", "Bq": "becquerel", "Gy": "gray", "Sv": "sievert", "kat": "katal",
    "L": "litre", "l": "litre", "eV": "electronvolt",
    "VA": "voltampere", "var": "var", "Ah": "amperehour", "Wh": "watthour",
}  # fmt: skip
"""Words that take a prefix."""

ALONE: Final = {
    "min": "minute", "h": "hour", "d": "day", "t": "tonne", "ha": "hectare", "au": "astronomical",
    "Da": "dalton", "deg": "degree", "°": "degree", "°C": "kelvin", "%": "percent", "ppm": "ppm",
}  # fmt: skip
"""Words that stand alone. ``°C`` is a temperature; its size is the kelvin."""

SPELLED: Final = {"ohm": "Ω", "degC": "°C"}
"""ASCII spellings and what they print as; a prefix ``u`` prints as ``µ``."""

NICKNAMES: Final = {
    "amp": "A", "hr": "h", "sec": "s", "ohm": "Ω", "meter": "m", "liter": "L",
    "vac": "V", "vdc": "V", "vrm": "V", "vpk": "V", "vpp": "V", "arm": "A", "apk": "A",
    "celsiu": "°C", "°f": "°C", "degree": "deg", "pct": "%",
}  # fmt: skip
"""What people write in place of a unit word, without a plural s."""
