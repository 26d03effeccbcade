"""Every way of writing a number (docs/formats.md, "Writing a number"), read into something that can be drawn from.

Draws are made the plain way (normals, uniforms, choices) and those outside the bounds are drawn again: the
distribution given that the value lies inside.
"""

import csv
import re
from dataclasses import dataclass, field
from pathlib import Path
from statistics import NormalDist

import numpy as np

from units import factor, to_si

UNBOUNDED = (-np.inf, np.inf)
NUMBER = r"[+-]?(?:\d+(?:\.\d+)?|\.\d+)(?:\(\d+\))?(?:[eE][+-]?\d+)?"


@dataclass
class Free:
    """A range that the organism chooses from."""

    low: float
    high: float
    typical: float
    logarithmic: bool


@dataclass
class Spread:
    """A number that is drawn. `draw(random, n)` ignores bounds; `bounded` keeps to them."""

    kind: str
    of: tuple
    bounds: tuple = UNBOUNDED
    exact: bool = False
    rows: np.ndarray = field(default=None, repr=False)

    def raw(self, random, n):
        a = self.of
        match self.kind:
            case "exact":
                return np.full(n, a[0])
            case "normal":
                return random.normal(a[0], a[1], n)
            case "lognormal":
                return a[0] * np.exp(np.log(a[1]) * random.standard_normal(n))
            case "uniform":
                return random.uniform(a[0], a[1], n)
            case "log-uniform":
                return np.exp(random.uniform(np.log(a[0]), np.log(a[1]), n))
            case "triangular":
                return random.triangular(a[0], a[1], a[2], n)
            case "discrete":
                values, weights = np.array(a[0]), np.array(a[1])
                return random.choice(values, n, p=weights / weights.sum())
            case "sample":
                return self.rows[random.integers(len(self.rows), size=n)]
        raise ValueError(f"no way to draw from {self.kind}")

    def bounded(self, random, n):
        values = self.raw(random, n)
        while True:
            outside = np.flatnonzero((values < self.bounds[0]) | (values > self.bounds[1]))
            if outside.size == 0:
                return values
            values[outside] = self.raw(random, outside.size)


def read(node, bounds=UNBOUNDED, folder=None):
    """A written number: a text, or a map of one of the documented forms."""
    if isinstance(node, str):
        spread = text(node)
    elif "value" in node:
        spread = text(node["value"])
    elif "anywhere_in" in node:
        return free(node)
    elif "mean" in node:
        spread = Spread("normal", (one(node["mean"]), difference(node["sd"])))
    elif "median" in node:
        spread = Spread("lognormal", (one(node["median"]), one(node["factor"])))
    elif "low" in node:
        spread = interval(node)
    elif "mode" in node:
        spread = Spread("triangular", tuple(one(node[key]) for key in ("min", "mode", "max")))
    elif "min" in node:
        kind = "log-uniform" if node.get("scale") == "log" else "uniform"
        spread = Spread(kind, (one(node["min"]), one(node["max"])))
    elif "values" in node:
        values = [one(value) for value in node["values"]]
        weights = [float(weight) for weight in node.get("weights", ["1"] * len(values))]
        spread = Spread("discrete", (values, weights))
    elif "sample" in node:
        spread = sample(node, folder)
    else:
        raise ValueError(f"no known form: {node}")
    spread.bounds = bounds
    return spread


def plain(written):
    """A text as pasted from papers, in the signs that the patterns below use."""
    written = written.replace("\u2212", "-").replace("\u00a0", " ").replace("\u202f", " ").strip()
    written = re.sub(r"\+\s*/\s*-|\+-", "±", written)
    written = re.sub(r"[×x*]\s*/?\s*÷|(?<![A-Za-z])[×x*]\s*/", "⋇", written)
    tens = r"10\s*(?:\^\s*\(?([+-]?\d+)\)?|([⁻⁺]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+))"
    raised = lambda m: m[1] or m[2].translate(str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺", "0123456789-+"))  # noqa: E731
    written = re.sub(r"\s*[×x*·]\s*" + tens, lambda m: "e" + raised(m), written)
    return re.sub(r"^" + tens, lambda m: "1e" + raised(m), written)


def text(written):
    """`210 nm`, `210 ± 30 nm`, `(210 ± 30) nm`, `210(30) nm`, `210 nm ×/÷ 1.5`, with `(k=2)` or `(95 %)`."""
    rest, expanded = plain(written), 1.0
    if trailing := re.search(r"\((?:k\s*=\s*([\d.]+)|([\d.]+)\s*%)\)$", rest):
        rest = rest[: trailing.start()].strip()
        expanded = float(trailing[1]) if trailing[1] else coverage_factor(float(trailing[2]) / 100)
    if "⋇" in rest:
        median, spread = rest.split("⋇")
        return Spread("lognormal", (one(median), float(spread) ** (1 / expanded)))
    if group := re.fullmatch(rf"\(\s*({NUMBER})\s*±\s*({NUMBER})\s*\)(e[+-]?\d+)?(.*)", rest):
        power = group[3] or ""
        mean, sd, unit = float(group[1] + power), float(group[2] + power), group[4]
        return Spread("normal", (to_si(mean, unit), sd * factor(unit) / expanded))
    if "±" in rest:
        mean, sd = (re.fullmatch(rf"\s*({NUMBER})(.*)", side) for side in rest.split("±"))
        unit = mean[2] if mean[2].strip() else sd[2]
        return Spread("normal", (to_si(float(mean[1]), unit), float(sd[1]) * factor(sd[2]) / expanded))
    number, unit = re.fullmatch(rf"({NUMBER})(.*)", rest).groups()
    if digits := re.search(r"\((\d+)\)", number):
        shown = number.replace(digits[0], "")
        mantissa, _, power = shown.lower().partition("e")
        places = len(mantissa.partition(".")[2])
        sd = float(f"{digits[1]}e{int(power or 0) - places}")
        return Spread("normal", (to_si(float(shown), unit), sd * factor(unit) / expanded))
    return Spread("exact", (to_si(float(number), unit),), exact=True)


def one(written):
    """A text that is one number with its unit, in SI units."""
    number, unit = re.fullmatch(rf"({NUMBER})(.*)", plain(written)).groups()
    return to_si(float(number), unit)


def difference(written):
    """One number with its unit, as a difference: 10 °C is 10 K."""
    number, unit = re.fullmatch(rf"({NUMBER})(.*)", plain(written)).groups()
    return float(number) * factor(unit)


def coverage_factor(coverage):
    return NormalDist().inv_cdf((1 + coverage) / 2)


def interval(node):
    """From a coverage interval with equal tails."""
    low, high = one(node["low"]), one(node["high"])
    z = coverage_factor(one(node["coverage"]))
    if node["distribution"] == "normal":
        return Spread("normal", ((low + high) / 2, (high - low) / 2 / z))
    return Spread("lognormal", (np.sqrt(low * high), (high / low) ** (0.5 / z)))


def free(node):
    """A free range; its scale is logarithmic where it spans a decade or more, unless it says otherwise."""
    low, high = (one(end) for end in node["anywhere_in"])
    logarithmic = node["scale"] == "log" if "scale" in node else low > 0 and high / low >= 10
    middle = np.sqrt(low * high) if logarithmic else (low + high) / 2
    return Free(low, high, one(node["typical"]) if "typical" in node else middle, logarithmic)


def sample(node, folder):
    """Rows of a data file that stands beside the candidate."""
    with open(Path(folder) / node["sample"], newline="", encoding="utf-8-sig") as file:
        table = csv.DictReader(file, skipinitialspace=True)
        rows = [to_si(float(row[node["column"]]), node["unit"]) for row in table]
    return Spread("sample", (node["sample"],), rows=np.array(rows))
