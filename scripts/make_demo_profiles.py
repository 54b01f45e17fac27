#!/usr/bin/env python3
"""Makes the "measured" profiles of the invented Skerry Line out of the standards in data/standards.

    scripts/make_demo_profiles.py [OUT_FOLDER]        default: data/demo beside this script

Each is a standard profile, worn by a smooth depth along its normal, sampled as a laser device samples (0.1 mm apart)
and disturbed by normal noise of 0.02 mm along the normal, with a fixed draw: the same bytes come out every time. Only
the standard library of Python 3.11 is used. All numbers below are invented.
"""

import math
import pathlib
import random
import sys
import tomllib

DATA = pathlib.Path(__file__).resolve().parent.parent / "data"
SPACING = 0.1  # mm between points
NOISE = 0.02   # mm, standard deviation
FINE = 0.01    # mm, step of the lines that are worn before sampling


def wheel_line(name):
    """The wheel of data/standards as a fine polyline from flange back to field side, z up."""
    definition = tomllib.loads((DATA / "standards" / f"{name}.toml").read_text())
    sign = -1.0 if definition.get("z_axis") == "down" else 1.0
    pieces = sorted(definition["segment"], key=lambda piece: min(piece["y"]))
    line = []
    for piece in pieces:
        y0, y1 = sorted(piece["y"])
        if piece["kind"] == "arc":
            cy, cz = piece["centre"]
            r, half = piece["radius"], 1.0 if piece["branch"] == "upper" else -1.0
            a0, a1 = (math.acos(max(-1.0, min(1.0, (y - cy) / r))) for y in (y0, y1))
            n = max(2, round(r * abs(a1 - a0) / FINE))
            part = [(cy + r * math.cos(a), cz + half * r * math.sin(a))
                    for a in (a0 + (a1 - a0) * k / n for k in range(n + 1))]
        else:
            n = max(2, round((y1 - y0) / FINE))
            part = []
            for k in range(n + 1):
                y = y0 + (y1 - y0) * k / n
                z = 0.0
                for c in reversed(piece["coefficients"]):
                    z = z * y + c
                part.append((y, z))
        line += part[1 if line else 0:]
    return [(y, sign * z) for y, z in line]


def rail_line(name, gauge_depth, field_depth):
    """The rail head of data/standards as a fine polyline from gauge face to field side, cut at two depths."""
    definition = tomllib.loads((DATA / "standards" / f"{name}.toml").read_text())
    y, z, direction = 0.0, 0.0, 0.0  # direction: angle below the horizontal
    half = [(y, z)]
    for piece in definition["segment"]:
        if piece["kind"] == "arc":
            r = piece["radius"]
            cy, cz = y - r * math.sin(direction), z - r * math.cos(direction)
            end = math.asin((piece["to_y"] - cy) / r) if "to_y" in piece else math.atan(-piece["to_slope"])
            n = round(r * (end - direction) / FINE)
            half += [(cy + r * math.sin(a), cz + r * math.cos(a))
                     for a in (direction + (end - direction) * k / n for k in range(1, n + 1))]
            y, z, direction = *half[-1], end
        else:
            n = round((z - piece["to_z"]) / FINE)
            half += [(y + (z - piece["to_z"]) * k / n / math.tan(direction), z + (piece["to_z"] - z) * k / n)
                     for k in range(1, n + 1)]
    gauge = [(-y, z) for y, z in reversed(half) if z > -gauge_depth]
    return gauge[:-1] + [(y, z) for y, z in half if z > -field_depth]


def arcs(line):
    """Arc length at each point."""
    way = [0.0]
    for (y0, z0), (y1, z1) in zip(line, line[1:]):
        way.append(way[-1] + math.hypot(y1 - y0, z1 - z0))
    return way


def normals(line):
    """Unit normals to the left of travel (up)."""
    out = []
    for i in range(len(line)):
        (y0, z0), (y1, z1) = line[max(i - 1, 0)], line[min(i + 1, len(line) - 1)]
        length = math.hypot(y1 - y0, z1 - z0)
        out.append((-(z1 - z0) / length, (y1 - y0) / length))
    return out


def step(x, centre, width):
    """Rises smoothly from 0 to 1 around centre."""
    return 0.5 * (1.0 + math.tanh((x - centre) / width))


def worn(line, depth, sign):
    """Takes `depth(y, z)` off along the normal; sign +1 removes upwards (wheels), -1 downwards (rails)."""
    return [(y + sign * depth(y, z) * n[0], z + sign * depth(y, z) * n[1])
            for (y, z), n in zip(line, normals(line))]


def measured(line, seed):
    """Points every SPACING along the line, with noise along the normal."""
    draw = random.Random(seed)
    way, normal = arcs(line), normals(line)
    count = int(way[-1] / SPACING)
    points, i = [], 0
    for k in range(count + 1):
        target = way[-1] * k / count
        while i + 2 < len(way) and way[i + 1] < target:
            i += 1
        f = (target - way[i]) / (way[i + 1] - way[i])
        error = draw.gauss(0.0, NOISE)
        points.append(tuple((1 - f) * line[i][c] + f * line[i + 1][c] + error * normal[i][c] for c in (0, 1)))
    return points


def write(folder, name, title, points):
    text = (f"# title: {title}\n# source: invented measurement, scripts/make_demo_profiles.py\n"
            "# unit: mm\n# y_axis: field\n# z_axis: up\n"
            f"# noise_mm: {NOISE}\ny_mm,z_mm\n")
    text += "".join(f"{y:.4f},{z:.4f}\n" for y, z in points)
    (folder / name).write_bytes(text.encode())


def wheel_wear(y, z):
    """A hollow tread, and a flank thinned where it meets the gauge face."""
    tread = 3.6 * step(y, -27.0, 12.0) * (1.0 - step(y, 30.0, 9.0))
    flank = 1.0 * math.exp(-(((z + 9.0) / 9.0) ** 2)) * step(y, -50.0, 2.0) * (1.0 - step(y, -30.0, 8.0))
    return tread + flank


def high_rail_wear(y, z):
    """Crown worn flat, gauge corner and face worn towards the shape of a flange root."""
    crown = 0.9 * math.exp(-(((y + 6.0) / 20.0) ** 2))
    corner = 2.2 * (1.0 - step(y, -27.0, 10.0)) + 0.5 * math.exp(-(((y + 27.0) / 9.0) ** 2))
    face = 1.0 - step(-z, 19.0, 2.5)
    return crown + corner * face


def low_rail_wear(y, z):
    """A few months of traffic: the crown flattened a little towards the field side."""
    return 0.25 * math.exp(-(((y - 4.0) / 16.0) ** 2))


def main():
    folder = pathlib.Path(sys.argv[1]) if len(sys.argv) > 1 else DATA / "demo"
    folder.mkdir(parents=True, exist_ok=True)
    wheel, rail = wheel_line("S1002"), rail_line("60E1", 24.0, 20.0)
    write(folder, "wheel_new.csv", "Skerry Line, wheel S1002 after turning", measured(wheel, 11))
    write(folder, "wheel_worn.csv", "Skerry Line, hollow wheel", measured(worn(wheel, wheel_wear, +1.0), 12))
    write(folder, "rail_high_new.csv", "Skerry Line, curve 12, high rail when laid", measured(rail, 13))
    write(folder, "rail_high_worn.csv", "Skerry Line, curve 12, high rail worn",
          measured(worn(rail, high_rail_wear, -1.0), 14))
    write(folder, "rail_low.csv", "Skerry Line, curve 12, low rail", measured(worn(rail, low_rail_wear, -1.0), 15))


if __name__ == "__main__":
    main()
