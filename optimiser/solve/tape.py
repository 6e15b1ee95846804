"""Pyomo expressions as flat tapes of operations.

A section is many copies of few pieces. Two pieces whose tapes have the same `structure` differ only in which
variables and which numbers they hold, so one derivative function serves them all (see `shapes`).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

import casadi as ca
from pyomo.core.base.expression import ExpressionData, ScalarExpression
from pyomo.core.base.param import ParamData, ScalarParam
from pyomo.core.base.var import ScalarVar, VarData
from pyomo.core.expr import numeric_expr as nx
from pyomo.core.expr.numvalue import value

VARIABLE, NUMBER, POWER = -1, -2, -3
UNARY_CODES = {
    "exp": ca.OP_EXP,
    "log": ca.OP_LOG,
    "sqrt": ca.OP_SQRT,
    "sin": ca.OP_SIN,
    "cos": ca.OP_COS,
    "tanh": ca.OP_TANH,
    "atan": ca.OP_ATAN,
}


@dataclass
class Tape:
    """Operations of one piece in order of evaluation.

    `codes` holds (operation, first operand, second operand) where operands are positions in `codes`; a leaf holds
    the slot of its variable or number. `outputs` are the positions of the bodies.
    """

    codes: list[tuple[int, Any, Any]] = field(default_factory=list)
    variables: list[Any] = field(default_factory=list)
    numbers: list[Any] = field(default_factory=list)
    outputs: list[int] = field(default_factory=list)

    @property
    def structure(self) -> tuple[Any, ...]:
        """What must be equal for two tapes to share their derivative functions."""
        return (tuple(self.codes), tuple(self.outputs))

    def number_values(self) -> list[float]:
        """Present values of the numbers: literals, mutable parameters and fixed variables."""
        return [float(n) if n.__class__ in (float, int) else float(value(n)) for n in self.numbers]


class TapeWriter:
    """Writes expressions onto one tape; an expression object met twice is written once."""

    def __init__(self) -> None:
        self.tape = Tape()
        self._seen: dict[int, int] = {}
        self._kept: list[Any] = []
        self._slots: dict[int, int] = {}

    def body(self, expression: Any) -> None:
        """Append one output."""
        self.tape.outputs.append(self._visit(expression))

    def _emit(self, code: int, first: Any = 0, second: Any = 0) -> int:
        self.tape.codes.append((code, first, second))
        return len(self.tape.codes) - 1

    def _visit(self, node: Any) -> int:
        key = id(node)
        if node.__class__ not in (float, int):
            seen = self._seen.get(key)
            if seen is not None:
                return seen
        handler = _HANDLERS.get(node.__class__)
        position = handler(self, node) if handler else self._other(node)
        if node.__class__ not in (float, int):
            self._seen[key] = position
            # Sub-expressions made on the fly (lists of arguments) must outlive the walk, or ids would be reused.
            self._kept.append(node)
        return position

    def _other(self, node: Any) -> int:
        if node.__class__.__module__ == "numpy":
            return self._number(float(node))
        for kind, handler in _HANDLERS.items():
            if isinstance(node, kind):
                _HANDLERS[node.__class__] = handler
                return handler(self, node)
        raise TypeError(f"no derivative rule for {node.__class__.__name__} in {node}")

    def _number(self, node: Any) -> int:
        self.tape.numbers.append(node)
        return self._emit(NUMBER, len(self.tape.numbers) - 1)

    def _variable(self, node: Any) -> int:
        if node.fixed:
            return self._number(node)
        slot = self._slots.setdefault(id(node), len(self.tape.variables))
        if slot == len(self.tape.variables):
            self.tape.variables.append(node)
        return self._emit(VARIABLE, slot)

    def _sum(self, node: Any) -> int:
        args = node.args
        total = self._visit(args[0])
        for arg in args[1:]:
            if arg.__class__ is nx.NegationExpression:
                total = self._emit(ca.OP_SUB, total, self._visit(arg.args[0]))
            else:
                total = self._emit(ca.OP_ADD, total, self._visit(arg))
        return total

    def _product(self, node: Any) -> int:
        first, second = node.args
        return self._emit(ca.OP_MUL, self._visit(first), self._visit(second))

    def _division(self, node: Any) -> int:
        first, second = node.args
        return self._emit(ca.OP_DIV, self._visit(first), self._visit(second))

    def _power(self, node: Any) -> int:
        base, exponent = node.args
        if exponent.__class__ in (int, float):
            if exponent == 2:
                return self._emit(ca.OP_SQ, self._visit(base))
            return self._emit(POWER, self._visit(base), exponent)
        return self._emit(ca.OP_POW, self._visit(base), self._visit(exponent))

    def _negation(self, node: Any) -> int:
        return self._emit(ca.OP_NEG, self._visit(node.args[0]))

    def _unary(self, node: Any) -> int:
        return self._emit(UNARY_CODES[node.getname()], self._visit(node.args[0]))

    def _named(self, node: Any) -> int:
        return self._visit(node.expr)


_HANDLERS: dict[type, Callable[[TapeWriter, Any], int]] = {
    float: TapeWriter._number,
    int: TapeWriter._number,
    ScalarVar: TapeWriter._variable,
    VarData: TapeWriter._variable,
    ScalarParam: TapeWriter._number,
    ParamData: TapeWriter._number,
    ScalarExpression: TapeWriter._named,
    ExpressionData: TapeWriter._named,
    nx.MonomialTermExpression: TapeWriter._product,
    nx.ProductExpression: TapeWriter._product,
    nx.DivisionExpression: TapeWriter._division,
    nx.PowExpression: TapeWriter._power,
    nx.NegationExpression: TapeWriter._negation,
    nx.UnaryFunctionExpression: TapeWriter._unary,
    nx.LinearExpression: TapeWriter._sum,
    nx.SumExpression: TapeWriter._sum,
    nx.NPV_ProductExpression: TapeWriter._product,
    nx.NPV_DivisionExpression: TapeWriter._division,
    nx.NPV_PowExpression: TapeWriter._power,
    nx.NPV_NegationExpression: TapeWriter._negation,
    nx.NPV_UnaryFunctionExpression: TapeWriter._unary,
    nx.NPV_SumExpression: TapeWriter._sum,
}


def symbols(tape: Tape, variables: Any, numbers: list[Any]) -> list[Any]:
    """The outputs of a tape as casadi SX.

    Args:
        tape: The operations.
        variables: casadi SX column, one row per variable slot.
        numbers: one float or SX scalar per number slot.
    """
    binary, unary = ca.SX.binary, ca.SX.unary
    unary_codes = {ca.OP_SQ, ca.OP_NEG, *UNARY_CODES.values()}
    made: list[Any] = []
    for code, first, second in tape.codes:
        if code == VARIABLE:
            made.append(variables[first])
        elif code == NUMBER:
            made.append(ca.SX(numbers[first]))
        elif code == POWER:
            made.append(binary(ca.OP_CONSTPOW, made[first], ca.SX(second)))
        elif code in unary_codes:
            made.append(unary(code, made[first]))
        else:
            made.append(binary(code, made[first], made[second]))
    return [made[position] for position in tape.outputs]
