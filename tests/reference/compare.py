"""What comparisons are made of: exact ones, and those of numbers that differ by sampling alone."""

from dataclasses import dataclass, field

import numpy as np

from units import to_si

LIMIT = 5.0  # standard errors
QUANTILES = {"low": 0.05, "median": 0.5, "high": 0.95}


@dataclass
class Comparison:
    """What was compared for one candidate, and what did not agree."""

    name: str
    deviations: list = field(default_factory=list)  # (standard errors, what)
    exact: int = 0
    faults: list = field(default_factory=list)
    exercised: set = field(default_factory=set)

    def holds(self, condition, fault):
        """An exact comparison."""
        self.exact += 1
        if not condition:
            self.faults.append(fault)

    def same(self, what, theirs, ours):
        self.holds(theirs == ours, f"{what}: the program says {theirs}, the reference {ours}")

    def share(self, what, theirs, their_draws, ours, our_draws):
        """Two shares of draws."""
        pooled = (theirs * their_draws + ours * our_draws) / (their_draws + our_draws)
        error = np.sqrt(pooled * (1 - pooled) * (1 / their_draws + 1 / our_draws))
        off = abs(theirs - ours)
        said = f"the program says {theirs:.6g}, the reference {ours:.6g}"
        self.deviates(off / error if error > 0 else 0.0 if off < 1e-12 else np.inf, what, said)

    def quantile(self, what, p, printed, their_draws, below, up_to, our_draws):
        """Whether a printed quantile has the rank that it should among our draws: the share `below` of them is less,
        the share `up_to` not more. Free of any assumption about the distribution."""
        rank = min(max(p, below), up_to)
        error = np.sqrt(p * (1 - p) * (1 / their_draws + 1 / our_draws))
        self.deviates(abs(rank - p) / error, what, f"{printed:.6g} is the {rank:.5f} quantile of the reference")

    def deviates(self, size, what, said):
        self.deviations.append((float(size), what))
        if not size <= LIMIT:
            self.faults.append(f"{what}: {said}: {size:.1f} standard errors off")


class Ranks:
    """Counts, block by block, how many draws lie below and up to printed quantiles."""

    def __init__(self, values, tolerance):
        self.values, self.tolerance = values, tolerance  # the tolerance is that of rounding
        self.below, self.up_to, self.draws = dict.fromkeys(values, 0), dict.fromkeys(values, 0), 0

    def add(self, draws):
        draws = np.where(np.isnan(draws), -np.inf, draws)  # what is not a number ranks lowest
        self.draws += draws.size
        for key, value in self.values.items():
            off = self.tolerance * abs(value) if np.isfinite(value) else 0.0
            self.below[key] += np.count_nonzero(draws < value - off)
            self.up_to[key] += np.count_nonzero(draws <= value + off)

    def judge(self, comparison, what, their_draws):
        for key, value in self.values.items():
            below, up_to = self.below[key] / self.draws, self.up_to[key] / self.draws
            comparison.quantile(f"{what} {key}", QUANTILES[key], value, their_draws, below, up_to, self.draws)


class Counts:
    """In how many draws which constraints hold together."""

    def __init__(self, ids):
        self.ids = list(ids)
        self.patterns, self.draws = {}, 0
        self.not_a_number = dict.fromkeys(ids, 0)

    def add(self, holds, draws):
        self.draws += draws
        code = sum((holds[id].astype(np.int64) << at for at, id in enumerate(self.ids)), np.zeros(draws, np.int64))
        for pattern, count in zip(*np.unique(code, return_counts=True)):
            self.patterns[int(pattern)] = self.patterns.get(int(pattern), 0) + int(count)

    def together(self, ids):
        """The share of draws in which all of these hold."""
        wanted = sum(1 << self.ids.index(id) for id in ids)
        return sum(count for pattern, count in self.patterns.items() if pattern & wanted == wanted) / self.draws


def quantiles(node, unit=None, empty=np.inf):
    """low, median and high of a JSON object, in SI units. An infinite one is null there: below where one above it is
    finite, else above; `empty` where none is finite."""
    values = {}
    for key in QUANTILES.keys() & node.keys():
        values[key] = node[key] if unit is None or node[key] is None else to_si(node[key], unit)
    finite = [QUANTILES[key] for key, value in values.items() if value is not None]
    for key, value in values.items():
        if value is None:
            values[key] = empty if not finite else -np.inf if QUANTILES[key] < max(finite) else np.inf
    return values
