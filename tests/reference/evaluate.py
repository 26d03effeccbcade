"""An independent evaluation of a candidate: which constraints can be assessed, and their margins draw by draw.

It shares nothing with the program but the catalogue's files and the documentation (docs/method.md). Free numbers are
not searched here: their values are handed in.
"""

from itertools import product

import numpy as np

from catalogue import BASES, applies, by_attribute
from written import Free, Spread, read

CHEMISTRY = {"solvent", "heredity"}


class Resolver:
    """What gives each quantity of a candidate: a least fixed point (docs/method.md, "Resolve")."""

    def __init__(self, catalogue, candidate, attributes=None, also=frozenset()):
        self.catalogue, self.candidate, self.also = catalogue, candidate, also
        self.attributes = candidate.attributes if attributes is None else attributes
        self.usable = [
            relation
            for relation in catalogue.relations.values()
            if applies(relation.node, self.attributes) == (set(), set())
            and not relation.open_attributes(self.attributes)
        ]
        self.known = (
            also
            | candidate.stated.keys()
            | {name for name in catalogue.quantities if catalogue.has_default(name, self.attributes)}
        )
        self.obtainable = self.closure()
        self.sources = {}

    def closure(self, without=None):
        known = self.known - {without}
        while True:
            more = {r.node["gives"] for r in self.usable if r.needs <= known} - {without}
            if more <= known:
                return known
            known = known | more

    def source(self, name):
        """("given" | "habitat" | "relation" | "default", what) for an obtainable quantity."""
        if name not in self.sources:
            self.sources[name] = self.find(name)
        return self.sources[name]

    def find(self, name):
        if name in self.candidate.given or name in self.also:
            return "given", self.candidate.given.get(name)
        if name in self.candidate.habitat:
            return "habitat", self.candidate.habitat[name]
        giving = [relation for relation in self.usable if relation.node["gives"] == name]
        if giving:
            others = self.closure(without=name)
            giving = [relation for relation in giving if relation.needs <= others]
            if giving:
                return "relation", min(giving, key=lambda relation: int(relation.node.get("rank", 1)))
        return "default", self.catalogue.default(name, self.attributes)

    def behind(self, entry):
        """All quantities that flow into an entry, with their sources."""
        found, waiting = {}, list(entry.needs)
        while waiting:
            name = waiting.pop()
            if name not in found:
                found[name] = self.source(name)
                kind, what = found[name]
                waiting += what.needs if kind == "relation" else []
        return found

    def standing(self, entry):
        """How an entry stands to the candidate: ready, missing, defaults, not-applicable or elsewhere."""
        against, open_ = applies(entry.node, self.attributes)
        if against:
            return "not-applicable" if against <= CHEMISTRY else "elsewhere"
        if open_ or entry.open_attributes(self.attributes) or not entry.needs <= self.obtainable:
            return "missing"
        kinds = {kind for kind, _ in self.behind(entry).values()}
        return "ready" if kinds & {"given", "habitat"} else "defaults"

    def basis(self, entry):
        """The weakest basis in what an entry is computed from; what the candidate states does not weaken it."""
        bases = set()
        entries = [entry]
        for name, (kind, what) in self.behind(entry).items():
            if kind == "relation":
                entries.append(what)
            elif kind == "default":
                bases.add(self.catalogue.quantities[name]["default"]["basis"])
        for each in entries:
            bases.add(each.basis)
            for name, (_, basis) in each.parameters.items():
                if basis and f"{each.id}.{name}" not in self.candidate.adopted:
                    bases.add(basis)
        return max(bases, key=BASES.index)

    def opened(self, entry, named):
        """Whether an entry can be assessed once these quantities are stated and these attributes known, whatever the
        words that the attributes take among those that help."""
        attributes = sorted(named & self.catalogue.attributes.keys())
        quantities = frozenset(named - set(attributes))
        for words in product(*(self.catalogue.attributes[name]["words"] for name in attributes)):
            known = self.attributes | dict(zip(attributes, words))
            if Resolver(self.catalogue, self.candidate, known, quantities).standing(entry) in ("ready", "defaults"):
                return True
        return False


class Draws:
    """One block of draws: every number that is needed, each once. `drawn` are the unknown numbers, `derived` what
    relations make of them."""

    def __init__(self, resolver, chosen, random, n):
        self.resolver, self.chosen, self.random, self.n = resolver, chosen, random, n
        self.catalogue, self.candidate = resolver.catalogue, resolver.candidate
        self.drawn, self.derived = {}, {}
        pairs = [(pair["between"], pair["coefficient"]) for pair in self.candidate.correlations]
        self.couple(pairs, self.candidate.given)

    def couple(self, pairs, spreads):
        """Correlated numbers through a Gaussian copula: each takes its own sorted draws in the order of a normal score,
        and the scores have the stated correlations."""
        names = sorted({name for between, _ in pairs for name in between})
        if not names:
            return
        matrix = np.eye(len(names))
        for between, coefficient in pairs:
            a, b = (names.index(name) for name in between)
            matrix[a, b] = matrix[b, a] = float(coefficient)
        scores = self.random.multivariate_normal(np.zeros(len(names)), matrix, self.n, method="eigh")
        for name, score in zip(names, scores.T):
            values = np.empty(self.n)
            values[np.argsort(score)] = np.sort(spreads[name].bounded(self.random, self.n))
            self.drawn[name] = values

    def draw(self, name, spread):
        """A number that is drawn, once under its name; exact ones stay one number."""
        if spread.exact:
            return spread.of[0]
        if name not in self.drawn:
            if spread.kind == "sample":
                row = self.draw(f"{spread.of[0]}!row", Spread("uniform", (0, len(spread.rows))))
                self.drawn[name] = spread.rows[row.astype(int)]
            else:
                self.drawn[name] = spread.bounded(self.random, self.n)
        return self.drawn[name]

    def quantity(self, name):
        kind, what = self.resolver.source(name)
        if isinstance(what, Free):
            return self.chosen[name]
        if kind != "relation":
            return self.draw(name, what)
        if name not in self.derived:
            self.derived[name] = self.side(what, 0)
        return self.derived[name]

    def side(self, entry, at):
        """One formula of an entry, with the residual spread of a law."""
        value = entry.formulas[at].value(lambda name: self.name(entry, name), entry.curves)
        if "scatter" in entry.node:
            dex = read(by_attribute(entry.node["scatter"], self.resolver.attributes)).of[0]
            if dex > 0:
                value = value * self.draw(f"{entry.id}!scatter", Spread("lognormal", (1.0, 10**dex)))
        return value

    def name(self, entry, name):
        if name in entry.parameters:
            full = f"{entry.id}.{name}"
            if full not in self.drawn and entry.node.get("correlations"):
                own = {f"{entry.id}.{key}": self.parameter(entry, key) for key in entry.parameters}
                pairs = [
                    ([f"{entry.id}.{key}" for key in pair["between"]], pair["coefficient"])
                    for pair in entry.node["correlations"]
                ]
                self.couple(pairs, own)
            return self.draw(full, self.parameter(entry, name))
        if entry.joint and name in entry.joint[0]:
            weights = [float(set_.get("weight", 1)) for set_ in entry.joint]
            places = list(range(len(weights)))
            place = self.draw(f"{entry.id}!joint", Spread("discrete", (places, weights)))
            return np.array([read(set_[name]).of[0] for set_ in entry.joint])[place]
        if name in self.catalogue.constants:
            return self.catalogue.constants[name]
        return self.quantity(name)

    def parameter(self, entry, name):
        adopted = self.candidate.adopted.get(f"{entry.id}.{name}")
        return adopted or read(by_attribute(entry.parameters[name][0], self.resolver.attributes))

    def sides(self, constraint):
        """What is available and what is required, draw by draw."""
        return [np.broadcast_to(np.asarray(self.side(constraint, at), float), self.n) for at in (0, 1)]


def margins(available, required):
    """Margins in dex, and which draws hold; what is not a number does not."""
    with np.errstate(all="ignore"):
        dex = np.log10(available) - np.log10(required)
    dex = np.where((available <= 0) & (required > 0), -np.inf, dex)
    dex = np.where((required <= 0) & (available > 0), np.inf, dex)
    dex = np.where((available <= 0) & (required <= 0), np.nan, dex)
    return dex, (available >= required) & ~np.isnan(dex)
