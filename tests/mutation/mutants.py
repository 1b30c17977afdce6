"""Which mutants there are: small wrong changes of a source file, and what each of them changes in the compiled code.

The changes are those of cosmic-ray. Chosen are the ones that a slip of the pen could make and a test could notice:

- every number up and down by one; a condition turned round (`not`), a `not` left out, `and` for `or`, True for False;
- each comparison moved by its boundary (`<` to `<=`), turned round (`<` to `>=`), `==` to `!=`, `is` to `is not`;
- plus for minus, times for divide, and plus for times, each both ways; power to times; a minus sign left out;
- `|` for `&` between sets and flags; whole division to division; shifts one for the other;
- a loop that never runs, `break` for `continue`, an `except` that catches nothing, a decorator left out.

Left out, with the reason: bit operations and shifts for arithmetic, and `~`, die at once by TypeError on floats;
whole division, remainder and power for `+ - * /` show nothing that the kept changes do not; `is` for `==` and the
other orders of a comparison are the same as a kept change wherever the three cases (less, equal, more) are told apart
by the tests; `+x` for `-x` is a minus sign left out; what stands in an annotation is never evaluated; `@rule` left out
dies at import.
Changes that compile to the same code as the original, or as an earlier mutant of the file, are counted once.
"""

from __future__ import annotations

import ast
import itertools
from collections.abc import Iterator
from dataclasses import dataclass
from types import CodeType

import cosmic_ray.plugins
from cosmic_ray.ast import ast_nodes, get_ast
from cosmic_ray.mutating import mutate_code

ARITHMETIC = "Add_Sub Sub_Add Mul_Div Div_Mul Add_Mul Mul_Add Sub_Mul Div_Sub Pow_Mul FloorDiv_Div"
BITS = "BitOr_BitAnd BitAnd_BitOr LShift_RShift RShift_LShift"
COMPARISONS = "Lt_LtE Lt_GtE LtE_Lt LtE_Gt Gt_GtE Gt_LtE GtE_Gt GtE_Lt Eq_NotEq NotEq_Eq Is_IsNot IsNot_Is"
OPERATORS = (
    *(f"ReplaceBinaryOperator_{change}" for change in f"{ARITHMETIC} {BITS}".split()),
    *(f"ReplaceComparisonOperator_{change}" for change in COMPARISONS.split()),
    *("ReplaceUnaryOperator_Delete_Not", "ReplaceUnaryOperator_Delete_USub", "AddNot", "NumberReplacer"),
    *("ReplaceAndWithOr", "ReplaceOrWithAnd", "ReplaceTrueWithFalse", "ReplaceFalseWithTrue", "ZeroIterationForLoop"),
    *("ReplaceBreakWithContinue", "ReplaceContinueWithBreak", "ExceptionReplacer", "RemoveDecorator"),
)
_CO_OPTIMIZED = 1  # set for functions, lambdas and comprehensions; not for modules and class bodies
Place = tuple[int, int]


@dataclass(frozen=True)
class Spot:
    """A place where an operator may act; `key` stays the same while the line and its function keep their text."""

    file: str
    function: str
    operator: str
    before: str  # the line, without indent
    nth: int  # among the spots that agree in all of the above
    line: int
    statement: tuple[int, int]  # first and last line of the statement, or of its head
    part: tuple[int, int]  # lines of the top-level statement, as of a slice
    occurrence: int

    @property
    def key(self) -> str:
        return "\t".join((self.file, self.function, self.operator, self.before, str(self.nth)))


@dataclass(frozen=True)
class Mutant:
    """A changed source text that compiles to something else than the original does."""

    spot: Spot
    source: str
    after: str


class AtImportError(Exception):
    """The change acts while the module is imported, so replacing functions afterwards comes too late."""


def spots(file: str, source: str) -> list[Spot]:
    """Every spot of a file, top-level statement by top-level statement, in the order of the operators."""
    lines = source.splitlines(keepends=True)
    heads, unevaluated = _layout(source)
    seen: dict[tuple[str, ...], int] = {}
    found = []
    for part in _parts(source):
        nodes = list(ast_nodes(get_ast("".join(lines[slice(*part)]))))
        for operator in OPERATORS:
            acting = cosmic_ray.plugins.get_operator(f"core/{operator}")()
            positions = itertools.chain.from_iterable(acting.mutation_positions(node) for node in nodes)
            for occurrence, ((line_in_part, column), _) in enumerate(positions):
                line = line_in_part + part[0]
                if any(first <= (line, column) < last for first, last in unevaluated):
                    continue
                if lines[line - 1].startswith("*,", column):  # taken for a product, and stands in a signature
                    continue
                before = lines[line - 1].strip()
                if operator == "RemoveDecorator" and before.startswith("@rule("):
                    continue
                function, first, last = max((head for head in heads if head[1] <= line <= head[2]), key=lambda h: h[1])
                same = (function, operator, before)
                nth = seen[same] = seen.get(same, -1) + 1
                found.append(Spot(file, function, operator, before, nth, line, (first, last), part, occurrence))
    return found


def mutants(source: str, places: list[Spot]) -> Iterator[Mutant]:
    """The mutants at these spots of one file, each kind of compiled code once."""
    lines = source.splitlines(keepends=True)
    known = {_meaning(compile(source, "", "exec", dont_inherit=True))}
    for spot in places:
        acting = cosmic_ray.plugins.get_operator(f"core/{spot.operator}")()
        first, last = spot.part
        part = mutate_code("".join(lines[first:last]), acting, spot.occurrence)
        changed = "".join([*lines[:first], part, *lines[last:]])
        try:
            meaning = _meaning(compile(changed, "", "exec", dont_inherit=True))
        except (SyntaxError, ValueError):  # `/` for the bare `*` of a signature
            continue
        if meaning not in known:
            known.add(meaning)
            pairs = zip(lines, changed.splitlines(keepends=True), strict=False)
            after = next((new for old, new in pairs if old != new), "").strip()
            yield Mutant(spot, changed, after)


def swaps(old: CodeType, new: CodeType, inside: bool = False) -> list[tuple[CodeType, CodeType, bool]]:
    """Code objects of functions to be replaced, each with its replacement and whether another one holds it."""
    if old == new:
        return []
    nested = list(zip(_nested(old), _nested(new), strict=False))
    function = bool(old.co_flags & _CO_OPTIMIZED)
    if not function and (_own(old) != _own(new) or len(_nested(old)) != len(_nested(new))):
        raise AtImportError
    below = [swap for was, becomes in nested for swap in swaps(was, becomes, inside or function)]
    return [(old, new, inside), *below] if function else below


def _nested(code: CodeType) -> list[CodeType]:
    return [constant for constant in code.co_consts if isinstance(constant, CodeType)]


def _own(code: CodeType) -> tuple[object, ...]:
    """What a code object does, apart from the code inside it and from where it stands in the text."""
    constants = tuple("code" if isinstance(one, CodeType) else (type(one), repr(one)) for one in code.co_consts)
    arguments = (code.co_argcount, code.co_kwonlyargcount, code.co_posonlyargcount, code.co_flags)
    names = (code.co_names, code.co_varnames, code.co_freevars, code.co_cellvars)
    return (code.co_name, code.co_code, constants, arguments, names, code.co_exceptiontable)


def _meaning(code: CodeType) -> tuple[object, ...]:
    return (_own(code), *(_meaning(inner) for inner in _nested(code)))


def _parts(source: str) -> Iterator[tuple[int, int]]:
    """The top-level statements, which are read again for each mutant: less to read than the file."""
    for node in ast.parse(source).body:
        first = min([node.lineno, *(one.lineno for one in getattr(node, "decorator_list", []))])
        yield first - 1, node.end_lineno or node.lineno


def _layout(source: str) -> tuple[list[tuple[str, int, int]], list[tuple[Place, Place]]]:
    """The heads of all statements (function around it, first and last line), and the spans of all annotations."""
    lines = source.splitlines()
    heads: list[tuple[str, int, int]] = []
    unevaluated: list[tuple[Place, Place]] = []

    def place(line: int, byte: int) -> Place:
        return line, len(lines[line - 1].encode()[:byte].decode())

    def walk(node: ast.AST, function: str) -> None:
        for kind in ("annotation", "returns"):
            noted = getattr(node, kind, None)
            if isinstance(noted, ast.expr):
                ends = place(noted.end_lineno or 0, noted.end_col_offset or 0)
                unevaluated.append((place(noted.lineno, noted.col_offset), ends))
        if isinstance(node, (ast.stmt, ast.ExceptHandler, ast.match_case)):
            head = node.pattern if isinstance(node, ast.match_case) else node
            body = getattr(node, "body", None)
            decorators = getattr(node, "decorator_list", [])
            first = min([head.lineno, *(one.lineno for one in decorators)])
            last = max(head.lineno, body[0].lineno - 1) if body else head.end_lineno or head.lineno
            heads.append((function, first, last))
        if isinstance(node, (ast.FunctionDef, ast.ClassDef)):
            function = f"{function}.{node.name}".lstrip(".")
        for child in ast.iter_child_nodes(node):
            walk(child, function)

    walk(ast.parse(source), "")
    return heads, unevaluated
