"""Looks for a better setting of the free numbers than the program's, by a search of another kind.

The objective is that of docs/method.md, "Free numbers"; the search here climbs from the program's choice, from the
typical values and from random places, by random points on one number at a time. It has draws of its own, so only what
is better by more than sampling can explain is reported.
"""

import numpy as np

from catalogue import BASES
from evaluate import Draws, margins

DRAWS = 8192
STARTS = 6  # random ones
PASSES = 3
POINTS = 6
# The program sees 4,096 draws and 17 points a number.
CHANCE = 0.02
DEX = 0.1
SAME = 0.005  # medians closer than this count as equal


class Objective:
    """What is maximised, over one set of draws."""

    def __init__(self, judge):
        self.judge = judge
        self.free = {name: what for name, (_, what) in sorted(judge.used.items()) if name in judge.chosen}
        self.draws = Draws(judge.resolver, {}, judge.random, DRAWS)
        self.constraints = [judge.catalogue.constraints[id] for id in judge.ready]
        resolver = judge.resolver
        self.strong = [resolver.basis(entry) != BASES[-1] for entry in self.constraints]
        self.touched = [bool(resolver.behind(entry).keys() & self.free.keys()) for entry in self.constraints]

    def score(self, chosen):
        """Chance of everything stronger than empirical, chance of everything, median margins from the smallest."""
        self.draws.chosen, self.draws.derived = chosen, {}
        strong, everything, medians = np.ones(DRAWS, bool), np.ones(DRAWS, bool), []
        for entry, is_strong, is_touched in zip(self.constraints, self.strong, self.touched):
            dex, holds = margins(*self.draws.sides(entry))
            everything &= holds
            if is_strong:
                strong &= holds
            if is_touched:
                dex = np.where(np.isnan(dex), -np.inf, dex)
                medians.append(float(np.partition(dex, DRAWS // 2)[DRAWS // 2]))
        return strong.mean(), everything.mean(), sorted(medians)

    def places(self, random):
        """A random place in each range, on its scale."""
        return {name: point(range_, random.uniform()) for name, range_ in self.free.items()}


def point(range_, share):
    if range_.logarithmic:
        return range_.low * (range_.high / range_.low) ** share
    return range_.low + share * (range_.high - range_.low)


def is_better(one, other, chance=0.0, dex=0.0, same=0.0):
    """Whether one score is better, by more than these tolerances, and worse in nothing that counts before."""
    for a, b in zip(one[:2], other[:2]):
        if abs(a - b) > chance:
            return bool(a > b)
    for a, b in zip(one[2], other[2]):
        if a > b + dex:
            return True
        if a < b - same:
            return False
    return False


def climb(objective, chosen, random):
    best = objective.score(chosen)
    for _ in range(PASSES):
        before = best
        for name in random.permutation(list(objective.free)):
            range_ = objective.free[name]
            for share in (0.0, 1.0, *random.uniform(size=POINTS)):
                trial = chosen | {name: point(range_, share)}
                score = objective.score(trial)
                if is_better(score, best):
                    chosen, best = trial, score
        if best == before:
            break
    return best, chosen


def better(judge):
    """What is better than the program's choice, in words."""
    objective = Objective(judge)
    if not objective.free:
        return []
    theirs = objective.score(judge.chosen)
    typical = {name: range_.typical for name, range_ in objective.free.items()}
    starts = [judge.chosen, typical, *(objective.places(judge.random) for _ in range(STARTS))]
    for start in starts:
        score, chosen = climb(objective, start, judge.random)
        if is_better(score, theirs, CHANCE, DEX, SAME):
            moved = ", ".join(
                f"{name} {chosen[name]:.4g} for {judge.chosen[name]:.4g}"
                for name in objective.free
                if not np.isclose(chosen[name], judge.chosen[name], rtol=0.01)
            )
            return [f"free numbers: {brief(score)} is better than {brief(theirs)}, with {moved} (SI units)"]
    return []


def brief(score):
    return f"({score[0]:.4f}, {score[1]:.4f}, {', '.join(f'{median:.3f}' for median in score[2][:4])} dex, ...)"
