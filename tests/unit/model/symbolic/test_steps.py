"""Whole derivations, step by step, as a reviewer reads them."""

import pytest

from calcdoc.model.symbolic import solve
from tests.unit.model.symbolic.shown import relations, told

CASES = {
    "charge balance": (
        "C_res*ΔV = I_reg*t_dis",
        ("ΔV",),
        """\
isolated
  divide both sides by C_res: ΔV = I_reg*t_dis/C_res
ΔV = I_reg*t_dis/C_res""",
    ),
    "line voltage from the peak": (
        "V_pk = sqrt(2)*V_line - 2*V_D",
        ("V_line",),
        """\
isolated
  swap the sides: sqrt(2)*V_line - 2*V_D = V_pk
  add 2*V_D to both sides: sqrt(2)*V_line = V_pk + 2*V_D
  divide both sides by sqrt(2): V_line = (V_pk + 2*V_D)/sqrt(2)
V_line = (V_pk + 2*V_D)/sqrt(2)""",
    ),
    "voltage divider": (
        "V_out = V_in*R_2/(R_1 + R_2)",
        ("R_2",),
        """\
linear
  multiply both sides by R_1 + R_2: V_out*R_2 + V_out*R_1 = V_in*R_2
  collect the terms with R_2: (V_in - V_out)*R_2 = V_out*R_1
  divide both sides by V_in - V_out: R_2 = V_out*R_1/(V_in - V_out)
R_2 = V_out*R_1/(V_in - V_out)""",
    ),
    "discharge, for the time": (
        "V = V_0*exp(-t/(R*C))",
        ("t",),
        """\
isolated
  swap the sides: V_0*exp(-t/(R*C)) = V
  divide both sides by V_0: exp(-t/(R*C)) = V/V_0
  take the natural logarithm of both sides: -t/(R*C) = ln(V/V_0)
  multiply both sides by R*C: -t = R*C*ln(V/V_0)
  change the sign of both sides: t = -R*C*ln(V/V_0)
t = -R*C*ln(V/V_0)""",
    ),
    "discharge, for the resistor": (
        "V = V_0*exp(-t/(R*C))",
        ("R",),
        """\
isolated
  swap the sides: V_0*exp(-t/(R*C)) = V
  divide both sides by V_0: exp(-t/(R*C)) = V/V_0
  take the natural logarithm of both sides: -t/(R*C) = ln(V/V_0)
  divide -t/C by both sides: R = -t/(C*ln(V/V_0))
R = -t/(C*ln(V/V_0))""",
    ),
    "power in a resistor, two roots": (
        "I^2*R = P",
        ("I",),
        """\
isolated
  divide both sides by R: I^2 = P/R
  take the square root of both sides: I = sqrt(P/R)
I = sqrt(P/R)
isolated
  divide both sides by R: I^2 = P/R
  take the square root of both sides, with the minus sign: I = -sqrt(P/R)
I = -sqrt(P/R)""",
    ),
    "parallel resistors": (
        "1/R = 1/R_1 + 1/R_2",
        ("R_2",),
        """\
isolated
  swap the sides: 1/R_1 + 1/R_2 = 1/R
  subtract 1/R_1 from both sides: 1/R_2 = 1/R - 1/R_1
  take the reciprocal of both sides: R_2 = 1/(1/R - 1/R_1)
R_2 = 1/(1/R - 1/R_1)""",
    ),
    "parallel resistors as product over sum": (
        "R = R_1*R_2/(R_1 + R_2)",
        ("R_2",),
        """\
linear
  multiply both sides by R_1 + R_2: R*R_2 + R*R_1 = R_1*R_2
  collect the terms with R_2: (R_1 - R)*R_2 = R*R_1
  divide both sides by R_1 - R: R_2 = R*R_1/(R_1 - R)
R_2 = R*R_1/(R_1 - R)""",
    ),
    "quadratic": (
        "P = (V - R*I)*I",
        ("I",),
        """\
quadratic
  collect the terms with I: R*I^2 - V*I + P = 0
  solve the quadratic equation, root with the plus sign: I = (V + sqrt(V^2 - 4*R*P))/(2*R)
I = (V + sqrt(V^2 - 4*R*P))/(2*R)
quadratic
  collect the terms with I: R*I^2 - V*I + P = 0
  solve the quadratic equation, root with the minus sign: I = (V - sqrt(V^2 - 4*R*P))/(2*R)
I = (V - sqrt(V^2 - 4*R*P))/(2*R)""",
    ),
    "phase of a sine": (
        "v = V_pk*sin(2*pi*f*t)",
        ("t",),
        """\
isolated
  swap the sides: V_pk*sin(2*pi*f*t) = v
  divide both sides by V_pk: sin(2*pi*f*t) = v/V_pk
  take the arc sine of both sides, principal branch: 2*pi*f*t = asin(v/V_pk)
  divide both sides by 2*pi*f: t = asin(v/V_pk)/(2*pi*f)
t = asin(v/V_pk)/(2*pi*f)
isolated
  swap the sides: V_pk*sin(2*pi*f*t) = v
  divide both sides by V_pk: sin(2*pi*f*t) = v/V_pk
  take the arc sine of both sides, other branch: 2*pi*f*t = pi - asin(v/V_pk)
  divide both sides by 2*pi*f: t = (pi - asin(v/V_pk))/(2*pi*f)
t = (pi - asin(v/V_pk))/(2*pi*f)""",
    ),
    "a resistor from decibels": (
        "20*log10(R_2/R_1) = G",
        ("R_2",),
        """\
isolated
  divide both sides by 20: log10(R_2/R_1) = G/20
  raise 10 to the power of both sides: R_2/R_1 = 10^(G/20)
  multiply both sides by R_1: R_2 = 10^(G/20)*R_1
R_2 = 10^(G/20)*R_1""",
    ),
    "one part of a root sum square": (
        "u = rss(u_1, u_2)",
        ("u_2",),
        """\
isolated
  swap the sides: rss(u_1, u_2) = u
  write out the root sum square: sqrt(u_1^2 + u_2^2) = u
  square both sides: u_1^2 + u_2^2 = u^2
  subtract u_1^2 from both sides: u_2^2 = u^2 - u_1^2
  take the square root of both sides: u_2 = sqrt(u^2 - u_1^2)
u_2 = sqrt(u^2 - u_1^2)
isolated
  swap the sides: rss(u_1, u_2) = u
  write out the root sum square: sqrt(u_1^2 + u_2^2) = u
  square both sides: u_1^2 + u_2^2 = u^2
  subtract u_1^2 from both sides: u_2^2 = u^2 - u_1^2
  take the square root of both sides, with the minus sign: u_2 = -sqrt(u^2 - u_1^2)
u_2 = -sqrt(u^2 - u_1^2)""",
    ),
    "two meshes": (
        "I_a = I_b + I_c; R_1*I_a + R_2*I_b = V",
        ("I_a", "I_b"),
        """\
linear
  from loop: I_a = I_b + I_c
  put I_a into node: (R_2 + R_1)*I_b = V - R_1*I_c
  divide both sides by R_2 + R_1: I_b = (V - R_1*I_c)/(R_2 + R_1)
  put in I_b: I_a = (V - R_1*I_c)/(R_2 + R_1) + I_c
I_a = (V - R_1*I_c)/(R_2 + R_1) + I_c
linear
  from loop: I_a = I_b + I_c
  put I_a into node: (R_2 + R_1)*I_b = V - R_1*I_c
  divide both sides by R_2 + R_1: I_b = (V - R_1*I_c)/(R_2 + R_1)
I_b = (V - R_1*I_c)/(R_2 + R_1)""",
    ),
    "a diode in an exponential and a product": (
        "y = exp(x/a); y*b = c",
        ("x", "y"),
        """\
substituted
  node: divide both sides by b: y = c/b
  put y into loop: c/b = exp(x/a)
  swap the sides: exp(x/a) = c/b
  take the natural logarithm of both sides: x/a = ln(c/b)
  multiply both sides by a: x = a*ln(c/b)
x = a*ln(c/b)
substituted
  node: divide both sides by b: y = c/b
  put y into loop: c/b = exp(x/a)
  swap the sides: exp(x/a) = c/b
  take the natural logarithm of both sides: x/a = ln(c/b)
  multiply both sides by a: x = a*ln(c/b)
y = c/b""",
    ),
}


@pytest.mark.parametrize("name", CASES)
def test_a_textbook_relation_is_solved_in_named_steps(name: str) -> None:
    """Every step is named and shown with both sides after it, in the author's symbols."""
    text, unknowns, expected = CASES[name]
    assert told(solve(relations(text), unknowns)) == expected
