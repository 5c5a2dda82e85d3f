"""Sections as meshes of rectangles between given lines."""

import netgen.meshing as nm
import ngsolve as ng


def rectangles(xs, ys, material, edge):
    """Mesh of the rectangles between the lines xs and ys.

    `material(x, y)` names the rectangle around a point. `edge(x, y, here, there)` names the edge with
    this middle between two materials (`there` is None on the outside), or returns None for edges
    that carry no condition.
    """
    nx, ny = len(xs) - 1, len(ys) - 1
    names = [[material(0.5 * (xs[i] + xs[i + 1]), 0.5 * (ys[j] + ys[j + 1])) for i in range(nx)] for j in range(ny)]
    mesh = nm.Mesh(dim=2)
    points = [[mesh.Add(nm.MeshPoint(nm.Pnt(x, y, 0.0))) for x in xs] for y in ys]

    domains = sorted({name for row in names for name in row})
    for number, name in enumerate(domains, 1):
        mesh.SetMaterial(number, name)
    for j in range(ny):
        for i in range(nx):
            corners = [points[j][i], points[j][i + 1], points[j + 1][i + 1], points[j + 1][i]]
            mesh.Add(nm.Element2D(domains.index(names[j][i]) + 1, corners))

    # The outline runs anticlockwise: that makes its normals point outward.
    edges = []
    for j in range(ny + 1):
        for i in range(nx):
            sides = [names[k][i] for k in (j - 1, j) if 0 <= k < ny]
            ends = points[j][i], points[j][i + 1]
            edges.append((0.5 * (xs[i] + xs[i + 1]), ys[j], sides, ends if j < ny else ends[::-1]))
    for i in range(nx + 1):
        for j in range(ny):
            sides = [names[j][k] for k in (i - 1, i) if 0 <= k < nx]
            ends = points[j][i], points[j + 1][i]
            edges.append((xs[i], 0.5 * (ys[j] + ys[j + 1]), sides, ends if i > 0 else ends[::-1]))
    conditions = []
    for x, y, sides, ends in edges:
        name = edge(x, y, sides[0], sides[1] if len(sides) == 2 else None)
        if name is not None:
            if name not in conditions:
                conditions.append(name)
            mesh.Add(nm.Element1D(list(ends), index=conditions.index(name) + 1))
    for number, name in enumerate(conditions):
        mesh.SetBCName(number, name)
    return ng.Mesh(mesh)
