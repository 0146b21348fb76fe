"""Method component-stress.

Source: facts 8, computed: a 400 V electrolytic capacitor on a bus of 358 V stands at 89 % and
breaks every derating table there (80 % at most for aluminium electrolytics, System Reliability
Center, seen).
"""

import pytest

from tests.helpers.design import worked

PART = "V_C = 358 V\nV_rated = 400 V"


def test_capacitor_on_the_bus() -> None:
    """89 % against 80 %: fails the chosen rule."""
    found = worked("use component-stress as cap\ns = V_C/V_rated\nk = 80 %", inputs=PART)
    assert found["cap.s"].nominal == pytest.approx(89.5, abs=0.1)
    assert found.criterion("cap.R1").verdict == "fail"


def test_same_capacitor_by_a_rule_of_the_design() -> None:
    """89 % against 95 %: passes; a reserve of 5.5 % of the rating is left."""
    found = worked("use component-stress as cap\ns = V_C/V_rated\nk = 95 %", inputs=PART)
    assert found.criterion("cap.R1").verdict == "pass"
    assert found["cap.reserve"].nominal == pytest.approx(5.5)
