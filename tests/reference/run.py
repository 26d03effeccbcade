"""Runs the independent evaluation against the program and says whether they agree.

    python tests/reference/run.py [--program PATH] [--draws N] [FILE...]

Exit status 1 where they do not. Seeds are fixed. What lies more than five standard errors apart is drawn again with
other seeds before it counts, so that no result is decided by luck.
"""

import argparse
import json
import subprocess
import sys
import tempfile
import zlib
from pathlib import Path

import numpy as np
import yaml

import catalogue
import optimum
from judge import BLOCK, Judge

HERE = Path(__file__).resolve().parent
ROOT = HERE.parent.parent
# Relations that another one of lower rank always precedes are put first by an overlay, so that they are evaluated too.
PROMOTED = {"grower-by-atp.yaml": ["growth-cost-by-atp"]}
# Candidates that are also screened with entries made up to exercise what the catalogue does not use yet.
INVENTED = {"invented-forms.yaml"}
# Candidates whose free numbers are searched again.
SEARCHED = {"veskar-granule.yaml", "veskar-spheroid-small.yaml", "thalvane-globe.yaml", "vibrio-natriegens.yaml"}


def screen(program, file, draws, seed, overlays):
    command = [program, "screen", file, "--format", "json", "--draws", str(draws), "--seed", str(seed)]
    command += [word for folder in overlays for word in ("--overlay", folder)]
    done = subprocess.run(list(map(str, command)), capture_output=True, text=True, check=False)
    if done.returncode != 0:
        sys.exit(f"{file} was refused:\n{done.stderr}")
    printed = json.loads(done.stdout)
    return printed if isinstance(printed, list) else [printed]


def promotion(ids, shipped, folder):
    """An overlay in which these relations have the lowest rank."""
    entries = [shipped.relations[id].node | {"rank": "0"} for id in ids]
    relations = Path(folder) / "relations"
    relations.mkdir()
    (relations / "promoted.yaml").write_text(yaml.safe_dump(entries, allow_unicode=True), "utf-8")
    return folder


def judge(program, file, draws, seed, overlays, ours):
    """One comparison for each document of a file."""
    printed = screen(program, file, draws, seed, overlays)
    candidates = catalogue.candidates(file, ours)
    results = []
    for candidate, assessment in zip(candidates, printed, strict=True):
        random = np.random.default_rng([seed, zlib.crc32(candidate.name.encode())])
        judge = Judge(ours, candidate, assessment, draws, random)
        results.append(judge.run())
        if file.name in SEARCHED and not judge.result.faults:
            results[-1].faults += optimum.better(judge)
    return results


def slip(program, draws):
    """A slip of 5 % in one formula of ours must show, else nothing was compared."""
    ours = catalogue.Catalogue(ROOT / "catalogs")
    formula = ours.relations["dry-mass"].formulas[0]
    right = formula.value
    formula.value = lambda *arguments: right(*arguments) * 1.05
    file = ROOT / "catalogs/candidates/veskar-spheroid-small.yaml"
    [result] = judge(program, file, draws, 1, [], ours)
    return [] if result.faults else ["a slip of 5 % in `dry-mass` went unnoticed"]


def main():
    arguments = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    arguments.add_argument("--program", default=ROOT / "target/release/hypobiont")
    arguments.add_argument("--draws", type=int, default=1 << 18)
    arguments.add_argument("files", nargs="*", type=Path)
    asked = arguments.parse_args()
    files = asked.files or sorted((ROOT / "catalogs/candidates").glob("*.yaml")) + sorted(
        (HERE / "candidates").glob("*.yaml")
    )
    shipped = catalogue.Catalogue(ROOT / "catalogs")
    results, draws = [], asked.draws // BLOCK * BLOCK
    with tempfile.TemporaryDirectory() as folder:
        for file in files:
            overlays = [HERE / "overlay"] if file.name in INVENTED else []
            if file.name in PROMOTED:
                overlays.append(promotion(PROMOTED[file.name], shipped, folder))
            ours = catalogue.Catalogue(ROOT / "catalogs", *overlays) if overlays else shipped
            found = judge(asked.program, file, draws, 1, overlays, ours)
            if any(result.faults for result in found):
                again = judge(asked.program, file, draws, 2, overlays, ours)
                for first, second in zip(found, again, strict=True):
                    first.faults = first.faults and second.faults
            results += found
    faults = [f"{result.name}: {fault}" for result in results for fault in result.faults]
    if not asked.files:
        entries = shipped.relations | shipped.constraints | shipped.figures
        idle = entries.keys() - set().union(*(result.exercised for result in results))
        faults += [f"no candidate exercises `{id}`" for id in sorted(idle)]
        faults += slip(asked.program, draws)
    return report(results, faults)


def report(results, faults):
    for fault in faults:
        print(fault)
    deviations = [(size, result.name, what) for result in results for size, what in result.deviations]
    size, name, what = max(deviations, default=(0.0, "none", ""))
    exact = sum(result.exact for result in results)
    print(
        f"reference: {len(results)} candidates, {exact} exact and {len(deviations)} statistical comparisons, "
        f"largest deviation {size:.2f} standard errors ({name}: {what}), {len(faults)} disagreements"
    )
    return 1 if faults else 0


if __name__ == "__main__":
    sys.exit(main())
