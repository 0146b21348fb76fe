"""As many cases, changes, draws and like parts as a text may ask for: done, and right."""

import pytest

from tests.helpers.design import worked

N_CASES = 200


def test_two_hundred_cases() -> None:
    """Every case has its numbers; the worst of them governs."""
    done = worked(
        inputs="a = 1 ± 1 %\nb = 2 ± 1 %",
        derive="y = a*b\nz = y^2 + a",
        cases="\n".join(f"fault f{n}: a = {n + 1} ± 1 %" for n in range(N_CASES)),
        criteria="R: z <= 1e9 in every case\nS: y >= 1 in every case",
    )
    found = done.criterion("R")
    assert (found.verdict, found.case, len(found.by_case)) == (
        "pass",
        f"f{N_CASES - 1}",
        N_CASES + 1,
    )
    assert found.value == pytest.approx((202 * 2.02) ** 2 + 202)
    assert done["z"].by_case["f7"].nominal == 264
    assert done.criterion("S").by_case["f1"].value == pytest.approx(2 * 2 * 0.99**2)


def test_a_case_with_a_hundred_changes() -> None:
    """Changes that read each other's quantities all see the normal values."""
    names = range(100)
    done = worked(
        inputs="\n".join(f"x_{n} = {n + 1} ± 1 %" for n in names),
        derive=f"y = {' + '.join(f'x_{n}' for n in names)}\nd = x_0 - x_99",
        cases="fault f: " + ", ".join(f"x_{n} = 2*x_{99 - n}" for n in names),
        criteria="R: y <= 1e9 in every case\nS: y <= 1e9 by root sum square in every case",
    )
    assert done["y"].by_case["f"].nominal == 10100
    assert done["d"].by_case["f"].nominal == 198
    found = done.criterion("R").by_case
    assert (found["normal"].value, found["f"].value) == pytest.approx((5050 * 1.01, 10100 * 1.01))
    spread = 0.01 * sum((n + 1) ** 2 for n in names) ** 0.5
    combined = done.criterion("S").by_case
    assert combined["f"].value == pytest.approx(10100 + 2 * spread)


@pytest.mark.parametrize("count", ["1000000", "1000000000000"])
def test_a_million_like_parts(count: str) -> None:
    """The mean of so many is all but certain, and costs no more than one."""
    done = worked(
        inputs=f"n = {count}\nx = 1 V ± 1 % each of n",
        criteria="R: x <= 2 V by root sum square\nS: x <= 2 V by sampling 99 %\nE: x <= 2 V",
    )
    assert done.criterion("R").value == pytest.approx(1 + 0.01 / float(count) ** 0.5, rel=1e-12)
    assert done.criterion("S").value == pytest.approx(1, abs=3e-5)
    assert done.criterion("E").value == 1.01
