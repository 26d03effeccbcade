"""The formula language (docs/formula-language.md) through Python's own parser, evaluated over arrays of draws."""

import ast
import math
import re

import numpy as np

from units import to_si

BINARY = {
    ast.Add: np.add,
    ast.Sub: np.subtract,
    ast.Mult: np.multiply,
    ast.Div: np.divide,
    ast.Pow: np.power,
}
COMPARE = {
    ast.Lt: np.less,
    ast.LtE: np.less_equal,
    ast.Gt: np.greater,
    ast.GtE: np.greater_equal,
    ast.Eq: np.equal,
}
FUNCTIONS = {
    "sqrt": np.sqrt,
    "cbrt": np.cbrt,
    "exp": np.exp,
    "expm1": np.expm1,
    "ln": np.log,
    "ln1p": np.log1p,
    "log10": np.log10,
    "sin": np.sin,
    "cos": np.cos,
    "tan": np.tan,
    "atan": np.arctan,
    "tanh": np.tanh,
    "erf": np.vectorize(math.erf, otypes=[float]),
    "erfc": np.vectorize(math.erfc, otypes=[float]),
    "abs": np.abs,
    "min": lambda *values: np.minimum.reduce(np.broadcast_arrays(*values)),
    "max": lambda *values: np.maximum.reduce(np.broadcast_arrays(*values)),
}


class Formula:
    """One formula, as Python's syntax tree."""

    def __init__(self, text):
        python = text.replace("−", "-").replace("×", "*").replace("·", "*")
        number = r"((?:\d+\.?\d*)(?:[eE][+-]?\d+)?)\s*\[([^\]]*)\]"
        python = re.sub(number, lambda m: f"({to_si(float(m[1]), m[2])!r})", python)
        python = re.sub(r"(?<![<>=])=(?!=)", "==", python.replace("^", "**"))
        self.tree = ast.parse(f"({python})", mode="eval").body
        named = {node.id for node in ast.walk(self.tree) if isinstance(node, ast.Name)}
        self.names = named - {"choose", "infinity"} - FUNCTIONS.keys()

    def value(self, of, curves):
        """Its value, with `of(name)` giving the values of names."""

        def walk(node):
            match node:
                case ast.Constant():
                    return float(node.value)
                case ast.Name("infinity"):
                    return math.inf
                case ast.Name():
                    return of(node.id)
                case ast.UnaryOp(ast.USub()):
                    return np.negative(walk(node.operand))
                case ast.UnaryOp(ast.Not()):
                    return np.logical_not(walk(node.operand))
                case ast.BoolOp():
                    join = np.logical_and if isinstance(node.op, ast.And) else np.logical_or
                    return join.reduce(np.broadcast_arrays(*map(walk, node.values)))
                case ast.BinOp():
                    return BINARY[type(node.op)](walk(node.left), walk(node.right))
                case ast.Compare() if len(node.ops) == 1:
                    return COMPARE[type(node.ops[0])](walk(node.left), walk(node.comparators[0]))
                case ast.Call(ast.Name("choose"), [condition, a, b]):
                    return np.where(walk(condition), walk(a), walk(b))
                case ast.Call(ast.Name(name), arguments):
                    function = curves[name] if name in curves else FUNCTIONS[name]
                    return function(*map(walk, arguments))
            raise ValueError(f"cannot evaluate {ast.dump(node)}")

        with np.errstate(all="ignore"):
            return walk(self.tree)


def curve(at, gives, axes, between, outside):
    """A function through points: straight, or by the monotone cubics of Fritsch and Butland (1984)."""
    of_argument, of_value = axes.split("-")
    # Turned round, a reciprocal increases with its argument.
    to_x = {"linear": lambda x: x, "log": np.log, "reciprocal": lambda x: -1 / x}[of_argument]
    to_y, from_y = {"linear": (lambda y: y, lambda y: y), "log": (np.log, np.exp)}[of_value]
    points, heights = to_x(np.array(at)), to_y(np.array(gives))
    if between == "monotone":
        slopes = monotone_slopes(points, heights)

    def value(x):
        x = np.asarray(x, dtype=float)
        with np.errstate(all="ignore"):
            place = to_x(np.clip(x, at[0], at[-1]))
        if between == "straight":
            y = np.interp(place, points, heights)
        else:
            k = np.clip(np.searchsorted(points, place, side="right") - 1, 0, len(points) - 2)
            y = hermite(place, points[k], points[k + 1], heights[k], heights[k + 1], slopes[k], slopes[k + 1])
        y = from_y(y)
        return np.where((x < at[0]) | (x > at[-1]), np.nan, y) if outside == "refuse" else y

    return value


def hermite(x, x0, x1, y0, y1, d0, d1):
    """The cubic through two points with given slopes, in the Hermite basis."""
    h = x1 - x0
    t = (x - x0) / h
    u = 1 - t
    return y0 * u * u * (1 + 2 * t) + y1 * t * t * (1 + 2 * u) + h * t * u * (d0 * u - d1 * t)


def monotone_slopes(x, y):
    """Slopes at the points. Inside: the harmonic mean of the neighbouring secants weighted by the widths, zero at a
    turning point. Ends: the parabola through three points, kept to the shape of the data."""
    h, secant = np.diff(x), np.diff(y) / np.diff(x)
    if len(h) == 1:
        return np.array([secant[0], secant[0]])
    inner = []
    for k in range(1, len(h)):
        a, b = secant[k - 1], secant[k]
        wide, narrow = h[k - 1] + 2 * h[k], 2 * h[k - 1] + h[k]
        inner.append(0.0 if a * b <= 0 else (wide + narrow) / (wide / a + narrow / b))

    def end(h0, h1, s0, s1):
        slope = ((2 * h0 + h1) * s0 - h0 * s1) / (h0 + h1)
        if slope * s0 <= 0:
            return 0.0
        return 3 * s0 if s0 * s1 <= 0 and abs(slope) > 3 * abs(s0) else slope

    return np.array([end(h[0], h[1], secant[0], secant[1]), *inner, end(h[-1], h[-2], secant[-1], secant[-2])])
