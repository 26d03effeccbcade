"""Times the program against vectorised NumPy that does the same work.

    python tests/reference/speed.py [--program PATH] [FILE]

The catalogue's formulas for one candidate become one straight Python function over NumPy arrays: every number is drawn
once by a NumPy generator, every quantity computed once, constants stay scalars, small powers are products, and the
arrays are short enough for the cache. It then takes the same quantiles, chances and joint chances. In NumPy's favour,
its time leaves out imports, reading and resolving, the search of free numbers, bounds, medians of other quantities and
the report; the program's time is that of the whole command. Nothing here decides a test.
"""

import argparse
import ast
import os
import statistics
import subprocess
import time
from pathlib import Path

import numpy as np

import catalogue
import run
from catalogue import by_attribute
from evaluate import Resolver
from units import to_si
from written import Free, read

DRAWS = 1_000_000
BLOCK = 16_384
REPEATS = 7
NAMES = {"ln": "log", "ln1p": "log1p", "atan": "arctan"}


class Writer(ast.NodeTransformer):
    """A formula as a NumPy expression, with the names that it needs defined before it."""

    def __init__(self, program, entry):
        self.program, self.entry = program, entry

    def visit_Name(self, node):
        return ast.Name("np.inf" if node.id == "infinity" else self.program.name(self.entry, node.id))

    def visit_Call(self, node):
        name, arguments = node.func.id, [self.visit(argument) for argument in node.args]
        if name in ("min", "max"):
            joined = arguments[0]
            for argument in arguments[1:]:
                joined = ast.Call(ast.Name("np.minimum" if name == "min" else "np.maximum"), [joined, argument], [])
            return joined
        if name == "choose":
            return ast.Call(ast.Name("np.where"), arguments, [])
        if name in self.entry.curves:
            form = self.entry.node["curves"][name]
            if form["between"] != "straight" or form["axes"] != "reciprocal-log":
                raise NotImplementedError(f"{name}: {form['between']} curves on axes {form['axes']}")
            at, gives = (np.array([catalogue.exact(x) for x in form[key]]) for key in ("at", "gives"))
            points = f"{(-1 / at).tolist()}, {np.log(gives).tolist()}"
            return ast.parse(f"np.exp(np.interp(-1 / ({ast.unparse(arguments[0])}), {points}))", mode="eval").body
        return ast.Call(ast.Name(f"np.{NAMES.get(name, name)}"), arguments, [])

    def visit_BinOp(self, node):
        left, right = self.visit(node.left), self.visit(node.right)
        if isinstance(node.op, ast.Pow) and isinstance(node.right, ast.Constant) and node.right.value in (2, 3):
            base = self.program.define("power", ast.unparse(left))
            return ast.parse("*".join([base] * node.right.value), mode="eval").body
        return ast.BinOp(left, node.op, right)


class Program:
    """The lines of the function, in the order of need."""

    def __init__(self, resolver, chosen):
        self.resolver, self.chosen = resolver, chosen
        self.lines, self.known, self.drawn = [], {}, 0

    def define(self, key, text):
        if text.isidentifier():
            return text
        variable = self.known.get(text)
        if variable is None:
            variable = self.known[text] = (
                f"{key.replace('-', '_').replace('.', '_').replace('!', '_')}_{len(self.lines)}"
            )
            self.lines.append(f"{variable} = {text}")
        return variable

    def draw(self, name, spread):
        key = f"draw of {name}"
        if key not in self.known:
            a = spread.of
            text = {
                "exact": lambda: repr(a[0]),
                "normal": lambda: f"random.normal({a[0]!r}, {a[1]!r}, n)",
                "lognormal": lambda: f"{a[0]!r} * np.exp({np.log(a[1])!r} * random.standard_normal(n))",
                "uniform": lambda: f"random.uniform({a[0]!r}, {a[1]!r}, n)",
                "triangular": lambda: f"random.triangular({a[0]!r}, {a[1]!r}, {a[2]!r}, n)",
            }[spread.kind]()
            self.drawn += not spread.exact
            self.known[key] = self.define(name, f"({text})" if spread.exact else text)
        return self.known[key]

    def name(self, entry, name):
        if name in entry.parameters:
            full = f"{entry.id}.{name}"
            adopted = self.resolver.candidate.adopted.get(full)
            return self.draw(full, adopted or read(by_attribute(entry.parameters[name][0], self.resolver.attributes)))
        if name in self.resolver.catalogue.constants:
            return self.define(name, f"({self.resolver.catalogue.constants[name]!r})")
        kind, what = self.resolver.source(name)
        if isinstance(what, Free):
            return self.define(name, f"({self.chosen[name]!r})")
        if kind != "relation":
            return self.draw(name, what)
        return self.define(name, self.side(what, 0))

    def side(self, entry, at):
        text = ast.unparse(Writer(self, entry).visit(ast.parse(ast.unparse(entry.formulas[at].tree), mode="eval").body))
        if "scatter" in entry.node:
            dex = read(entry.node["scatter"]).of[0]
            spread = read({"median": "1", "factor": repr(10**dex)})
            text = f"({text}) * {self.draw(f'{entry.id}!scatter', spread)}"
        return text

    def function(self, constraints):
        sides = [
            (self.define(entry.id, self.side(entry, 0)), self.define(entry.id, self.side(entry, 1)))
            for entry in constraints
        ]
        body = "\n    ".join(self.lines)
        pairs = ", ".join(f"({has}, {needs})" for has, needs in sides)
        scope = {"np": np}
        exec(compile(f"def sides(random, n):\n    {body}\n    return [{pairs}]", "formulas", "exec"), scope)  # noqa: S102
        return scope["sides"]


def numpy_run(sides, constraints, seed):
    """Margins of all draws in blocks, then what a report needs of them."""
    random = np.random.default_rng(seed)
    margins = np.empty((constraints, DRAWS), np.float32)
    holding, together = np.zeros(constraints, int), 0
    for start in range(0, DRAWS, BLOCK):
        n = min(BLOCK, DRAWS - start)
        everything = np.ones(n, bool)
        with np.errstate(all="ignore"):
            for at, (available, required) in enumerate(sides(random, n)):
                margins[at, start : start + n] = np.log10(available / required)
                holds = np.broadcast_to(available >= required, n)
                holding[at] += np.count_nonzero(holds)
                everything &= holds
        together += np.count_nonzero(everything)
    ranks = [DRAWS // 20, (DRAWS - 1) // 2, DRAWS - DRAWS // 20 - 1]
    quantiles = [np.partition(row, ranks)[ranks] for row in margins]
    return holding / DRAWS, together / DRAWS, quantiles


def main():
    arguments = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    arguments.add_argument("--program", default=run.ROOT / "target/release/hypobiont")
    arguments.add_argument(
        "file", nargs="?", type=Path, default=run.ROOT / "catalogs/candidates/veskar-spheroid-small.yaml"
    )
    asked = arguments.parse_args()
    ours = catalogue.Catalogue(run.ROOT / "catalogs")
    candidate = catalogue.candidates(asked.file, ours)[0]
    [printed] = run.screen(asked.program, asked.file, 65_536, 1, [])
    chosen = {node["name"]: to_si(node["chosen"], node["unit"]) for node in printed["quantities"] if "chosen" in node}
    resolver = Resolver(ours, candidate)
    constraints = [entry for entry in ours.constraints.values() if resolver.standing(entry) == "ready"]
    program = Program(resolver, chosen)
    sides = program.function(constraints)
    size = f"{len(constraints)} constraints, {program.drawn} uncertain numbers, {len(program.lines)} lines"
    print(f"{candidate.name}: {size}, {DRAWS} draws")

    chances = dict(zip((entry.id for entry in constraints), numpy_run(sides, len(constraints), 1)[0]))
    apart = max(abs(node["chance"] - chances[node["id"]]) for node in printed["constraints"] if "chance" in node)
    print(f"largest difference of a chance: {apart:.4f}")

    def command(threads):
        words = [asked.program, "screen", asked.file, "--draws", str(DRAWS), "--format", "json"]
        environment = os.environ | {"RAYON_NUM_THREADS": str(threads)}
        subprocess.run(
            list(map(str, words)), env=environment, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL, check=True
        )

    ways = {
        "NumPy, one thread": lambda: numpy_run(sides, len(constraints), 1),
        "hypobiont, one thread": lambda: command(1),
        "hypobiont, two threads": lambda: command(2),
    }
    times = {name: [] for name in ways}
    for _ in range(REPEATS):
        for name, way in ways.items():
            start, spent = time.perf_counter(), processor_time()
            way()
            times[name].append((time.perf_counter() - start, processor_time() - spent))
    medians = {name: [statistics.median(column) for column in zip(*each)] for name, each in times.items()}
    for name, (elapsed, spent) in medians.items():
        print(f"{name}: medians of {REPEATS}: {elapsed:.3f} s elapsed, {spent:.3f} s of processor time")
    base = medians["NumPy, one thread"]
    for name in list(ways)[1:]:
        elapsed, spent = (ours / theirs for ours, theirs in zip(base, medians[name]))
        print(f"NumPy over {name}: {elapsed:.2f} elapsed, {spent:.2f} processor time")


def processor_time():
    """Of this process and of the programs that it has run; unlike elapsed time, not moved by what else runs."""
    spent = os.times()
    return spent.user + spent.system + spent.children_user + spent.children_system


if __name__ == "__main__":
    main()
