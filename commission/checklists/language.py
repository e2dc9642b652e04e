"""The small language of checklist data: names, comparisons, and / or / not, and arithmetic that respects units.

An expression is parsed by Python's own parser and then walked node by node against a short list of what may stand in
it; nothing is ever compiled or called, and a name is looked up whole in one table, so no object can be reached into.
Types are checked when a file is read, before any plant is seen. A fact that is not known makes a condition *unknown*,
by Kleene's three-valued logic, never false.
"""

from __future__ import annotations

import ast
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from commission.errors import InputError, Problem, nearest, shorten
from commission.quantities import Explained, Kind, QuantityError, parse, parse_pressure

MAX_LENGTH = 400
MAX_NODES = 120
MAX_DEPTH = 30

Word = Literal["text", "yes/no", "part", "none", "literal"]
Type = Kind | Word
"""What an expression is: a kind of quantity, or one of the other words. `literal` is quoted text, whose meaning its
partner decides; `part` is a whole part of the description, which can only be compared with `none`."""

_PLAIN_WORDS: Mapping[str, Type] = {"none": "none", "yes": "yes/no", "no": "yes/no"}
_DIFFERENCE: Mapping[Kind, Kind] = {
    Kind.TEMPERATURE: Kind.TEMPERATURE_DIFFERENCE,
    Kind.PRESSURE: Kind.PRESSURE_DIFFERENCE,
}
_BINARY: Mapping[type[ast.operator], str] = {ast.Add: "+", ast.Sub: "-", ast.Mult: "*", ast.Div: "/"}
_COMPARISON: Mapping[type[ast.cmpop], str] = {
    ast.Eq: "==",
    ast.NotEq: "!=",
    ast.Lt: "<",
    ast.LtE: "<=",
    ast.Gt: ">",
    ast.GtE: ">=",
    ast.In: "in",
    ast.NotIn: "not in",
    ast.Is: "is",
    ast.IsNot: "is not",
}


class ExpressionError(InputError):
    """An expression cannot be read; its one problem says why and what may stand there."""


@dataclass(frozen=True, slots=True)
class Value:
    """A value while an expression is worked out. `content` is SI (pressures absolute), text or a truth value; None when
    it is not known, and `missing` then says why. `explained` are the calculated numbers that went in."""

    type: Type
    content: float | str | bool | None
    missing: str | None = None
    explained: tuple[Explained, ...] = ()

    @property
    def known(self) -> bool:
        """There is a value."""
        return self.missing is None


@dataclass(frozen=True, slots=True)
class NameType:
    """What a name stands for: its type, the words it can take where it is a choice, and its meaning."""

    type: Type
    says: str
    choices: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Expression:
    """A checked expression: its text, its type and its parsed form."""

    text: str
    type: Type
    tree: ast.expr
    names: tuple[str, ...]


def _refuse(message: str, text: str, allowed: str | None = None, near: str | None = None) -> ExpressionError:
    return ExpressionError(Problem(message, value=shorten(text), allowed=allowed, nearest=near))


def read_expression(text: str, names: Mapping[str, NameType]) -> Expression:
    """Parse and check one expression against the names there are.

    Raises:
        ExpressionError: too long, not an expression, something that may not stand in one, an unknown name, or
            quantities of different kinds; its problem carries the text, what is allowed and the nearest name.
    """
    if len(text) > MAX_LENGTH:
        raise _refuse(f"an expression has at most {MAX_LENGTH} characters", text)
    try:
        tree = ast.parse(text.strip(), mode="eval").body
    except (SyntaxError, ValueError, RecursionError, MemoryError):
        raise _refuse("this is not an expression", text, allowed=_ALLOWED) from None
    if sum(1 for _ in ast.walk(tree)) > MAX_NODES:
        raise _refuse("the expression is too long to be read by a person; split it", text)
    checker = _Checker(text, names)
    found = checker.check(tree, 0)
    if found in ("literal", "none"):
        raise _refuse("a quoted text or none alone says nothing; compare it with a name", text)
    return Expression(text, found, tree, tuple(dict.fromkeys(checker.used)))


_ALLOWED = "names, numbers, quoted quantities such as '0.5 bar', == != < <= > >= in is and or not + - * / and brackets"


def dotted_name(node: ast.expr) -> str | None:
    """`a.b.c` of a chain of names, or None where the node is something else."""
    parts: list[str] = []
    while isinstance(node, ast.Attribute):
        parts.append(node.attr)
        node = node.value
    if not isinstance(node, ast.Name):
        return None
    parts.append(node.id)
    return ".".join(reversed(parts))


def literal_kind(kind: Kind, operator: str) -> Kind:
    """The kind that a quoted quantity has beside a quantity of `kind`: a difference when it is added or taken away."""
    return _DIFFERENCE.get(kind, kind) if operator in ("+", "-") else kind


def _parse_literal(text: str, kind: Kind, expression: str) -> None:
    try:
        if kind is Kind.PRESSURE:
            parse_pressure(text)
        else:
            parse(text, kind)
    except QuantityError as error:
        problem = error.problems[0]
        raise _refuse(f"{text!r}: {problem.message}", expression, problem.allowed, problem.nearest) from None


@dataclass(slots=True)
class _Checker:
    """Finds the type of every node, or refuses it."""

    text: str
    names: Mapping[str, NameType]
    used: list[str]

    def __init__(self, text: str, names: Mapping[str, NameType]) -> None:
        self.text, self.names, self.used = text, names, []

    def fail(self, message: str, allowed: str | None = None, near: str | None = None) -> ExpressionError:
        return _refuse(message, self.text, allowed, near)

    def check(self, node: ast.expr, depth: int) -> Type:
        if depth > MAX_DEPTH:
            raise self.fail("brackets are nested too deep")
        match node:
            case ast.Name() | ast.Attribute():
                return self.name(node).type
            case ast.Constant():
                return self.constant(node)
            case ast.BoolOp():
                for part in node.values:
                    self.truth(part, depth)
                return "yes/no"
            case ast.UnaryOp(op=ast.Not()):
                self.truth(node.operand, depth)
                return "yes/no"
            case ast.UnaryOp(op=ast.USub()):
                return self.negative(node, depth)
            case ast.BinOp() if type(node.op) in _BINARY:
                return self.arithmetic(node, depth)
            case ast.Compare():
                return self.comparison(node, depth)
            case _:
                raise self.fail(f"{_what(node)} may not stand in an expression", _ALLOWED)

    def name(self, node: ast.expr) -> NameType:
        name = dotted_name(node)
        if name is None:
            raise self.fail(f"{_what(node)} may not stand in an expression", _ALLOWED)
        if name in _PLAIN_WORDS:
            return NameType(_PLAIN_WORDS[name], name)
        found = self.names.get(name)
        if found is None:
            raise self.fail(f"{shorten(name, 60)!r} is no name that is known here", None, nearest(name, self.names))
        self.used.append(name)
        return found

    def constant(self, node: ast.Constant) -> Type:
        if isinstance(node.value, str):
            return "literal"
        if isinstance(node.value, bool) or not isinstance(node.value, (int, float)):
            raise self.fail(f"{node.value!r} may not stand in an expression", "a number, quoted text, yes, no or none")
        if abs(node.value) > 1e12:
            raise self.fail("the number is too large")
        return Kind.NUMBER

    def truth(self, node: ast.expr, depth: int) -> None:
        found = self.check(node, depth + 1)
        if found != "yes/no":
            raise self.fail(f"yes or no is wanted beside and, or, not; {ast.unparse(node)} is {_word(found)}")

    def negative(self, node: ast.UnaryOp, depth: int) -> Type:
        found = self.check(node.operand, depth + 1)
        if not isinstance(found, Kind) or found in _DIFFERENCE:
            raise self.fail(f"a minus sign cannot stand before {_word(found)}")
        return found

    def arithmetic(self, node: ast.BinOp, depth: int) -> Type:
        operator = _BINARY[type(node.op)]
        left, right = self.check(node.left, depth + 1), self.check(node.right, depth + 1)
        if right == "literal" and isinstance(left, Kind):
            right = self.literal(node.right, literal_kind(left, operator))
        elif left == "literal" and isinstance(right, Kind):
            left = self.literal(node.left, literal_kind(right, operator))
        result = _result_kind(left, right, operator)
        if result is None:
            raise self.fail(
                f"{_word(left)} {operator} {_word(right)} has no meaning here",
                "the same kind on both sides of + and -; a number beside * and /, never with a temperature or pressure",
            )
        return result

    def literal(self, node: ast.expr, kind: Kind) -> Kind:
        assert isinstance(node, ast.Constant)
        _parse_literal(str(node.value), kind, self.text)
        return kind

    def comparison(self, node: ast.Compare, depth: int) -> Type:
        left = node.left
        for operator, right in zip(node.ops, node.comparators, strict=True):
            self.pair(left, _COMPARISON[type(operator)], right, depth)
            left = right
        return "yes/no"

    def pair(self, left: ast.expr, operator: str, right: ast.expr, depth: int) -> None:
        if operator in ("is", "is not"):
            self.name(left)
            if dotted_name(right) != "none":
                raise self.fail("'is' asks only whether something is stated: write 'is none' or 'is not none'")
            return
        first = self.check(left, depth + 1)
        if operator in ("in", "not in"):
            if not isinstance(right, (ast.Tuple, ast.List)) or first != "text":
                raise self.fail("'in' wants a name with words and a list of quoted words, such as x in ('a', 'b')")
            for element in right.elts:
                self.same(left, "text", element, self.check(element, depth + 1), "==")
            return
        self.same(left, first, right, self.check(right, depth + 1), operator)

    def same(self, left: ast.expr, first: Type, right: ast.expr, second: Type, operator: str) -> None:
        """Both sides can be compared; quoted text is read as what the other side is."""
        if first == "literal":
            left, first, right, second = right, second, left, first
        if second == "literal" and isinstance(first, Kind):
            second = self.literal(right, first)
        if first == "text" and second == "literal":
            self.word(left, right)
            second = "text"
        if first != second or first in ("part", "none", "literal"):
            raise self.fail(f"{_word(first)} cannot be compared with {_word(second)}")
        if not isinstance(first, Kind) and operator not in ("==", "!="):
            raise self.fail(f"{operator} wants quantities; words are compared with == or in")

    def word(self, named: ast.expr, quoted: ast.expr) -> None:
        assert isinstance(quoted, ast.Constant)
        choices = self.name(named).choices
        if choices and quoted.value not in choices:
            raise self.fail(
                f"{quoted.value!r} is no word that {dotted_name(named)} can take",
                ", ".join(choices),
                nearest(str(quoted.value), choices),
            )


def _what(node: ast.AST) -> str:
    names = {
        "Call": "a call",
        "Subscript": "an index",
        "Lambda": "a lambda",
        "IfExp": "if ... else",
        "Starred": "a star",
    }
    return names.get(type(node).__name__, f"this ({type(node).__name__})")


def _word(found: Type) -> str:
    return found.value if isinstance(found, Kind) else {"literal": "quoted text", "part": "a part"}.get(found, found)


def _result_kind(left: Type, right: Type, operator: str) -> Kind | None:
    """The kind of a sum, difference, product or quotient; None where it has no meaning."""
    if not (isinstance(left, Kind) and isinstance(right, Kind)):
        return None
    plain = (Kind.NUMBER, Kind.RATIO)
    if operator in ("+", "-"):
        if left in _DIFFERENCE:
            if right is _DIFFERENCE[left]:
                return left
            return _DIFFERENCE[left] if operator == "-" and right is left else None
        if right in _DIFFERENCE:
            return right if operator == "+" and left is _DIFFERENCE[right] else None
        return left if left is right else None
    if left in _DIFFERENCE or right in _DIFFERENCE:
        return None
    if right in plain:
        return left
    if operator == "*":
        return right if left in plain else None
    return Kind.NUMBER if left is right else None
