"""Work out a checked expression for one system. Only called on trees that `language.read_expression` has accepted."""

from __future__ import annotations

import ast
from collections.abc import Callable
from dataclasses import replace

from commission.checklists.language import Expression, Value, dotted_name, literal_kind
from commission.quantities import Explained, Kind, parse, parse_pressure

Lookup = Callable[[str], Value]
"""The value of a dotted name for the system at hand."""


def evaluate(expression: Expression, lookup: Lookup, barometric_pressure: float) -> Value:
    """The value of an expression; unknown, with the reason, where a fact it needs is not known."""
    return _Evaluator(lookup, barometric_pressure).value(expression.tree)


def parse_literal(text: str, kind: Kind, barometric_pressure: float) -> float:
    """A quoted quantity in SI; gauge pressures count from the site's barometric pressure.

    Raises:
        QuantityError: not a quantity of this kind.
    """
    if kind is Kind.PRESSURE:
        return parse_pressure(text).absolute(barometric_pressure)
    return parse(text, kind)


class _Evaluator:
    def __init__(self, lookup: Lookup, barometric_pressure: float) -> None:
        self.lookup = lookup
        self.barometric_pressure = barometric_pressure

    def value(self, node: ast.expr) -> Value:
        match node:
            case ast.Name() | ast.Attribute():
                return self.name(node)
            case ast.Constant(value=content):
                if isinstance(content, str):
                    return Value("literal", content)
                return Value(Kind.NUMBER, float(str(content)))
            case ast.BoolOp():
                return self.logic(node)
            case ast.UnaryOp(op=ast.Not()):
                inner = self.value(node.operand)
                return replace(inner, content=not inner.content) if inner.known else inner
            case ast.UnaryOp():
                inner = self.value(node.operand)
                return replace(inner, content=-_number(inner)) if inner.known else inner
            case ast.BinOp():
                return self.arithmetic(node)
            case ast.Compare():
                return self.comparison(node)
            case _:
                raise AssertionError(f"an unchecked node: {ast.dump(node)}")

    def name(self, node: ast.expr) -> Value:
        name = dotted_name(node)
        assert name is not None
        if name in ("yes", "no"):
            return Value("yes/no", name == "yes")
        if name == "none":
            return Value("none", None)
        return self.lookup(name)

    def logic(self, node: ast.BoolOp) -> Value:
        """Kleene: one no decides an `and`, one yes decides an `or`, whatever is unknown beside it."""
        decisive = isinstance(node.op, ast.Or)
        values = [self.value(part) for part in node.values]
        explained = tuple(e for v in values for e in v.explained)
        if any(v.known and v.content is decisive for v in values):
            return Value("yes/no", decisive, None, explained)
        unknown = next((v for v in values if not v.known), None)
        if unknown is not None:
            return Value("yes/no", None, unknown.missing, explained)
        return Value("yes/no", not decisive, None, explained)

    def fitted(self, value: Value, partner: Value, operator: str) -> Value:
        """Quoted text read as what its partner is."""
        if value.type == "literal" and isinstance(partner.type, Kind):
            kind = literal_kind(partner.type, operator)
            return Value(kind, parse_literal(str(value.content), kind, self.barometric_pressure))
        return replace(value, type="text") if value.type == "literal" else value

    def pair(self, left: Value, right: Value, operator: str) -> tuple[Value, Value]:
        return self.fitted(left, right, operator), self.fitted(right, left, operator)

    def arithmetic(self, node: ast.BinOp) -> Value:
        from commission.checklists.language import _BINARY, _result_kind

        operator = _BINARY[type(node.op)]
        left, right = self.pair(self.value(node.left), self.value(node.right), operator)
        kind = _result_kind(left.type, right.type, operator)
        assert kind is not None
        explained = (*left.explained, *right.explained)
        for side in (left, right):
            if not side.known:
                return Value(kind, None, side.missing, explained)
        a, b = _number(left), _number(right)
        if operator == "/" and b == 0:
            return Value(kind, None, "a division by zero", explained)
        result = {"+": a + b, "-": a - b, "*": a * b, "/": a / b if b else 0.0}[operator]
        return Value(kind, result, None, explained)

    def comparison(self, node: ast.Compare) -> Value:
        left = node.left
        explained: tuple[Explained, ...] = ()
        missing = None
        for operator, right in zip(node.ops, node.comparators, strict=True):
            found = self.compare(left, operator, right)
            explained += found.explained
            if found.known and found.content is False:
                return Value("yes/no", False, None, explained)
            missing = missing or found.missing
            left = right
        return Value("yes/no", None if missing else True, missing, explained)

    def compare(self, left: ast.expr, operator: ast.cmpop, right: ast.expr) -> Value:
        if isinstance(operator, (ast.Is, ast.IsNot)):
            stated = self.name(left).known
            return Value("yes/no", stated if isinstance(operator, ast.IsNot) else not stated)
        if isinstance(operator, (ast.In, ast.NotIn)):
            word = self.value(left)
            if not word.known:
                return Value("yes/no", None, word.missing)
            listed = any(word.content == getattr(e, "value", None) for e in getattr(right, "elts", ()))
            return Value("yes/no", listed is isinstance(operator, ast.In))
        a, b = self.pair(self.value(left), self.value(right), "==")
        explained = (*a.explained, *b.explained)
        for side in (a, b):
            if not side.known:
                return Value("yes/no", None, side.missing, explained)
        return Value("yes/no", _holds(a, operator, b), None, explained)


def _number(value: Value) -> float:
    assert isinstance(value.content, float)
    return value.content


def _holds(a: Value, operator: ast.cmpop, b: Value) -> bool:
    if isinstance(operator, ast.Eq):
        return a.content == b.content
    if isinstance(operator, ast.NotEq):
        return a.content != b.content
    x, y = _number(a), _number(b)
    match operator:
        case ast.Lt():
            return x < y
        case ast.LtE():
            return x <= y
        case ast.Gt():
            return x > y
        case _:
            return x >= y
