"""The catalogue and the candidates, read straight from their YAML files."""

from dataclasses import dataclass, field
from pathlib import Path

import yaml

import written
from formulas import Formula, curve

BASES = ["physical", "aqueous", "material", "biochemical", "empirical"]
Loader = getattr(yaml, "CBaseLoader", yaml.BaseLoader)  # every scalar stays the text it is


class Unknown(Exception):
    """A value that depends on an attribute that is not known."""


def listed(node):
    return node if isinstance(node, list) else [node]


def exact(text):
    return written.text(text).of[0]


def by_attribute(node, attributes):
    """The node itself, or the one that `{ by: attribute, word: ... }` names for these attributes."""
    if isinstance(node, dict) and "by" in node:
        word = attributes.get(node["by"])
        if word not in node:
            raise Unknown(node["by"])
        return node[word]
    return node


def is_open(node, attributes):
    try:
        by_attribute(node, attributes)
    except Unknown as unknown:
        return {unknown.args[0]}
    return set()


def applies(entry, attributes):
    """The attributes that speak against an entry, and those that are not known."""
    against, open_ = set(), set()
    for key, wanted in (("applies_to", True), ("except", False)):
        for attribute, words in entry.get(key, {}).items():
            if attribute not in attributes:
                open_.add(attribute)
            elif (attributes[attribute] in listed(words)) != wanted:
                against.add(attribute)
    return against, open_


@dataclass
class Entry:
    """A relation, constraint or figure."""

    id: str
    node: dict
    formulas: list
    parameters: dict
    joint: list
    curves: dict
    needs: set = field(default_factory=set)

    @property
    def basis(self):
        return self.node["basis"]

    def open_attributes(self, attributes):
        """Attributes that its own numbers depend on and that are not known."""
        numbers = [value for value, _ in self.parameters.values()] + [self.node.get("scatter")]
        return set().union(*(is_open(value, attributes) for value in numbers))


class Catalogue:
    """Everything under a catalogue's folder; later folders are laid over the first."""

    def __init__(self, *folders):
        self.quantities, self.attributes, self.constants, self.habitats = {}, {}, {}, {}
        self.relations, self.constraints, self.figures = {}, {}, {}
        entries = {"relations": {}, "constraints": {}, "figures": {}}
        for folder in map(Path, folders):
            for name in ("quantities", "attributes", "constants"):
                for file in folder.glob(f"{name}.yaml"):
                    getattr(self, name).update(yaml.load(file.read_text("utf-8"), Loader))
            for file in sorted(folder.glob("habitats/*.yaml")):
                self.habitats.update(yaml.load(file.read_text("utf-8"), Loader))
            for kind, known in entries.items():
                for file in sorted(folder.glob(f"{kind}/*.yaml")):
                    known.update({node["id"]: node for node in yaml.load(file.read_text("utf-8"), Loader)})
        self.constants = {name: exact(node["value"]) for name, node in self.constants.items()}
        for kind, known in entries.items():
            setattr(self, kind, {id: self.entry(node) for id, node in sorted(known.items())})

    def entry(self, node):
        sides = [node] if "formula" in node else [node["available"], node["required"]]
        parameters = {}
        for name, value in node.get("parameters", {}).items():
            details = value if isinstance(value, dict) and "value" in value else {"value": value}
            parameters[name] = (details["value"], details.get("basis"))
        joint = node.get("joint_values", [])
        curves = {
            name: curve(
                [exact(x) for x in form["at"]],
                [exact(y) for y in form["gives"]],
                form["axes"],
                form["between"],
                form["outside"],
            )
            for name, form in node.get("curves", {}).items()
        }
        entry = Entry(node["id"], node, [Formula(side["formula"]) for side in sides], parameters, joint, curves)
        names = set().union(*(formula.names for formula in entry.formulas))
        own = parameters.keys() | curves.keys() | {name for set_ in joint for name in set_}
        entry.needs = names - own - self.constants.keys()
        if strange := entry.needs - self.quantities.keys():
            raise ValueError(f"{entry.id}: unknown names {strange}")
        return entry

    def bounds(self, name):
        low, high = self.quantities[name]["bounds"]
        return (
            -float("inf") if low == "none" else exact(low),
            float("inf") if high == "none" else exact(high),
        )

    def has_default(self, name, attributes):
        node = self.quantities[name].get("default")
        return node is not None and not is_open(node["value"], attributes)

    def default(self, name, attributes):
        """The default of a quantity for these attributes; it must have one."""
        node = self.quantities[name]["default"]
        value = written.read(by_attribute(node["value"], attributes), self.bounds(name))
        if isinstance(value, written.Free):
            value.typical = exact(by_attribute(node["typical"], attributes))
        return value


class Candidate:
    """One document of a candidate file."""

    def __init__(self, node, folder, catalogue):
        self.name = node["name"]
        self.attributes = {
            name: attribute["default"] for name, attribute in catalogue.attributes.items() if "default" in attribute
        } | node["attributes"]
        self.stated_attributes = node["attributes"].keys()
        environment = dict(node.get("environment") or {})
        habitat = environment.pop("habitat", None)
        given = (node.get("organism") or {}) | environment
        self.given = {name: written.read(value, catalogue.bounds(name), folder) for name, value in given.items()}
        taken = catalogue.habitats[habitat]["environment"] if habitat else {}
        self.habitat = {
            name: written.read(value, catalogue.bounds(name)) for name, value in taken.items() if name not in given
        }
        self.adopted = {name: written.read(value) for name, value in (node.get("adopt") or {}).items()}
        self.correlations = node.get("correlations") or []

    @property
    def stated(self):
        return self.habitat | self.given


def candidates(path, catalogue):
    """All documents of a candidate file."""
    path = Path(path)
    return [Candidate(node, path.parent, catalogue) for node in yaml.load_all(path.read_text("utf-8"), Loader)]
