"""Writes one sheet for each outside case into `sheets/`: `python make_sheets.py` in this folder.

A sheet names its results as the case names them in `expect`, so that a test can solve the sheet of an id and compare.
Mass, unit and mesh sheets follow from the case's data; energy and rope sheets are written out in `energy_sheets.py`
and `rope_sheets.py`, because there the way to the answer is what the sheet is about.
Standard library only. The numbers asked for are never written into a sheet.
"""

import json
import math
import os
import re

from energy_sheets import ENERGY
from rope_sheets import ROPE

# Own axes of our shapes: x is the axis. The cases have their axis along z. These two turns take x to z, y to x, z to y.
TO_THEIRS = [("z", -90), ("x", -90)]


def num(x):
    return repr(float(x)) if not float(x).is_integer() else str(int(x))


def cases(file):
    with open(file, encoding="utf-8") as lines:
        return [json.loads(line) for line in lines if line.strip()]


def head(case, uses):
    lines = [f'sheet "{case["what"].replace(chr(34), chr(39))}" {{', f'  number = "{case["id"]}"', "}"]
    return lines + [f"use std.{name}" for name in uses] + [""]


def mm(q):
    assert q["unit"] == "mm", q
    return q["value"]


# their shape -> our shape, our fields, and how far the own origin lies behind theirs along the axis
def shape(part):
    d, kind = part["dims"], part["shape"]
    g = lambda k: mm(d[k])
    two = lambda k: f"{num(2 * g(k))} mm"
    one = lambda k: f"{num(g(k))} mm"
    if kind == "cylinder":
        return "cylinder", {"diameter": two("R"), "length": one("L")}, g("L") / 2
    if kind == "tube":
        return "tube", {"outer_diameter": two("Ro"), "inner_diameter": two("Ri"), "length": one("L")}, g("L") / 2
    if kind == "hoop":
        return "ring", {"diameter": two("R")}, 0
    if kind == "thin_cylinder":
        return "thin_tube", {"mean_diameter": two("R"), "length": one("L")}, g("L") / 2
    if kind == "thin_disc":
        return "thin_disc", {"diameter": two("R")}, 0
    if kind == "cone":
        return "cone", {"diameter": two("R"), "length": one("H")}, 0
    if kind == "frustum":
        return "frustum", {"first_diameter": two("R1"), "second_diameter": two("R2"), "length": one("H")}, 0
    if kind == "hollow_frustum":
        fields = {"first_outer": two("Ro1"), "first_inner": two("Ri1"), "second_outer": two("Ro2")}
        return "hollow_frustum", fields | {"second_inner": two("Ri2"), "length": one("H")}, 0
    if kind == "sphere":
        return "sphere", {"diameter": two("R")}, g("R")
    if kind == "hollow_sphere":
        return "hollow_sphere", {"outer_diameter": two("Ro"), "inner_diameter": two("Ri")}, g("Ro")
    if kind == "thin_sphere":
        return "thin_sphere", {"diameter": two("R")}, g("R")
    if kind == "torus":
        return "torus", {"mean_diameter": two("R"), "section_diameter": two("r")}, g("r")
    if kind == "hemisphere":
        return "hemisphere", {"diameter": two("R")}, 0
    if kind == "cap":
        return "spherical_cap", {"sphere_diameter": two("R"), "height": one("h")}, 0
    if kind == "rod":
        return "rod", {"length": one("L")}, g("L") / 2
    if kind == "point":
        return "point_mass", {}, 0
    if kind == "block":
        return "block", {"length": one("c"), "width": one("a"), "height": one("b")}, g("c") / 2
    if kind == "ellipsoid":
        return "ellipsoid", {"length": two("c"), "width": two("a"), "height": two("b")}, g("c")
    if kind == "sector":
        fields = {"outer_diameter": two("Ro"), "inner_diameter": two("Ri"), "angle": f"{num(d['deg']['value'])} deg"}
        return "annular_sector", fields | {"length": one("L")}, g("L") / 2
    if kind == "prism":
        fields = {"sides": num(d["n"]["value"]), "corner_diameter": two("R"), "length": one("L")}
        return "regular_prism", fields, g("L") / 2
    if kind == "turned":
        points = ", ".join(f"({num(z)} mm, {num(r)} mm)" for r, z in d["profile"]["rz"])
        return "turned", {"profile": f"[{points}]"}, 0
    if kind == "extrude":
        loop = lambda points: "[" + ", ".join(f"({num(x)} mm, {num(y)} mm)" for x, y in points) + "]"
        fields = {"outline": loop(d["outline"]["xy"])}
        if "holes" in d:
            fields["holes"] = "[" + ", ".join(loop(hole["xy"]) for hole in d["holes"]) + "]"
        return "extruded", fields | {"length": one("H")}, 0
    if kind == "tetra":
        point = lambda p: f"({num(p[2])} mm, {num(p[0])} mm, {num(p[1])} mm)"
        return "tetrahedron", {k: point(p) for k, p in zip("abcd", d["points"]["xyz"])}, 0
    raise KeyError(kind)


def turned(v, axis, degrees):
    exact = {0: (1, 0), 90: (0, 1), 180: (-1, 0), 270: (0, -1)}
    angle = math.radians(degrees)
    c, s = exact.get(degrees % 360, (math.cos(angle), math.sin(angle)))
    i, j = {"x": (1, 2), "y": (2, 0), "z": (0, 1)}[axis]
    v = list(v)
    v[i], v[j] = c * v[i] - s * v[j], s * v[i] + c * v[j]
    return v


def mass_sheet(case):
    lines, placements = head(case, ["shapes"]), []
    for at, part in enumerate(case["given"]["parts"], 1):
        name, fields, behind = shape(part)
        for key in ("density", "mass"):
            if key in part:
                fields[key] = f"{num(part[key]['value'])} {part[key]['unit']}"
        inside = ", ".join(f"{k} = {v}" for k, v in fields.items())
        lines.append(f'body part_{at} = {name} {{ {inside} }} cite "case {case["id"]}"')
        turns = list(TO_THEIRS)
        origin = [0.0, 0.0, -behind]
        for turn in part.get("rotate", []):
            axis = "xyz"[turn["axis"].index(1)]
            assert sorted(turn["axis"]) == [0, 0, 1] and turn["angle"]["unit"] == "deg"
            turns.append((axis, turn["angle"]["value"]))
            origin = turned(origin, axis, turn["angle"]["value"])
        shift = part.get("at", {"value": [0, 0, 0], "unit": "mm"})
        assert shift["unit"] == "mm"
        place = ", ".join(f"{num(a + b)} mm" for a, b in zip(origin, shift["value"]))
        turn = ", ".join(f"({axis}, {num(angle)} deg)" for axis, angle in turns)
        less = "less " if part["op"] == "remove" else ""
        placements.append(f"  {less}part_{at} at ({place}) {{ turned = [{turn}] }}")
    lines += ["", "| Axes of the case: own x is turned to z, y to x, z to y.", "rotor whole about x {", *placements, "}", ""]
    given, keys = case["given"], case["expect"]
    if "axis_direction" in given:
        through = ", ".join(f"{num(x)} mm" for x in given["axis_through"]["value"])
        along = ", ".join(num(x) for x in given["axis_direction"])
        lines.append(f"axis line = through ({through}) along ({along})")
    if any(key.startswith("Io_") for key in keys):
        lines += [f"axis origin_{a} = through (0 mm, 0 mm, 0 mm) along {a}" for a in "xyz"]
    words = {"1": "least", "2": "middle", "3": "greatest"}
    for key in keys:
        if key == "mass":
            value = "whole.mass"
        elif key.startswith("com_"):
            value = f"whole.centre.{key[-1]} as mm"
        elif key.startswith("Ic_"):
            value = f"whole.tensor.{key[3:]}"
        elif key.startswith("Io_") and key[3] == key[4]:
            value = f"whole.J about origin_{key[3]}"
        elif key.startswith("Io_"):
            value = f"whole.tensor.{key[3:]} - whole.mass * whole.centre.{key[3]} * whole.centre.{key[4]}"
        elif key.startswith("P"):
            value = f"whole.principal.{words[key[1]]}"
        elif key.startswith("dir"):
            value = f"whole.principal.{words[key[3]]}_axis.{key[-1]}"
        elif key == "I_axis":
            value = "whole.J about line"
        elif key == "k_axis":
            value = "sqrt((whole.J about line) / whole.mass) as mm"
        else:
            raise KeyError(key)
        lines.append(f"{key} = {value}")
    return lines


def mesh_sheet(case):
    given, keys = case["given"], case["expect"]
    density = f"{num(given['density']['value'])} {given['density']['unit']}"
    lines = head(case, [])
    lines += [
        f'body part = mesh {{ file = "../{given["file"]}", unit = {given["file_unit"]}, density = {density} }} cite "case {case["id"]}"',
        "rotor whole about x { part at (0 mm, 0 mm, 0 mm) }",
        "mass = whole.mass",
    ]
    for key in keys:
        if key.startswith("com_"):
            lines.append(f"{key} = whole.centre.{key[-1]} as mm")
        elif key.startswith("Ic_"):
            lines.append(f"{key} = whole.tensor.{key[3:]}")
        elif key == "signed_volume":
            lines.append("volume = part.volume as mm^3")
    return lines


def unit_sheet(case):
    given, expect, lines = case["given"], case["expect"], head(case, ["inertia"])
    written = lambda q: f"{num(q['value'])} {q['unit'].replace('delta degF', 'delta_degF')}"
    kinds = {"moment of inertia (mass)": "moment_of_inertia", "angular speed": "angular_velocity"}
    kind = lambda text: kinds.get(text, text.replace(" ", "_").replace("absolute_", ""))
    if "reject" in expect:
        if "expression" in given:
            lines.append(f"value = {given['expression']}")
        elif "given_kind" in given:
            lines.append(f'given stated : {kind(given["given_kind"])} = {written(given["given"])} cite "case {case["id"]}"')
            lines.append(f"value : {kind(given['expected_kind'])} = stated")
        else:
            lines.append(f"value : {kind(given['expected_kind'])} = {written(given['given'])}")
        return lines
    for name, quantity in given.items():
        if isinstance(quantity, dict):
            colon = {"GD2": " : flywheel_effect", "WR2": " : moment_of_inertia", "T": " : torque"}.get(name, "")
            name = {"absolute": "level", "difference": "change"}.get(name, name)
            lines.append(f'given {name}{colon} = {written(quantity)} cite "case {case["id"]}"')
    rules = {
        "UN-17": ["J = inertia_from_flywheel_effect(GD2)"],
        "UN-18": ["J = inertia_from_flywheel_effect(GD2)"],
        "UN-41": ["absolute = level as K", "difference = change as K"],
        "UN-42": ["P : power = T * n as kW", "constant = 1 kW / (1 N*m * 1 rpm)"],
        "UN-43": [
            "t : time = WR2 * dn / T",
            "constant = (1 lbf*ft * 1 s) / (1 lb*ft^2 * 1 rpm)",
            "t_by_rule_308 = (WR2 / 1 lb*ft^2) * (dn / 1 rpm) / (308 * (T / 1 lbf*ft)) * 1 s",
        ],
        "UN-44": [
            "t : time = inertia_from_flywheel_effect(GD2) * n / T",
            "constant = (4 * g_n * 1 kgf*m * 1 s) / (1 kgf*m^2 * 1 rpm)",
        ],
    }
    return lines + rules.get(case["id"][:5], [f"value = quantity as {given.get('to')}"])


def written_sheet(case, texts):
    """A sheet written out in a template: {name} stands for the given of that name with its unit."""
    text = texts[case["id"]]
    for name, quantity in case["given"].items():
        if not isinstance(quantity, dict):
            continue
        unit = "" if quantity["unit"] == "1" else " " + quantity["unit"]
        values = quantity["value"] if isinstance(quantity["value"], list) else [quantity["value"]]
        for at, value in enumerate(values):
            mark = "{" + name + (f"[{at}]" if isinstance(quantity["value"], list) else "") + "}"
            text = text.replace(mark, f"{num(value)}{unit}")
    assert not re.search(r"\{\w+(\[\d+\])?\}", text), case["id"]
    return head(case, ["shapes", "inertia", "friction", "rope"]) + [text.strip()]


def main():
    folder = "sheets"
    os.makedirs(folder, exist_ok=True)
    for old in os.listdir(folder):
        os.remove(os.path.join(folder, old))
    sheets = [(case, mass_sheet(case)) for case in cases("mass.jsonl")]
    sheets += [(case, mesh_sheet(case)) for case in cases("meshes.jsonl")]
    sheets += [(case, unit_sheet(case)) for case in cases("units.jsonl")]
    sheets += [(case, written_sheet(case, ENERGY)) for case in cases("energy.jsonl")]
    sheets += [(case, written_sheet(case, ROPE)) for case in cases("rope.jsonl")]
    for case, lines in sheets:
        path = os.path.join(folder, case["id"].lower() + ".pintle")
        with open(path, "w", encoding="utf-8", newline="\n") as out:
            out.write("\n".join(lines) + "\n")
    print(f"{len(sheets)} sheets")


if __name__ == "__main__":
    main()
