#!/usr/bin/env python3
"""Turn the collected atomic data into the table that the core crate embeds.

    python convert_atoms.py collected.json atoms.json

The collected table names isotopes `K-40` and mixes MHz, THz and ns; the
embedded one names them `40K` and carries the unit as the last word of each key
(`_hz _nm _s _au _u`), in hertz and seconds throughout. Numbers never pass
through binary floating point: they are read as decimal text, their decimal
point is moved, and their digits are written as they were. The script reads its
own output back and refuses to leave a table in which anything was lost.
"""

from __future__ import annotations

import argparse
import json
import os
from decimal import Decimal
from pathlib import Path

# Key in the collected table -> (key here, places the decimal point moves).
ISOTOPE_NUMBERS = {
    "mass_u": ("mass_u", 0),
    "I": ("nuclear_spin", 0),
    "A_ground_MHz": ("hyperfine_a_hz", 6),
    "g_J": ("g_j", 0),
    "g_I": ("g_i", 0),
    "residual_polarizability_au": ("residual_polarisability_au", 0),
}
LINE_NUMBERS = {
    "frequency_THz": ("frequency_hz", 12),
    "wavelength_vac_nm": ("wavelength_nm", 0),
    "linewidth_MHz": ("linewidth_hz", 6),
    "lifetime_ns": ("lifetime_s", -9),
    "d_reduced_ea0": ("dipole_au", 0),
    "A_MHz": ("hyperfine_a_hz", 6),
    "B_MHz": ("hyperfine_b_hz", 6),
}
# Measured ratios of line strengths, d_over^2/d_under^2, with which the elements of
# `under` in the collected table were computed ("CALC"): they join the uncertainties
# of both. Keys: isotope as collected -> over, under, value, uncertainty, source.
STRENGTH_RATIOS = {
    "Rb-85": ("D2", "D1", "1.99221", "0.00003", "LEON"),
    "Rb-87": ("D2", "D1", "1.99221", "0.00003", "LEON"),
    "Cs-133": ("D2", "D1", "1.9808", "0.0002", "RATK"),
}
# The conventions are prose of this project: house spelling, and no pointer to
# a document that does not travel with the table. Texts of sources stay as they are.
WORDING = {"polarizabilit": "polarisabilit", "see physics.md section 6: ": ""}


class Lost(Exception):
    """Something of the collected table would not arrive in the embedded one."""


def shifted(number: Decimal | None, places: int) -> Decimal | None:
    """`number` with its decimal point moved; exact, digits kept."""
    if number is None:
        return None
    moved = number.scaleb(places)
    if moved.scaleb(-places) != number:
        raise Lost(f"{number} lost digits on the way")
    return moved


def number(entry: dict, places: int) -> dict:
    """One entry in the embedded form."""
    extra = set(entry) - {"value", "unc", "status", "source"}
    if extra:
        raise Lost(f"unknown keys in an entry: {sorted(extra)}")
    return {
        "value": shifted(entry["value"], places),
        "uncertainty": shifted(entry["unc"], places),
        "status": entry["status"],
        "source": entry["source"],
    }


def isotope_name(name: str) -> str:
    """`K-40` -> `40K`."""
    symbol, mass_number = name.split("-")
    return f"{int(mass_number)}{symbol}"


def line(row: dict) -> dict:
    """One optical line; its name is the key under which it is filed."""
    rest = dict(row)
    del rest["name"]
    out: dict = {"excited_spin": rest.pop("J_excited")}
    for key, (new_key, places) in LINE_NUMBERS.items():
        if key in rest:
            out[new_key] = number(rest.pop(key), places)
    if rest:
        raise Lost(f"unknown keys in a line: {sorted(rest)}")
    return out


def isotope(row: dict) -> dict:
    """One isotope with its lines."""
    rest = dict(row)
    out: dict = {"ground_term": rest.pop("ground"), "ground_spin": rest.pop("J_ground")}
    if "note" in rest:
        out["note"] = rest.pop("note")
    for key, (new_key, places) in ISOTOPE_NUMBERS.items():
        if key in rest:
            out[new_key] = number(rest.pop(key), places)
    lines = rest.pop("lines")
    out["lines"] = {entry["name"]: line(entry) for entry in lines}
    if len(out["lines"]) != len(lines):
        raise Lost("two lines of one isotope share a name")
    if rest:
        raise Lost(f"unknown keys in an isotope: {sorted(rest)}")
    return out


def joined(over: str, under: str, value: str, unc: str, source: str, *, row: dict) -> dict:
    """A ratio of strengths; the collected elements must have it."""
    dipoles = {entry["name"]: entry["d_reduced_ea0"]["value"] for entry in row["lines"]}
    found = (dipoles[over] / dipoles[under]) ** 2
    if abs(found - Decimal(value)) > Decimal(unc):
        raise Lost(f"the elements of {over} and {under} have the ratio {found}, not {value}")
    entry = {"value": Decimal(value), "unc": Decimal(unc), "status": "verified", "source": source}
    return {"over": over, "under": under, "strength_ratio": number(entry, 0)}


def convert(collected: dict) -> dict:
    """The whole table in the embedded form."""
    rest = dict(collected)
    out = {
        "format": "fluxloom-atomic-table",
        "version": Decimal(1),
        "made_by": "convert_atoms.py",
        "status_legend": rest.pop("status_legend"),
        "sources": rest.pop("sources"),
        "conventions": {key: worded(text) for key, text in rest.pop("conventions").items()},
    }
    atoms = rest.pop("atoms")
    out["atoms"] = {isotope_name(name): isotope(row) for name, row in atoms.items()}
    for name, ratio in STRENGTH_RATIOS.items():
        out["atoms"][isotope_name(name)]["strength_ratios"] = [joined(*ratio, row=atoms[name])]
    if rest or len(out["atoms"]) != len(atoms):
        raise Lost(f"unknown keys {sorted(rest)}, or two isotopes share a name")
    return out


def worded(text: str) -> str:
    """A convention in the house's wording."""
    for old, new in WORDING.items():
        text = text.replace(old, new)
    return text


def text_of(value: object, indent: str = "") -> str:
    """JSON text; written by hand because `json` would send decimals through doubles."""
    if isinstance(value, dict):
        inner = indent + " "
        if set(value) == {"value", "uncertainty", "status", "source"}:
            return "{" + ", ".join(f"{json.dumps(k)}: {text_of(v)}" for k, v in value.items()) + "}"
        rows = (f"{inner}{json.dumps(k)}: {text_of(v, inner)}" for k, v in value.items())
        return "{\n" + ",\n".join(rows) + "\n" + indent + "}"
    if isinstance(value, list):
        return "[" + ", ".join(text_of(item, indent) for item in value) + "]"
    if isinstance(value, Decimal):
        return "0" if value == 0 else str(value).replace("E", "e").replace("e+", "e")
    return json.dumps(value, ensure_ascii=True)


def load(text: str) -> dict:
    """JSON with every number as the decimal that was written."""
    return json.loads(text, parse_float=Decimal, parse_int=Decimal)


def compare(collected: dict, embedded: dict) -> int:
    """Look every number of the collected table up in the embedded one; how many there are."""

    def same(old: dict, new: dict, places: int, where: str) -> None:
        for old_key, new_key in (("value", "value"), ("unc", "uncertainty")):
            a, b = old[old_key], new[new_key]
            if (a is None) != (b is None) or (a is not None and a != b.scaleb(-places)):
                raise Lost(f"{where}: {a} became {b}")
        if (old["status"], old["source"]) != (new["status"], new["source"]):
            raise Lost(f"{where}: status or source changed")

    count = 0
    for name, row in collected["atoms"].items():
        new = embedded["atoms"][isotope_name(name)]
        for key, (new_key, places) in ISOTOPE_NUMBERS.items():
            if key in row:
                same(row[key], new[new_key], places, f"{name} {key}")
                count += 1
        for old_line in row["lines"]:
            new_line = new["lines"][old_line["name"]]
            if old_line["J_excited"] != new_line["excited_spin"]:
                raise Lost(f"{name} {old_line['name']}: spin changed")
            for key, (new_key, places) in LINE_NUMBERS.items():
                if key in old_line:
                    where = f"{name} {old_line['name']} {key}"
                    same(old_line[key], new_line[new_key], places, where)
                    count += 1
    for part in ("status_legend", "sources"):
        if collected[part] != embedded[part]:
            raise Lost(f"{part} changed")
    if list(collected["conventions"]) != list(embedded["conventions"]):
        raise Lost("conventions changed")
    added = len(STRENGTH_RATIOS)
    if count != entries(collected, "unc") or count + added != entries(embedded, "uncertainty"):
        raise Lost("a number was left behind")
    return count


def entries(tree: object, mark: str) -> int:
    """How many entries (recognised by the key `mark`) a table holds, wherever they stand."""
    if isinstance(tree, dict):
        return (mark in tree) + sum(entries(branch, mark) for branch in tree.values())
    return sum(entries(branch, mark) for branch in tree) if isinstance(tree, list) else 0


def main() -> None:
    """Convert, check what was written, and only then put it in place."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("collected", type=Path, help="the collected data")
    parser.add_argument("embedded", type=Path, help="where the embedded table goes")
    paths = parser.parse_args()

    collected = load(paths.collected.read_text(encoding="utf-8"))
    text = text_of(convert(collected)) + "\n"
    count = compare(collected, load(text))
    unfinished = paths.embedded.with_name(paths.embedded.name + ".new")
    unfinished.write_text(text, encoding="utf-8")
    os.replace(unfinished, paths.embedded)
    print(f"{len(collected['atoms'])} isotopes, {count} numbers")


if __name__ == "__main__":
    main()
