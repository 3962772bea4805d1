"""The sound of a point source on the front of a closed rigid box, by boundary elements.

Reads JSON from standard input and writes JSON to standard output:

    { "width": m, "height": m, "depth": m, "source": [x, y], "ears": [[x, y, z], ...],
      "frequency_hz": [...], "speed": m/s, "element": m }
    { "pressure": [[[re, im], ...by ear], ...by frequency] }

The front is in the plane z = 0, centred on the origin; the pressure is over that of the same source in an infinite
baffle at the same distance. A closed surface's pressure p solves p/2 - Dp = G at its points, D being the double-layer
operator and G the source's free field; points inside, where Dp + G = 0, keep the solution unique (H. A. Schenck, J.
Acoust. Soc. Am. 44(1), 41-58, 1968). On the front 2G, which is singular, is taken out of p and integrated on a
finer grid. Elements are constant, with two by two Gauss points.
"""
import json
import sys

import numpy as np

GAUSS = np.array([-1, 1]) / np.sqrt(3)


def box(width, height, depth, size):
    """Centres, two spanning vectors and outward normals of the elements."""
    x, y, z = np.eye(3)
    front = np.array([-width / 2, -height / 2, 0.0])
    back = front - depth * z
    elements = []
    for corner, u, lu, v, lv, normal in [
        (front, x, width, y, height, z),
        (back, x, width, y, height, -z),
        (back, x, width, z, depth, -y),
        (back + height * y, x, width, z, depth, y),
        (back, y, height, z, depth, -x),
        (back + width * x, y, height, z, depth, x),
    ]:
        nu, nv = max(2, round(lu / size)), max(2, round(lv / size))
        for i in range(nu):
            for j in range(nv):
                centre = corner + u * lu * (i + 0.5) / nu + v * lv * (j + 0.5) / nv
                elements.append((centre, u * lu / nu, v * lv / nv, normal))
    return [np.array(part) for part in zip(*elements)]


def slope(points, at, normal, k):
    """Normal derivative at each of at of the free field of each of points."""
    r = points[:, None, :] - at[None]
    distance = np.sqrt((r**2).sum(2))
    return np.exp(-1j * k * distance) / (4 * np.pi * distance) * (1j * k + 1 / distance) * (r * normal).sum(2) / distance


def double_layer(points, elements, k):
    centre, u, v, normal = elements
    area = np.linalg.norm(np.cross(u, v), axis=1)
    return sum(slope(points, centre + u * a / 2 + v * b / 2, normal, k) for a in GAUSS for b in GAUSS) * area / 4


def front_layer(points, width, height, p, k, cells=60):
    """Double layer of the field p over the front, by an even grid of cells."""
    x, y = (((np.arange(cells)[:, None] + 0.5 + GAUSS / 2) / cells - 0.5) * length for length in (width, height))
    grid = np.array([[a, b, 0] for a in x.ravel() for b in y.ravel()])
    weight = p(grid) * width * height / len(grid)
    return np.concatenate([slope(part, grid, np.array([0, 0, 1.0]), k) @ weight for part in np.array_split(points, 1 + len(points) // 200)])


def answer(request):
    width, height, depth = request["width"], request["height"], request["depth"]
    source, ears = np.array([*request["source"], 0.0]), np.array(request["ears"], float)
    elements = box(width, height, depth, request["element"])
    centre, normal = elements[0], elements[3]
    behind = normal[:, 2] < 0.5  # all but the front
    inside = (np.random.default_rng(1).random((20, 3)) - 0.5) * [width, height, depth] * 0.8 - [0, 0, depth / 2]
    pressure = []
    for f in request["frequency_hz"]:
        k = 2 * np.pi * f / request["speed"]

        def free(at):
            distance = np.linalg.norm(at - source, axis=1)
            return np.exp(-1j * k * distance) / (4 * np.pi * distance)

        def known(at):
            return free(at) + front_layer(at, width, height, lambda grid: 2 * free(grid), k)

        matrix = -double_layer(centre, elements, k)
        np.fill_diagonal(matrix, 0.5)
        right = np.zeros(len(centre), complex)
        right[behind] = known(centre[behind])
        matrix = np.vstack([matrix, -double_layer(inside, elements, k)])
        right = np.concatenate([right, known(inside)])
        rest = np.linalg.solve(matrix.conj().T @ matrix, matrix.conj().T @ right)
        total = known(ears) + double_layer(ears, elements, k) @ rest
        pressure.append([[z.real, z.imag] for z in total / (2 * free(ears))])
    return {"pressure": pressure}


json.dump(answer(json.load(sys.stdin)), sys.stdout)
