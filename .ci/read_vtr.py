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
    check("dimensions (radius, turn, height)", grid.GetDimensions() == (nx + 1, sectors + 1, ny + 1))
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
        grid = read(text.with_suffix(".vtr"))
        gx, gy, gz = lines(grid)
        check("lines, bit by bit", same_bits(gx, x) and same_bits(gy, y) and list(gz) == [0.0])
        found = cell_arrays(grid)
        check("array names", set(found) == set(arrays), sorted(found))
        cells = (len(x) - 1) * (len(y) - 1)
        for name, values in arrays.items():
            if len(values) == 2 * cells:
                values = np.column_stack([values.reshape(-1, 2), np.zeros(cells)])
            check(f"{name} {values.dtype}, bit by bit", same_bits(found[name], values))
        section = {n: v.reshape(-1, 2) if len(v) == 2 * cells else v for n, v in arrays.items()}
        compare_revolved(read(text.with_suffix(".vts")), x, y, sectors, section)


if __name__ == "__main__":
    if len(sys.argv) != 3 or sys.argv[1] not in ("plain", "results"):
        sys.exit(__doc__)
    {"plain": plain, "results": lambda f: results(f)}[sys.argv[1]](pathlib.Path(sys.argv[2]))
    print(f"{failures} failed" if failures else "all arrays agree")
    sys.exit(1 if failures else 0)
