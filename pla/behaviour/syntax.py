"""The syntax of equations: grammar, tree, and syntax errors in the words of the language."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import lru_cache
from typing import TYPE_CHECKING, Any, Literal

from pla.behaviour.problem import Problem
from pla.behaviour.signals import RESERVED

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from lark import Lark, Token

__all__ = [
    "Comparison",
    "Constant",
    "Gate",
    "Node",
    "Number",
    "Reference",
    "parse_equation",
    "references",
]

# Binding from loosest to tightest: OR, XOR, AND, not, comparison, complement. LALR(1).
_GRAMMAR = r"""
start: disjunction
disjunction: exclusive ((PLUS | OR) exclusive)*
exclusive: conjunction ((OPLUS | XOR) conjunction)*
conjunction: negation ((DOT | AND)? negation)*
?negation: NOT negation -> inverse
         | comparison
?comparison: operand
           | reference COMPARE NUMBER -> compare
           | reference IN NUMBER DOTS NUMBER -> within
?operand: LEFT disjunction RIGHT -> group
        | LEFT disjunction RIGHT PRIME -> complement_group
        | reference -> bit
        | reference PRIME -> complement_bit
        | NUMBER -> constant
reference: NAME [OPEN NUMBER [COLON NUMBER] CLOSE]

PLUS: "+"
OR: "or"
OPLUS: "⊕"
XOR: "xor"
DOT: "·"
AND: "and"
NOT: "not"
IN: "in"
LEFT: "("
RIGHT: ")"
OPEN: "["
CLOSE: "]"
COLON: ":"
DOTS: ".."
PRIME: "'"
COMPARE: "==" | "!=" | "<=" | ">=" | "<" | ">"
NAME: /[A-Za-z_][A-Za-z0-9_]*/
NUMBER: /[0-9][A-Za-z0-9_]*/
%ignore /[ \t\n]+/
"""

_DEEPEST = 100

_HINTS = {
    "=": "equality is written ==",
    "&": "AND is a space, · or and",
    "*": "AND is a space, · or and",
    ".": "AND is a space, · or and; a range is a..b",
    "|": "OR is + or or",
    ",": "OR is + or or",
    "^": "XOR is ⊕ or xor",
    "!": "the complement is a' or not a",
    "~": "the complement is a' or not a",
    "/": "the complement is a' or not a",
    "-": "the complement is a' or not a",
    "’": "the complement is written with the straight sign '",
    "′": "the complement is written with the straight sign '",
    "`": "the complement is written with the straight sign '",
    '"': "the complement is written with the straight sign '",
    "≠": "written !=",
    "≤": "written <=",
    "≥": "written >=",
}


@dataclass(frozen=True, slots=True)
class Number:
    """A number as written."""

    text: str
    start: int


@dataclass(frozen=True, slots=True)
class Constant:
    """0 or 1 (checked later: any number)."""

    number: Number
    depth: int = 1


@dataclass(frozen=True, slots=True)
class Reference:
    """A name, a bit ``name[high]`` or a part ``name[high:low]``."""

    name: str
    high: Number | None
    low: Number | None
    start: int
    depth: int = 1


@dataclass(frozen=True, slots=True)
class Comparison:
    """A number field against a number; with `operator` ``in`` against ``first..last``."""

    reference: Reference
    operator: str
    first: Number
    last: Number
    depth: int = 1


@dataclass(frozen=True, slots=True)
class Gate:
    """``not`` of one item, or ``and``, ``xor``, ``or`` of several."""

    operator: Literal["not", "and", "xor", "or"]
    items: tuple[Node, ...]
    depth: int


Node = Constant | Reference | Comparison | Gate


def parse_equation(text: str) -> Node:
    """The tree of an equation.

    Raises:
        Problem: For anything that the language does not have, at its offset.
    """
    from lark.exceptions import UnexpectedCharacters, UnexpectedToken  # noqa: PLC0415

    if not text.strip():
        raise Problem("EQUATION-EMPTY", "the equation is empty", "the constants are 0 and 1")
    try:
        tree: Any = _parser().parse(text)
    except UnexpectedCharacters as fault:
        raise _unexpected_sign(text, fault.pos_in_stream or 0) from None
    except UnexpectedToken as fault:
        raise _unexpected_token(text, fault.token, fault.accepts or fault.expected) from None
    node: Node = tree
    if node.depth > _DEEPEST:
        raise Problem(
            "EQUATION-DEEP",
            f"the equation is nested {node.depth} levels deep, at most {_DEEPEST} are read",
        )
    return node


def references(node: Node) -> Iterator[Reference]:
    """Every name in a tree, in order of the text."""
    if isinstance(node, Gate):
        for item in node.items:
            yield from references(item)
    elif isinstance(node, Reference):
        yield node
    elif isinstance(node, Comparison):
        yield node.reference


@lru_cache(maxsize=1)
def _parser() -> Lark:
    # Imported and built on first use: a design without equations does not pay for it.
    from lark import Lark, Transformer, v_args  # noqa: PLC0415

    class Builder(Transformer):  # type: ignore[type-arg]
        """Builds the tree while parsing, so that nesting costs no Python stack."""

    methods = {
        "start": lambda node: node,
        "disjunction": lambda *items: _gate("or", items),
        "exclusive": lambda *items: _gate("xor", items),
        "conjunction": lambda *items: _gate("and", items),
        "inverse": lambda _, node: Gate("not", (node,), node.depth + 1),
        "group": lambda _left, node, _right: replace(node, depth=node.depth + 1),
        "complement_group": lambda _l, node, _r, _p: Gate("not", (node,), node.depth + 2),
        "bit": lambda node: node,
        "complement_bit": lambda node, _: Gate("not", (node,), 2),
        "constant": lambda token: Constant(_number(token)),
        "compare": lambda ref, op, a: Comparison(ref, str(op), _number(a), _number(a)),
        "within": lambda ref, _in, a, _dots, b: Comparison(ref, "in", _number(a), _number(b)),
        "reference": _reference,
    }
    for name, method in methods.items():
        setattr(Builder, name, v_args(inline=True)(_ignoring_self(method)))
    return Lark(
        _GRAMMAR,
        parser="lalr",
        lexer="basic",
        transformer=Builder(),
        keep_all_tokens=True,
        maybe_placeholders=False,
    )


def _ignoring_self(method: Any) -> Any:
    return lambda _self, *arguments: method(*arguments)


def _number(token: Token) -> Number:
    return Number(str(token), token.start_pos or 0)


def _reference(name: Token, *rest: Token) -> Reference:
    numbers = [_number(t) for t in rest if t.type == "NUMBER"]
    high = numbers[0] if numbers else None
    low = numbers[1] if len(numbers) > 1 else None
    return Reference(str(name), high, low, name.start_pos or 0)


def _gate(operator: Literal["and", "xor", "or"], items: tuple[Any, ...]) -> Node:
    nodes: tuple[Node, ...] = tuple(i for i in items if not hasattr(i, "type"))
    if len(nodes) == 1:
        return nodes[0]
    return Gate(operator, nodes, 1 + max(n.depth for n in nodes))


def _unexpected_sign(text: str, offset: int) -> Problem:
    sign = text[offset]
    hint = _HINTS.get(sign, "AND is a space, · or and; OR is + or or; XOR is ⊕ or xor; NOT is '")
    if sign.isalpha():
        hint = "names are made of the letters A to Z and a to z, digits and underscores"
    return Problem(
        "EQUATION-SYNTAX", f"{sign!r} has no meaning in an equation", hint, offset=offset
    )


def _unexpected_token(text: str, token: Token, accepted: Iterable[str]) -> Problem:
    at_end = token.type == "$END"
    offset = len(text.rstrip()) if at_end else token.start_pos or 0
    found = "the equation ends" if at_end else f"found {str(token)!r}"
    accepts = set(accepted)
    hint = None
    if token.type == "PRIME":
        hint = "' follows a name, a bit or a closing parenthesis"
    elif token.type in ("COMPARE", "IN"):
        hint = "a comparison is a bus or part, an operator, and a number: step >= 7"
    elif "NUMBER" in accepts and "NAME" not in accepts and token.type == "NAME":
        hint = "a bus is compared with a number, not with a signal"
    elif str(token).lower() in RESERVED:
        hint = f"{str(token)!r} is a reserved word"
    return Problem(
        "EQUATION-SYNTAX", f"{found}, expected {_expected(accepts)}", hint, offset=offset
    )


def _expected(accepts: set[str]) -> str:
    """The acceptable tokens in words."""
    words = []
    if "NAME" in accepts:
        words.append("a name, 0, 1, ( or not" if "LEFT" in accepts else "a name")
        # Where an operand may follow without an operator, everything else may follow, too.
        if "AND" not in accepts:
            return words[0]
    elif "NUMBER" in accepts:
        words.append("a number")
    if "AND" in accepts:
        words.append("an operator")
    if "COMPARE" in accepts:
        words.append("a comparison")
    signs = {"PRIME": "'", "RIGHT": ")", "CLOSE": "]", "COLON": ":", "DOTS": ".."}
    words += [sign for kind, sign in signs.items() if kind in accepts]
    if "$END" in accepts:
        words.append("the end")
    return " or ".join(filter(None, (", ".join(words[:-1]), words[-1])))
