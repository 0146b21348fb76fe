"""The quantities that one case moves."""

from calcdoc.analysis.asking import Asker
from calcdoc.analysis.evaluation import CaseBands
from calcdoc.analysis.points import FloatArray
from calcdoc.analysis.putting_back import Solutions
from calcdoc.analysis.trouble import out_of_reach, said
from calcdoc.analysis.working import InCase
from calcdoc.model.model import Model


class CaseAsked:
    """The quantities that one case moves, and the questions asked about them."""

    def __init__(self, asker: Asker, model: Model, case: InCase) -> None:
        self.asker, self.case = asker, case
        compiled = asker.compiled
        normal = compiled.normal
        single = {k: at for k, at in case.variables.items() if at != normal.variables[k]}
        series = {k: at for k, at in case.series.items() if at != normal.series[k]}
        targets = [*single.values(), *(at for each in series.values() for at in each.values())]
        targets += compiled.discharges[case.name].values()
        reasons = out_of_reach(compiled, model, asker.declared, targets, None)
        self.out_of_reach = set(reasons)
        """Instructions that cannot be computed."""
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
