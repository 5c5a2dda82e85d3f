"""Compares field files, read by the VTK library, with their arrays from other sources.

usage: read_vtr.py plain FOLDER      every NAME.vtr and NAME.vts in FOLDER against NAME.txt,
                                     every array bit by bit
       read_vtr.py results FOLDER    fields.vtr (and revolved.vts) of a results folder against
                                     its summary.json and csv files
"""

import csv
import json
import math
import pathlib
import struct
import sys

import numpy as np
import vtk
from vtk.util.numpy_support import vtk_to_numpy

failures = 0


def check(name, good, detail=""):
    global failures
    failures += not good
    print(f"{'ok    ' if good else 'FAILED'} {name}{' : ' + str(detail) if detail != '' else ''}")


def read(path):
    reader = vtk.vtkXMLRectilinearGridReader() if path.suffix == ".vtr" else vtk.vtkXMLStructuredGridReader()
    errors = []
    reader.AddObserver("ErrorEvent", lambda *_: errors.append("error"))
    reader.SetFileName(str(path))
    reader.Update()
    check(f"{path.name} is read without errors", not errors and reader.GetErrorCode() == 0)
    return reader.GetOutput()


def cell_arrays(grid):
    data = grid.GetCellData()
    return {data.GetArrayName(n): vtk_to_numpy(data.GetArray(n)) for n in range(data.GetNumberOfArrays())}


def same_bits(a, b):
    a, b = np.ascontiguousarray(a), np.ascontiguousarray(b)
    return a.shape == b.shape and a.dtype == b.dtype and a.tobytes() == b.tobytes()


def lines(grid):
    return [vtk_to_numpy(c) for c in (grid.GetXCoordinates(), grid.GetYCoordinates(), grid.GetZCoordinates())]


def plain_arrays(path):
    sectors, arrays = None, {}
    for row in path.read_text().splitlines():
        words = row.split()
        if words[0] == "sectors":
            sectors = int(words[1])
        elif words[1] == "f64":
            arrays[words[0]] = np.array([struct.unpack(">d", bytes.fromhex(w))[0] for w in words[2:]])
        else:
            arrays[words[0]] = np.array([int(w) for w in words[2:]], dtype=np.int32)
    return sectors, arrays


def revolved_points(x, y, sectors):
    turn = 2.0 * math.pi * (np.arange(sectors + 1) % sectors) / sectors
    points = np.zeros((len(y), sectors + 1, len(x), 3))
    points[..., 0] = x[None, None, :] * np.cos(turn)[None, :, None]
    points[..., 1] = x[None, None, :] * np.sin(turn)[None, :, None]
    points[..., 2] = y[:, None, None]
    return points.reshape(-1, 3)


def revolved(values, nx, ny, sectors):
    """Values per cell of the section repeated round the axis; vectors turned."""
    rows = np.repeat(values.reshape(ny, 1, nx, -1), sectors, axis=1)
    if rows.shape[-1] == 1:
        return rows.reshape(-1)
    middle = 2.0 * math.pi * (np.arange(sectors) + 0.5) / sectors
    out = np.zeros((ny, sectors, nx, 3))
    out[..., 0] = rows[..., 0] * np.cos(middle)[None, :, None]
    out[..., 1] = rows[..., 0] * np.sin(middle)[None, :, None]
    out[..., 2] = rows[..., 1]
    return out.reshape(-1, 3)


def compare_revolved(grid, x, y, sectors, section):
    nx, ny = len(x) - 1, len(y) - 1
    dimensions = [0, 0, 0]
    grid.GetDimensions(dimensions)
    check("dimensions (radius, turn, height)", dimensions == [nx + 1, sectors + 1, ny + 1], dimensions)
    points = vtk_to_numpy(grid.GetPoints().GetData())
    scale = max(x[-1], y[-1])
    check("points", np.abs(points - revolved_points(x, y, sectors)).max() <= 4e-16 * scale)
    arrays = cell_arrays(grid)
    check("array names", set(arrays) == set(section), sorted(arrays))
    for name, values in section.items():
        expected = revolved(values, nx, ny, sectors)
        if expected.ndim == 1:
            check(f"revolved {name}, bit by bit", same_bits(arrays[name], expected))
        else:
            error = np.abs(arrays[name] - expected).max()
            check(f"revolved {name}", error <= 4e-16 * np.abs(expected).max(), error)
    sizes = vtk.vtkCellSizeFilter()
    sizes.SetInputData(grid)
    sizes.Update()
    volumes = vtk_to_numpy(sizes.GetOutput().GetCellData().GetArray("Volume"))
    check("every cell has a positive volume", volumes.min() > 0.0)
    polygon = 0.5 * sectors * math.sin(2.0 * math.pi / sectors) * (x[-1] ** 2 - x[0] ** 2)
    total = polygon * (y[-1] - y[0])
    check("volumes add up to the prism", abs(volumes.sum() / total - 1.0) < 1e-9, volumes.sum() / total)


def plain(folder):
    texts = sorted(folder.glob("*.txt"))
    check("there are files to compare", len(texts) > 0, len(texts))
    for text in texts:
        print(f"-- {text.stem}")
        sectors, arrays = plain_arrays(text)
        x, y = arrays.pop("x"), arrays.pop("y")
        # A name with a tilde: worked out in another order of operations, equal but for round-off.
        rounded = {name[1:] for name in arrays if name.startswith("~")}
        arrays = {name.lstrip("~"): values for name, values in arrays.items()}
        grid = read(text.with_suffix(".vtr"))
        gx, gy, gz = lines(grid)
        check("lines, bit by bit", same_bits(gx, x) and same_bits(gy, y) and list(gz) == [0.0])
        found = cell_arrays(grid)
        check("array names", set(found) == set(arrays), sorted(found))
        cells = (len(x) - 1) * (len(y) - 1)
        section = {}
        for name, values in arrays.items():
            if len(values) == 2 * cells:
                values = np.column_stack([values.reshape(-1, 2), np.zeros(cells)])
            if name in rounded:
                error = np.abs(found[name] - values).max()
                check(f"{name} {values.dtype}", error <= 1e-13 * np.abs(values).max(), error)
            else:
                check(f"{name} {values.dtype}, bit by bit", same_bits(found[name], values))
            section[name] = found[name][:, :2] if values.ndim == 2 else found[name]
        compare_revolved(read(text.with_suffix(".vts")), x, y, sectors, section)


def close(a, b, tolerance=1e-12):
    return a is not None and b is not None and abs(a - b) <= tolerance * max(abs(a), abs(b), 1.0)


def rows_of(path):
    with open(path, newline="") as file:
        return list(csv.DictReader(file))


def results(folder):
    summary = json.loads((folder / "summary.json").read_text())
    grid = read(folder / "fields.vtr")
    x, y, _ = lines(grid)
    nx, ny = len(x) - 1, len(y) - 1
    mesh = summary["mesh"]
    check("cell counts", (nx, ny, nx * ny) == (mesh["nx"], mesh["ny"], mesh["cells"]), (nx, ny))
    sizes = np.concatenate([np.diff(x), np.diff(y)])
    check("lines rise", sizes.min() > 0.0)
    check("smallest cell", sizes.min() == mesh["smallest_m"], sizes.min())
    check("largest cell", sizes.max() == mesh["largest_m"], sizes.max())
    arrays = cell_arrays(grid)
    names = {"temperature", "velocity", "speed", "pressure", "block", "material", "heat_flux"}
    check("array names", set(arrays) == names, sorted(arrays))
    block, temperature, velocity = arrays["block"], arrays["temperature"], arrays["velocity"]
    check("indices are 32-bit", block.dtype == np.int32 and arrays["material"].dtype == np.int32)
    check("all finite", all(np.isfinite(a).all() for a in arrays.values()))

    blocks, materials = summary["blocks"], summary["materials"]
    found = sorted(set(block[block >= 0].tolist()))
    check("every block has cells", found == list(range(len(blocks))), found)
    of_block = np.array([materials.index(b["material"]) for b in blocks] + [-1], dtype=np.int32)
    check("material follows from block", np.array_equal(arrays["material"], of_block[block]))
    for number, entry in enumerate(blocks):
        hottest = temperature[block == number].max()
        check(f"hottest cell of block {number}", hottest == entry["max_c"], hottest)
    by_name = {row["part"]: row for row in rows_of(folder / "parts.csv")}
    for part in summary["parts"]:
        numbers = [n for n, b in enumerate(blocks) if b["part"] == part["name"]]
        values = temperature[np.isin(block, numbers)]
        low, high = values.min(), values.max()
        check(f"part {part['name']}, lowest and highest", (low, high) == (part["min_c"], part["max_c"]))
        row = by_name[part["name"]]
        check(f"part {part['name']} in parts.csv", float(row["max_c"]) == high, row["max_c"])
    if (block < 0).any():
        warmest = temperature[block < 0].max()
        check("warmest air", warmest == summary["air"]["max_temperature_c"], warmest)

    check("no third component", not velocity[:, 2].any() and not arrays["heat_flux"][:, 2].any())
    check("no flow in blocks", not velocity[block >= 0].any() and not arrays["pressure"][block >= 0].any())
    speed = np.hypot(velocity[:, 0], velocity[:, 1])
    check("speed is the size of velocity", np.abs(speed - arrays["speed"]).max() <= 1e-15 * speed.max())
    check("highest speed", close(speed.max(), summary["air"]["max_speed_m_s"]), speed.max())

    for row in rows_of(folder / "probes.csv"):
        if row["inside"] == "air" and row["distance_m"] == "0":
            i = min(np.searchsorted(x, float(row["x_m"]), "right") - 1, nx - 1)
            j = min(np.searchsorted(y, float(row["y_m"]), "right") - 1, ny - 1)
            near = [temperature[ii + nx * jj] for ii in range(max(i - 1, 0), min(i + 2, nx))
                    for jj in range(max(j - 1, 0), min(j + 2, ny))]
            inside = min(near) - 1e-9 <= float(row["temperature_c"]) <= max(near) + 1e-9
            check(f"probe {row['probe']} lies between its cells", inside, row["temperature_c"])

    one_conductivity(x, y, arrays)
    heat_paths(summary)
    last = rows_of(folder / "history.csv")[-1:]
    check("history ends with the last iteration", [int(r["iteration"]) for r in last] == [summary["iterations"]])
    if (folder / "revolved.vts").exists():
        sectors = read(folder / "revolved.vts").GetExtent()[3]
        section = {n: (a[:, :2] if a.ndim == 2 else a) for n, a in arrays.items()}
        compare_revolved(read(folder / "revolved.vts"), x, y, sectors, section)


def one_conductivity(x, y, arrays):
    """In the inner cells of a block the flux along y over the slope of temperature is the same
    conductivity everywhere."""
    block = arrays["block"].reshape(len(y) - 1, len(x) - 1)
    flux = arrays["heat_flux"].reshape(*block.shape, 3)[..., 1]
    t = arrays["temperature"].reshape(block.shape)
    centre = 0.5 * (y[1:] + y[:-1])
    slope = np.diff(t, axis=0) / np.diff(centre)[:, None]
    mean = 0.5 * (slope[1:] + slope[:-1])
    inner = (block[2:] == block[1:-1]) & (block[:-2] == block[1:-1])
    for number in sorted(set(block[block >= 0].tolist())):
        here = inner & (block[1:-1] == number)
        if not here.any():
            continue
        # Where the slope nearly vanishes nothing can be told apart from round-off.
        here &= np.abs(mean) > max(1e-3 * np.abs(mean[here]).max(), 1e-6)
        if here.sum() > 1:
            ratio = -flux[1:-1][here] / mean[here]
            spread = ratio.max() / ratio.min() - 1.0
            check(f"block {number} has one conductivity", ratio.min() > 0.0 and spread < 1e-4, np.median(ratio))


def heat_paths(summary):
    heat = sum(s["heat_w"] for s in summary["slots"]) + sum(s["heat_w"] for s in summary["sides"])
    paths = summary["heat_paths_w"]
    check("heat paths add up", close(heat, paths["slots"] + paths["sides"], 1e-9), heat)
    made = sum(b["heat_w"] for b in summary["blocks"])
    settled = summary["verdict"] == "settled"
    check("settled heat out is heat made", not settled or abs(heat - made) <= 1e-6 * abs(made), heat)


if __name__ == "__main__":
    if len(sys.argv) != 3 or sys.argv[1] not in ("plain", "results"):
        sys.exit(__doc__)
    {"plain": plain, "results": results}[sys.argv[1]](pathlib.Path(sys.argv[2]))
    print(f"{failures} failed" if failures else "all arrays agree")
    sys.exit(1 if failures else 0)
