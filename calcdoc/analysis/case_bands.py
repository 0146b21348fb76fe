"""The quantities that one case moves."""

from collections.abc import Iterator, Mapping

from calcdoc.analysis.asking import Asker
from calcdoc.analysis.compile import Compiled
from calcdoc.analysis.evaluation import CaseBands
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.putting_back import Solutions
from calcdoc.analysis.trouble import out_of_reach, said
from calcdoc.analysis.working import InCase
from calcdoc.model.model import Model
from calcdoc.problems import Finding


def ask_cases(asker: Asker, model: Model) -> list["CaseAsked"]:
    """Ask for the quantities that cases move; what cannot be computed is found out together."""
    compiled = asker.compiled
    cases = [each for each in compiled.cases.values() if each.changes]
    targets = dict.fromkeys(at for case in cases for at in _targets(compiled, case))
    reasons = out_of_reach(compiled, model, asker.declared, list(targets), None)
    return [CaseAsked(asker, case, reasons) for case in cases]


def _moved(compiled: Compiled, case: InCase) -> tuple[dict[str, int], dict[str, dict[int, int]]]:
    """Quantities and series that are not computed as in the normal case."""
    normal = compiled.normal
    return (
        {k: at for k, at in case.variables.items() if at != normal.variables[k]},
        {k: dict(at) for k, at in case.series.items() if at != normal.series[k]},
    )


def _targets(compiled: Compiled, case: InCase) -> Iterator[int]:
    single, series = _moved(compiled, case)
    yield from single.values()
    for elements in series.values():
        yield from elements.values()
    yield from compiled.discharges[case.name].values()


class CaseAsked:
    """The quantities that one case moves, and the questions asked about them."""

    def __init__(self, asker: Asker, case: InCase, reasons: Mapping[int, Finding]) -> None:
        self.asker, self.case = asker, case
        self.out_of_reach = reasons.keys()
        """Instructions that cannot be computed."""
        single, series = _moved(asker.compiled, case)
        self.broken = {key: said(each) for key, each in case.broken.items()}
        self.broken |= {key: said(reasons[at]) for key, at in single.items() if at in reasons}
        self.broken |= {
            key: said(reasons[at])
            for key, each in series.items()
            for at in each.values()
            if at in reasons
        }
        self.single = {
            key: (at, asker.ask_both(at)) for key, at in single.items() if key not in self.broken
        }
        self.series = {
            key: {n: (at, asker.ask_both(at)) for n, at in each.items()}
            for key, each in series.items()
            if key not in self.broken
        }

    def bands(self, nominal: FloatArray, solved: Solutions) -> CaseBands:
        """The answers.

        Args:
            nominal: The value of every instruction at the nominal point.
            solved: What is known of solutions in this case.
        """
        asker, broken = self.asker, {**self.broken, **solved.bad}
        return CaseBands(
            {
                key: asker.band(float(nominal[at]), asked)
                for key, (at, asked) in self.single.items()
                if key not in broken
            },
            {
                key: {n: asker.band(float(nominal[at]), asked) for n, (at, asked) in each.items()}
                for key, each in self.series.items()
            },
            broken,
            {
                key: gain
                for key in self.single
                if key in solved.back and (gain := solved.back[key].gain) and not gain.settles
            },
        )
