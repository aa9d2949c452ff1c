"""Translates the formulas of published.json into the formulas and steps of audit files.

The formulas of published.json are Python expressions (`x**2`, `poly(a, t)`, `cheb(c, t)`); audit
files write `pow(x, 2)`, `horner(a, t)` and `clenshaw(c, t)`. The translation works on the syntax
tree and keeps every literal as the text that was written, so no number passes through a float.
"""

import ast
import copy
import re
from decimal import Decimal, localcontext
from fractions import Fraction

FUNCTIONS = frozenset(
    "pow sqrt cbrt exp exp2 expm1 log log2 log10 log1p sin cos tan asin acos atan sinh cosh tanh "
    "asinh acosh atanh erf erfc fabs".split()
)
CONSTANTS = frozenset(("pi", "e"))
STEP_FUNCTIONS = frozenset(("horner", "clenshaw"))
RESERVED = FUNCTIONS | CONSTANTS | STEP_FUNCTIONS | {"x"}

# What published.json writes beside the functions themselves.
NOTATION = frozenset(("poly", "cheb", "abs", "exp10"))

DECIMAL = re.compile(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?$")
HEXADECIMAL = re.compile(r"([+-]?)0x([0-9a-f]+)(?:\.([0-9a-f]*))?p([+-]?\d+)$", re.IGNORECASE)

ADDITIVE, MULTIPLICATIVE, UNARY, ATOM = range(4)


def exact(text):
    """The rational number that a literal stands for."""
    if DECIMAL.match(text):
        return Fraction(text)
    match = HEXADECIMAL.match(text)
    if match:
        sign, whole, part, exponent = match.groups()
        part = part or ""
        value = Fraction(int(whole + part, 16), 16 ** len(part)) * Fraction(2) ** int(exponent)
        return -value if sign == "-" else value
    if "/" in text:
        numerator, denominator = text.split("/")
        return exact(numerator) / exact(denominator)
    raise ValueError(f"not a literal: {text}")


def decimal_text(value):
    """The exact decimal text of a rational number, or its ratio where there is none."""
    denominator = value.denominator
    for prime in (2, 5):
        while denominator % prime == 0:
            denominator //= prime
    if denominator != 1:
        return f"{value.numerator}/{value.denominator}"
    with localcontext() as context:
        context.prec = 2000
        quotient = Decimal(value.numerator) / Decimal(value.denominator)
        return str(quotient.normalize() if quotient else Decimal(0)).lower()


def parse(text):
    """The syntax tree of a formula; every number carries its source text."""
    tree = ast.parse(text, mode="eval").body
    for node in ast.walk(tree):
        if isinstance(node, ast.Constant):
            node.text = ast.get_source_segment(text, node)
    return tree


def literal(text):
    """A number as a leaf of a tree."""
    node = ast.Constant(value=0)
    node.text = text
    return node


def substitute(tree, replacements):
    """The tree with names, or elements such as `a[0]`, replaced by trees, all at once."""

    class Replacement(ast.NodeTransformer):
        def visit_Name(self, node):
            return replacements.get(node.id, node)

        def visit_Subscript(self, node):
            return replacements.get(formula(node)) or self.generic_visit(node)

        def visit_Call(self, node):
            node.args = [self.visit(argument) for argument in node.args]
            return node

    return Replacement().visit(copy.deepcopy(tree))


def called(tree):
    """Names of the functions that a tree calls."""
    return {node.func.id for node in ast.walk(tree) if isinstance(node, ast.Call)}


def names(tree):
    """Names that a tree uses as values."""
    nodes = list(ast.walk(tree))
    functions = {id(node.func) for node in nodes if isinstance(node, ast.Call)}
    return {node.id for node in nodes if isinstance(node, ast.Name) and id(node) not in functions}


def formula(tree):
    """The tree in the notation of audit files."""
    return Writer({}).write(tree)


class Writer:
    """Writes a tree as audit files do, with as few parentheses as its shape allows.

    `hoisted` maps the text of a subexpression to the name of the step that computes it.
    """

    def __init__(self, hoisted):
        self.hoisted = hoisted

    def write(self, node):
        return self.at(node)[0]

    def within(self, node, level):
        text, own = self.at(node)
        return text if own >= level else f"({text})"

    def at(self, node):
        """The text of a node and how tightly it binds."""
        if self.hoisted:
            name = self.hoisted.get(formula(node))
            if name is not None:
                return name, ATOM
        return self.inside(node)

    def inside(self, node):
        if isinstance(node, ast.Constant):
            return node.text, UNARY if node.text.startswith("-") else ATOM
        if isinstance(node, ast.Name):
            return node.id, ATOM
        if isinstance(node, ast.Subscript):
            return f"{node.value.id}[{node.slice.value}]", ATOM
        if isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub):
            return "-" + self.within(node.operand, UNARY + 1), UNARY
        if isinstance(node, ast.Call):
            return self.call(node.func.id, node.args), ATOM
        if isinstance(node, ast.BinOp):
            return self.binary(node)
        raise ValueError(f"unexpected node {ast.dump(node)}")

    def call(self, function, arguments):
        written = [self.write(argument) for argument in arguments]
        if function == "exp10":
            return f"pow(10, {written[0]})"
        function = {"poly": "horner", "cheb": "clenshaw", "abs": "fabs"}.get(function, function)
        return f"{function}({', '.join(written)})"

    def binary(self, node):
        if isinstance(node.op, ast.Pow):
            return f"pow({self.write(node.left)}, {self.write(node.right)})", ATOM
        sign, level, right = {
            ast.Add: (" + ", ADDITIVE, MULTIPLICATIVE),
            ast.Sub: (" - ", ADDITIVE, MULTIPLICATIVE),
            ast.Mult: ("*", MULTIPLICATIVE, UNARY),
            ast.Div: ("/", MULTIPLICATIVE, UNARY),
        }[type(node.op)]
        return self.within(node.left, level) + sign + self.within(node.right, right), level


def steps(tree, first, taken):
    """Straight-line steps for a tree; `first` are steps that come before, `taken` names in use.

    The arguments of polynomials and every subexpression that occurs more than once get a step of
    their own.
    """
    counts = {}
    order = []
    wanted = set()

    def visit(node):
        if not isinstance(node, (ast.BinOp, ast.Call, ast.UnaryOp)):
            return
        key = formula(node)
        counts[key] = counts.get(key, 0) + 1
        if counts[key] > 1:
            return
        children = node.args if isinstance(node, ast.Call) else list(ast.iter_child_nodes(node))
        for child in children:
            visit(child)
        if isinstance(node, ast.Call) and node.func.id in ("poly", "cheb"):
            wanted.add(formula(node.args[1]))
        order.append((key, node))

    visit(tree)
    free = (name for name in "tsrwzhkm" if name not in taken)
    hoisted = {}
    lines = list(first)
    for key, node in order:
        rational = not names(node) and not called(node)
        if node is tree or rational or not (counts[key] > 1 or key in wanted):
            continue
        text = Writer(hoisted).inside(node)[0]
        hoisted[key] = next(free)
        lines.append(f"{hoisted[key]} = {text}")
    lines.append("y = " + Writer(hoisted).write(tree))
    return lines


def sparse(tree, coefficients):
    """A polynomial in x as {exponent: literal}, or None where the tree is not plainly one.

    Only shapes in which every coefficient stays a single literal are recognised, such as
    `1 - x**2/2 + x**4*poly(C, x**2)`: nothing is expanded.
    """
    if isinstance(tree, ast.Constant):
        return {0: tree.text}
    if isinstance(tree, ast.Name):
        return {1: "1"} if tree.id == "x" else None
    if isinstance(tree, ast.Subscript):
        return {0: coefficients[tree.value.id][tree.slice.value]}
    if isinstance(tree, ast.Call):
        power = monomial(sparse(tree.args[-1], coefficients))
        if tree.func.id != "poly" or not power:
            return None
        return {power * k: c for k, c in enumerate(coefficients[tree.args[0].id])}
    if not isinstance(tree, ast.BinOp):
        return None
    left, right = sparse(tree.left, coefficients), sparse(tree.right, coefficients)
    if left is None or right is None:
        return None
    if isinstance(tree.op, ast.Pow):
        power = monomial(left)
        return {power * int(right[0]): "1"} if power and list(right) == [0] else None
    if isinstance(tree.op, (ast.Add, ast.Sub)):
        if set(left) & set(right):
            return None
        if isinstance(tree.op, ast.Sub):
            right = {n: negated(text) for n, text in right.items()}
        return {**left, **right}
    if isinstance(tree.op, ast.Mult):
        for one, other in ((left, right), (right, left)):
            power = monomial(one)
            if power:
                return {power + n: text for n, text in other.items()}
        return None
    power = monomial(left)
    return {power: f"1/{right[0]}"} if power and list(right) == [0] else None


def negated(text):
    """The literal of opposite sign."""
    return text[1:] if text.startswith("-") else "-" + text.lstrip("+")


def monomial(terms):
    """n where the terms are x^n with n > 0, else None."""
    if terms and list(terms.values()) == ["1"] and list(terms) != [0]:
        return next(iter(terms))
    return None


def affine(tree):
    """(slope, constant) of an affine expression in x with rational numbers, or None."""
    if isinstance(tree, ast.Constant):
        return Fraction(0), exact(tree.text)
    if isinstance(tree, ast.Name) and tree.id == "x":
        return Fraction(1), Fraction(0)
    if isinstance(tree, ast.UnaryOp):
        inner = affine(tree.operand)
        return inner and (-inner[0], -inner[1])
    if not isinstance(tree, ast.BinOp):
        return None
    left, right = affine(tree.left), affine(tree.right)
    if left is None or right is None:
        return None
    if isinstance(tree.op, ast.Add):
        return left[0] + right[0], left[1] + right[1]
    if isinstance(tree.op, ast.Sub):
        return left[0] - right[0], left[1] - right[1]
    if isinstance(tree.op, ast.Mult) and (left[0] == 0 or right[0] == 0):
        return left[0] * right[1] + right[0] * left[1], left[1] * right[1]
    if isinstance(tree.op, ast.Div) and right[0] == 0:
        return left[0] / right[1], left[1] / right[1]
    return None
