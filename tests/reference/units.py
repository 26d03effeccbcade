"""Units of measurement, by pint: every number becomes its SI value."""

import re
from functools import cache

import pint

registry = pint.UnitRegistry()
# Counts are pure numbers that may be named; `dex` is a difference of decimal logarithms. Plurals are pint's own.
for line in ("aa = []", "bp = []", "nt = []", "cell = []", "photon = []", "ATP = []", "dex = []"):
    registry.define(line)

RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")
CELSIUS = {"°C", "℃", "degC"}


@cache
def factor(text):
    """What one of this unit is in SI units, as a difference: 1 °C is 1 K."""
    text = text.strip().replace("\u03bc", "µ").replace("·", " ").replace("%", "percent")
    text = "K" if text in CELSIUS else re.sub(r"\bum\b", "µm", text)
    text = re.sub(r"[⁰¹²³⁴⁵⁶⁷⁸⁹⁻]+", lambda power: "^" + power[0].translate(RAISED), text)
    text = re.sub(r"(?<=[\w)])\s+(?=[^\W\d]|\()", " * ", text).replace("^", "**")
    return float(registry.Quantity(1.0, text or "dimensionless").to_base_units().magnitude)


@cache
def zero(text):
    """Where the unit's scale begins, in SI units: 273.15 K for °C."""
    return 273.15 if text.strip() in CELSIUS else 0.0


def to_si(value, text):
    """A value in this unit, in SI units."""
    return value * factor(text) + zero(text)


def from_si(value, text):
    """An SI value, in this unit."""
    return (value - zero(text)) / factor(text)
