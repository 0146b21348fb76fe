"""When an instruction is computed at all: the conditions of the ``if`` branches around it.

``if(x > 0, 1/x, 0)`` divides only where x > 0, and the second side of ``and`` and ``or`` counts
only where the first does not decide. The condition is added to the tape as instructions.
"""

from collections.abc import Sequence

from calcdoc.analysis.tape import Op, TapeBuilder, needed

Guard = int | None
"""The instruction of a condition; None for always."""


def guards(builder: TapeBuilder, targets: Sequence[int]) -> dict[int, Guard]:
    """Condition under which each instruction that the targets use is computed.

    The conditions are added to ``builder``, whose indices so far stay. An instruction used on
    several ways is computed when one of them is.
    """
    tape = builder.tape()
    order = needed(tape, targets)
    reached: dict[int, Guard] = dict.fromkeys(targets)
    for at in reversed(order):
        step = tape.instructions[at]
        here = reached[at]
        for place, arg in enumerate(step.args):
            way = here
            if step.op is Op.IF and place > 0:
                way = _both(builder, here, step.args[0], wanted=place == 1)
            elif step.op in (Op.AND, Op.OR) and place == 1:
                way = _both(builder, here, step.args[0], wanted=step.op is Op.AND)
            reached[arg] = _either(builder, reached[arg], way) if arg in reached else way
    return reached


def _both(builder: TapeBuilder, guard: Guard, condition: int, *, wanted: bool) -> int:
    """The guard, and the condition being as wanted."""
    term = condition if wanted else builder.add(Op.NOT, condition)
    return term if guard is None else builder.add(Op.AND, guard, term)


def _either(builder: TapeBuilder, first: Guard, second: Guard) -> Guard:
    if first is None or second is None:
        return None
    return first if first == second else builder.add(Op.OR, first, second)
