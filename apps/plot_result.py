#!/usr/bin/env python3
"""Draws a result of `farsum solve`: the charges seen from the side, coloured by their potential, and how strong the fields are.

Usage: plot_result.py RESULT.h5 REPORT.json PICTURE.png
RESULT.h5 is the result file, REPORT.json the report of the same run (`solve --json`). Only numbers are taken from either file.
"""
import json
import sys

import h5py
import matplotlib

matplotlib.use("Agg")
import matplotlib.pyplot as plt  # noqa: E402
import numpy as np  # noqa: E402
from matplotlib.ticker import FuncFormatter, LogLocator, NullFormatter  # noqa: E402

DRAWN_POINTS = 60000  # a random choice of so many charges is drawn; the histogram counts all of them
PREFIXES = [(1e-12, "p"), (1e-9, "n"), (1e-6, "µ"), (1e-3, "m"), (1.0, ""), (1e3, "k"), (1e6, "M"), (1e9, "G")]


def component(parent, name, count):
    """Values of a component in SI units, whether stored as a data set or as one constant."""
    item = parent[name]
    scale = float(np.ravel(item.attrs["unitSI"])[0])
    if isinstance(item, h5py.Dataset):
        return item[:] * scale
    return np.full(count, float(np.ravel(item.attrs["value"])[0]) * scale)


def read_result(path):
    """Positions (3 x n), potential (n) and field (3 x n) of all species of the first iteration, in SI units."""
    positions, potentials, fields = [], [], []
    with h5py.File(path, "r") as file:
        iterations = file["data"]
        particles = iterations[sorted(iterations, key=int)[0]]["particles"]
        for species in particles.values():
            count = species["potential"].shape[0]
            positions.append([component(species["position"], axis, count) for axis in "xyz"])
            potentials.append(component(species, "potential", count))
            fields.append([component(species["electricField"], axis, count) for axis in "xyz"])
    return np.concatenate(positions, axis=1), np.concatenate(potentials), np.concatenate(fields, axis=1)


def grouped(count):
    """A count with thin spaces between groups of three digits."""
    return f"{count:,}".replace(",", "\u2009")


def scaled(values, unit):
    """Values and unit with the prefix that brings nine of ten sizes below 1000, the largest of those above 1."""
    size = np.percentile(np.abs(values), 90) if values.size else 0.0
    factor, prefix = PREFIXES[4]
    for candidate, name in PREFIXES:
        if size >= candidate:
            factor, prefix = candidate, name
    return values / factor, prefix + unit


def side_view(positions):
    """The two axes of largest spread, the larger one first."""
    spread = np.std(positions, axis=1)
    order = sorted(range(3), key=lambda axis: (-spread[axis], axis))
    return order[0], order[1]


def draw_charges(figure, axes, positions, potential):
    first, second = side_view(positions)
    lengths, unit = scaled(positions - positions.mean(axis=1, keepdims=True), "m")
    volts, volt_unit = scaled(potential, "V")
    chosen = np.random.default_rng(1).permutation(potential.size)[:DRAWN_POINTS]
    low, high = np.percentile(volts, [0.1, 99.9])
    dots = axes.scatter(lengths[first][chosen], lengths[second][chosen], c=volts[chosen], s=1.2, linewidths=0, cmap="viridis",
                        vmin=low, vmax=high, rasterized=True)
    figure.colorbar(dots, ax=axes, label=f"potential ({volt_unit})", extend="both")
    axes.set_xlabel(f"{'xyz'[first]} from the centre ({unit})")
    axes.set_ylabel(f"{'xyz'[second]} from the centre ({unit})")
    axes.set_title(f"{grouped(chosen.size)} of {grouped(potential.size)} charges, seen along {'xyz'[3 - first - second]}")


def draw_fields(axes, field):
    strength = np.sqrt(np.sum(field**2, axis=0))
    values, unit = scaled(strength[np.isfinite(strength) & (strength > 0)], "V/m")
    if values.size:
        low, high = np.percentile(values, [0.01, 99.99])
        edges = np.geomspace(max(low, values.max() * 1e-9), max(high, low * 1.01), 81)
        axes.hist(values, bins=edges, color="#35608d")
        axes.axvline(np.median(values), color="black", linestyle="--", linewidth=1, label=f"median {np.median(values):.3g} {unit}")
        axes.legend(frameon=False, loc="upper left")
    axes.set_xscale("log")
    narrow = values.size and high < 30 * low
    axes.xaxis.set_major_locator(LogLocator(subs=(1, 2, 5) if narrow else (1,)))
    axes.xaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
    axes.xaxis.set_minor_formatter(NullFormatter())
    axes.set_ylim(top=axes.get_ylim()[1] * 1.15)
    axes.set_xlabel(f"field strength at a charge ({unit})")
    axes.set_ylabel("charges per bin")
    axes.set_title("How strong the fields are")


def headline(report, count):
    """First line of the picture: what was asked, what was measured."""
    error, asked = report["error"]["field_rms"], report["tolerance"]
    seconds = report["seconds"]["solve"]
    text = f"Electric field of {grouped(count)} point charges"
    if error is not None:
        text += f": error {error:.1e} measured, {asked:.0e} asked"
    return text + (f"; solved in {seconds:.2g} s" if seconds is not None else "")


def main():
    if len(sys.argv) != 4:
        sys.exit(__doc__)
    positions, potential, field = read_result(sys.argv[1])
    with open(sys.argv[2], encoding="utf-8") as stream:
        report = json.load(stream)
    figure, axes = plt.subplots(1, 2, figsize=(13, 5.2), gridspec_kw={"width_ratios": [1.5, 1]}, constrained_layout=True)
    figure.suptitle(headline(report, potential.size), fontsize=13)
    draw_charges(figure, axes[0], positions, potential)
    draw_fields(axes[1], field)
    figure.savefig(sys.argv[3], dpi=130, metadata={"Software": None})


if __name__ == "__main__":
    main()
