"""Holds what the program prints for one candidate against the independent evaluation."""

from itertools import product

import numpy as np

from catalogue import BASES, exact
from compare import LIMIT, Comparison, Counts, Ranks, quantiles
from evaluate import Draws, Resolver, margins
from units import to_si
from written import Free

BLOCK = 1 << 16
KEPT = 65_536  # draws from which the program takes medians other than those of margins
WAYS = 40  # ways of stating what is missing that are tried
MARGIN_ROUNDING, ROUNDING = 3e-7, 1e-9  # the program keeps margins at single precision


class Judge:
    """Compares one JSON assessment with our own draws of the same candidate."""

    def __init__(self, catalogue, candidate, printed, draws, random):
        self.catalogue, self.candidate, self.printed = catalogue, candidate, printed
        self.resolver = Resolver(catalogue, candidate)
        self.random, self.draws = random, draws
        self.their_draws = printed["run"]["draws"]
        self.kept = min(self.their_draws, KEPT)
        self.result = Comparison(candidate.name)
        self.constraints = {node["id"]: node for node in printed["constraints"]}
        self.quantities = {node["name"]: node for node in printed["quantities"]}
        self.chosen = {
            name: to_si(node["chosen"], node["unit"]) for name, node in self.quantities.items() if "chosen" in node
        }

    def run(self):
        # The program may leave out defaults that nothing asked for.
        attributes, ours = self.printed["candidate"]["attributes"], self.candidate.attributes
        self.result.same("attributes", attributes, {name: ours.get(name) for name in attributes})
        self.result.same("stated attributes left out", self.candidate.stated_attributes - attributes.keys(), set())
        # Numbers can be set against each other only where both speak of the same ones.
        if self.standings() and self.origins():
            self.numbers()
            self.verdicts()
        return self.result

    # Which constraints are assessed, which not and why, and what they are computed from.

    def standings(self):
        said = {"ready": "assessed", "missing": "not-assessed", "defaults": "not-assessed"}
        standing = {id: self.resolver.standing(entry) for id, entry in self.catalogue.constraints.items()}
        ours = {id: said.get(how, how) for id, how in standing.items() if how != "elsewhere"}
        theirs = dict.fromkeys(self.constraints, "assessed")
        for id, node in self.constraints.items():
            # Margins that are not numbers leave a constraint unassessed, but that is for the draws to tell.
            if node["verdict"].startswith("not-") and "not a number" not in node.get("reason", ""):
                theirs[id] = node["verdict"]
        self.result.same("constraints", theirs, ours)
        if theirs != ours:
            return False
        self.ready = [id for id, how in ours.items() if how == "assessed"]
        for id in self.ready:
            basis = self.resolver.basis(self.catalogue.constraints[id])
            self.result.same(f"basis of {id}", self.constraints[id]["basis"], basis)
        for id in ours:
            if standing[id] == "missing":
                self.missing(id)
            elif standing[id] == "defaults":
                self.result.same(f"reason of {id}", self.constraints[id].get("reason"), "rests on defaults alone")
        applicable = sum(how != "not-applicable" for how in ours.values())
        self.result.same("how many apply", self.printed["overall"]["of"], applicable)
        return True

    def missing(self, id):
        """One of each group must be enough, and no group may be passed over."""
        entry, groups = self.catalogue.constraints[id], [set(group) for group in self.constraints[id]["missing"]]
        unknown = self.catalogue.attributes.keys() - self.candidate.attributes.keys()
        everything = self.catalogue.quantities.keys() | unknown
        for group in groups:
            enough = self.resolver.opened(entry, everything - group)
            self.result.holds(not enough, f"{id} can be assessed without any of {sorted(group)}")
        choices = [sorted(group) for group in groups]
        if np.prod([float(len(names)) for names in choices]) <= WAYS:
            ways = {frozenset(way) for way in product(*choices)}
        else:
            ways = {frozenset(str(self.random.choice(names)) for names in choices) for _ in range(WAYS)}
        for way in sorted(map(sorted, ways)):
            enough = self.resolver.opened(entry, set(way))
            self.result.holds(enough, f"{id} cannot be assessed with {way}, one of each group that is missing")

    def origins(self):
        """Every quantity that is used, and what gives it."""
        resolver = self.resolver
        self.figures = [id for id, entry in self.catalogue.figures.items() if resolver.standing(entry) == "ready"]
        entries = [self.catalogue.constraints[id] for id in self.ready]
        entries += [self.catalogue.figures[id] for id in self.figures]
        self.used = {}
        for entry in entries:
            self.used |= resolver.behind(entry)
        role = lambda what: "free" if isinstance(what, Free) else "unknown"  # noqa: E731
        ours = {name: (role(spread), "given") for name, spread in self.candidate.given.items()}
        ours |= {id: ("unknown", f"figure:{id}") for id in self.figures}
        ours |= dict.fromkeys(self.candidate.adopted, ("unknown", "adopted"))
        for name, (kind, what) in self.used.items():
            ours[name] = (role(what), f"relation:{what.id}" if kind == "relation" else kind)
        theirs = {name: (node["role"], node["origin"]) for name, node in self.quantities.items()}
        self.result.same("quantities", theirs, ours)
        for name in self.chosen.keys() & self.used.keys():
            range_ = self.used[name][1]
            inside = range_.low * (1 - 1e-12) <= self.chosen[name] <= range_.high * (1 + 1e-12)
            self.result.holds(inside, f"{name} was chosen outside its range")
        relations = {what.id for kind, what in self.used.values() if kind == "relation"}
        self.result.exercised = relations | {entry.id for entry in entries}
        return theirs == ours

    # Numbers.

    def numbers(self):
        """Margins, sides, quantities and figures, from our own draws."""
        watched = self.watched()
        self.counts, self.outside = Counts(self.ready), {}
        for _ in range(self.draws // BLOCK):
            draws, holds = Draws(self.resolver, self.chosen, self.random, BLOCK), {}
            for id in self.ready:
                available, required = draws.sides(self.catalogue.constraints[id])
                dex, holds[id] = margins(available, required)
                self.counts.not_a_number[id] += np.count_nonzero(np.isnan(dex))
                for what, values in (("margin", dex), ("available", available), ("required", required)):
                    if (what, id) in watched:
                        watched[what, id].add(values)
            self.counts.add(holds, BLOCK)
            for name in self.used:
                watched["quantity", name].add(column(draws.quantity(name)))
            for id in self.figures:
                watched["figure", id].add(column(draws.side(self.catalogue.figures[id], 0)))
            self.extrapolate(draws)
        for (what, name), ranks in watched.items():
            ranks.judge(self.result, f"{what} {name}", self.their_draws if what == "margin" else self.kept)
        for (id, *key), count in self.outside.items():
            printed = self.constraints[id].get("extrapolated", [])
            share = sum(each["share"] for each in printed if [each["relation"], each["quantity"]] == key)
            what = f"share of {id} beyond the range of {key[0]} in {key[1]}"
            self.result.share(what, share, self.kept, count / self.draws, self.draws)

    def watched(self):
        """What is compared draw by draw: the printed quantiles, each with the rank it has among our draws."""
        watched = {}
        for id in self.ready:
            node = self.constraints[id]
            if "margin_dex" in node:
                watched["margin", id] = Ranks(self.margin(id), MARGIN_ROUNDING)
                for side in ("available", "required"):
                    watched[side, id] = Ranks(quantiles(node[side], node["unit"]), ROUNDING)
        for what, names in (("quantity", self.used), ("figure", self.figures)):
            for name in names:
                node = self.quantities[name]
                watched[what, name] = Ranks(quantiles(node, node["unit"]), ROUNDING)
        return watched

    def margin(self, id):
        node = self.constraints[id]
        return quantiles(node["margin_dex"], empty=np.inf if node["chance"] > 0.5 else -np.inf)

    def extrapolate(self, draws):
        """Counts draws outside the ranges that a constraint and the relations behind it were drawn from."""
        for id in (id for id in self.ready if "margin_dex" in self.constraints[id]):
            entry = self.catalogue.constraints[id]
            relations = [what for kind, what in self.resolver.behind(entry).values() if kind == "relation"]
            for each in (entry, *relations):
                for name, (low, high) in each.node.get("valid_over", {}).items():
                    value = column(draws.quantity(name))
                    count = np.count_nonzero((value < exact(low)) | (value > exact(high)))
                    self.outside[id, each.id, name] = self.outside.get((id, each.id, name), 0) + count

    # Verdicts: the documented rules on the numbers as printed, which our draws support or not.

    def verdicts(self):
        result, counts = self.result, self.counts
        overall, limits = self.printed["overall"], self.printed["run"]["thresholds"]
        for id in self.ready:
            node, undefined = self.constraints[id], counts.not_a_number[id] / self.draws
            if "chance" not in node:
                result.holds(undefined > 0.01, f"{id} is not assessed, but is a number in {1 - undefined:.4f} of draws")
                continue
            result.share(f"chance of {id}", node["chance"], self.their_draws, counts.together([id]), self.draws)
            result.share(
                f"share undefined of {id}", node["not_a_number_share"], self.their_draws, undefined, self.draws
            )
            result.same(f"verdict of {id}", (node["verdict"], node.get("marginal")), self.verdict(id, limits))
            p = (node["chance"] * self.their_draws + 1) / (self.their_draws + 2)
            error = np.sqrt(p * (1 - p) / self.their_draws)
            result.holds(np.isclose(node["chance_se"], error, rtol=1e-9), f"standard error of {id}: {error}")
        assessed = [id for id in self.ready if "chance" in self.constraints[id]]
        result.same("how many are assessed", overall["assessed"], len(assessed))
        if assessed:
            self.overall(assessed, overall, limits)
        else:
            result.same("overall", overall["verdict"], "not-assessed")

    def verdict(self, id, limits):
        chance, margin = self.constraints[id]["chance"], self.margin(id)
        if chance >= limits["pass"]:
            return "pass", None
        if chance <= limits["fail"]:
            return "fail", None
        return "marginal", "near" if margin["high"] - margin["low"] < 0.5 else "undecided"

    def overall(self, assessed, overall, limits):
        result, counts = self.result, self.counts
        basis = {id: self.constraints[id]["basis"] for id in assessed}
        failed = [id for id in assessed if self.constraints[id]["verdict"] == "fail"]
        strong = [id for id in assessed if basis[id] != "empirical"]
        together = counts.together(assessed)
        result.share("chance of everything", overall["chance"], self.their_draws, together, self.draws)
        outside = any(basis[id] == "empirical" for id in failed)
        result.same("outside known life", overall["outside_known_life"], outside)
        possible = set()
        for joint in self.about(counts.together(strong), limits["fail"]) if strong else [1.0]:
            if set(failed) & set(strong) or joint <= limits["fail"]:
                possible.add("fail")
            else:
                possible.add("pass" if overall["chance"] >= limits["pass"] and not outside else "marginal")
        result.holds(overall["verdict"] in possible, f"overall is {overall['verdict']} instead of {sorted(possible)}")
        binding = overall["binding"]
        if binding not in assessed:
            result.holds(False, f"{binding} binds, which is not assessed")
        elif overall["verdict"] == "pass":
            first = min(assessed, key=lambda id: (self.constraints[id]["chance"], self.room(id), id))
            result.same("tightest", binding, first)
        else:
            self.binding(binding, assessed, together)
        strongest = min((basis[id] for id in failed), key=BASES.index, default=None)
        ours = strongest if overall["verdict"] == "fail" and strongest else basis.get(binding)
        result.same("basis of the whole", overall["basis"], ours)

    def about(self, share, threshold):
        """The share; and what lies beyond the threshold, where sampling alone can have put it on this side."""
        near = abs(share - threshold) < LIMIT * self.spread(threshold)
        return [threshold, threshold + 1e-9] if near else [share]

    def spread(self, share):
        """The standard error of the difference between a share of theirs and one of ours."""
        return np.sqrt(share * (1 - share) * (1 / self.draws + 1 / self.their_draws))

    def room(self, id):
        """Median margin over half its interval."""
        margin = self.margin(id)
        half = (margin["high"] - margin["low"]) / 2
        return margin["median"] / half if half > 0 else np.inf

    def binding(self, binding, assessed, together):
        """What does not hold most often, up to sampling: families pooled first, then the one within."""
        family = {id: self.catalogue.constraints[id].node["family"] for id in assessed}
        members = {name: [id for id in assessed if family[id] == name] for name in family.values()}
        within = {id: [id] for id in members[family[binding]]}
        for groups, name in ((members, family[binding]), (within, binding)):
            misses = {each: 1 - self.counts.together(ids) for each, ids in groups.items()}
            most = max(misses.values())
            # Two shares of ours, each off by sampling, against two of theirs.
            error = np.sqrt(2) * self.spread(min(most, 1 - 1 / self.draws))
            fault = f"{name} binds, which does not hold in {misses[name]:.4f} of draws, others in {most:.4f}"
            self.result.holds(misses[name] >= most - LIMIT * error, fault)
            tied = [each for each in groups if misses[each] == most]
            if most == 1.0 and name in tied:  # a tie for certain, which the smallest median decides
                first = min(tied, key=lambda each: (min(self.margin(id)["median"] for id in groups[each]), each))
                self.result.same("binding, of those that never hold", name, first)
        failing, share = 1 - together, self.printed["overall"]["binding_share"]
        if failing * self.draws >= 1 and share is not None:
            ours = (1 - self.counts.together([binding])) / failing
            their_failing = max(1.0, (1 - self.printed["overall"]["chance"]) * self.their_draws)
            self.result.share("share of what binds", share, their_failing, ours, failing * self.draws)


def column(value):
    """One number for all draws, or one for each."""
    return np.broadcast_to(np.asarray(value, float), BLOCK)
