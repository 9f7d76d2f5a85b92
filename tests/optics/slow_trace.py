"""A slow twin of the ray tracer, written from the definition: every ray against every panel's outline, in numpy.

It knows nothing of the convex body, of packets, or of the table of products.
"""

from __future__ import annotations

import math

import numpy as np

from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.scene import Scene


def hit_polygon(points, ways, outline):
    """Distance along each ray to a polygon, infinite where it is missed."""
    normal = np.cross(outline[1] - outline[0], outline[2] - outline[0])
    normal = normal / np.linalg.norm(normal)
    with np.errstate(divide="ignore", invalid="ignore"):
        time = (outline[0] - points) @ normal / (ways @ normal)
        spots = points + time[:, None] * ways
        inside = np.ones(len(points), dtype=bool)
        for k in range(len(outline)):
            side = outline[(k + 1) % len(outline)] - outline[k]
            inside &= np.cross(side, spots - outline[k]) @ normal >= 0
    return np.where(inside & (time > 1e-7), time, np.inf), normal


def look_up(picture, u, v):
    """Linear light of a picture without smoothing; u to the right and v from the top, 0 to 1."""
    height, width = picture.shape[:2]
    x, y = np.clip(u * width - 0.5, 0, width - 1), np.clip(v * height - 0.5, 0, height - 1)
    i, j = np.minimum(x.astype(int), width - 2), np.minimum(y.astype(int), height - 2)
    fx, fy = (x - i)[:, None], (y - j)[:, None]
    top = picture[j, i] * (1 - fx) + picture[j, i + 1] * fx
    low = picture[j + 1, i] * (1 - fx) + picture[j + 1, i + 1] * fx
    return top * (1 - fy) + low * fy


def slow_trace(assembly: Assembly, scene: Scene, size: tuple[int, int], most: int = 60) -> np.ndarray:
    """Linear light of a view, shape (height, width, 3). Straight card or ball; the opening is the whole mouth."""
    width, height = size
    texture = scene.texture
    first = texture.texels[: texture.widths[0] * texture.heights[0]].astype(float)
    picture = first.reshape(texture.heights[0], texture.widths[0], 4)
    forward = assembly.target - assembly.eye
    forward = forward / np.linalg.norm(forward)
    right = np.cross(forward, assembly.up)
    right = right / np.linalg.norm(right)
    up = np.cross(right, forward)
    step = 2 * math.tan(assembly.field_of_view / 2) / min(size)
    x, y = np.meshgrid(
        (np.arange(width) + 0.5 - width / 2) * step, (height / 2 - np.arange(height) - 0.5) * step
    )
    ways = forward + x.reshape(-1, 1) * right + y.reshape(-1, 1) * up
    ways = ways / np.linalg.norm(ways, axis=1)[:, None]
    points = np.tile(assembly.eye, (len(ways), 1))
    lights = scene.lights.rows()
    weight, light = np.ones((len(ways), 3)), np.zeros((len(ways), 3))
    alive = np.ones(len(ways), dtype=bool)

    mouth = assembly.mouth
    out = np.cross(mouth[1] - mouth[0], mouth[2] - mouth[0])
    if out @ (assembly.eye - mouth[0]) > 1e-9 * np.linalg.norm(out):
        away, _ = hit_polygon(points, ways, mouth)
        for panel in assembly.panels:  # the back of a mirror hides the opening
            back, _ = hit_polygon(points, ways, panel.outline)
            blocked = (back < away) & (ways @ panel.normal > 0)
            away[blocked] = np.inf
        missed = ~np.isfinite(away)
        if assembly.kind == "wedge":  # a wedge looked into is open above too
            high = mouth[:, 2].max()
            edge = assembly.panels[0].outline[:, :2].mean(axis=0) * 0
            lid = np.array([[*edge, high], [*mouth[2, :2], high], [*mouth[0, :2], high]])
            above, _ = hit_polygon(points, ways, lid)
            above[ways[:, 2] >= 0] = np.inf
            away = np.minimum(away, above)
            missed = ~np.isfinite(away)
        light[missed] = lights[5]
        alive &= ~missed
        points[alive] += away[alive, None] * ways[alive]

    place = assembly.place
    normal = np.cross(place.right, place.up)
    for _ in range(most):
        if not alive.any():
            break
        rows = np.flatnonzero(alive)
        times, normals = [], []
        for panel in assembly.panels:
            time, face = hit_polygon(points[rows], ways[rows], panel.outline)
            time[ways[rows] @ panel.normal >= 0] = np.inf
            times.append(time)
            normals.append(face)
        if place.inside and place.shape == "ball":
            b = np.sum((points[rows] - place.centre) * ways[rows], axis=1)
            q = np.sum((points[rows] - place.centre) ** 2, axis=1) - (place.width / 2) ** 2
            root = b * b - q
            met = np.where((root > 0) & (b < 0), -b - np.sqrt(np.maximum(root, 0)), np.inf)
        elif place.inside:
            with np.errstate(divide="ignore", invalid="ignore"):
                met = (place.centre - points[rows]) @ normal / (ways[rows] @ normal)
            spot = points[rows] + met[:, None] * ways[rows] - place.centre
            inside = (np.abs(spot @ place.right) <= place.width / 2) & (
                np.abs(spot @ place.up) <= place.height / 2
            )
            met = np.where((met > 0) & inside, met, np.inf)
        else:
            met = np.full(len(rows), np.inf)
        table = np.array([*times, met])
        choice, best = table.argmin(axis=0), table.min(axis=0)
        for k in range(len(rows)):
            row, time = rows[k], best[k]
            if not np.isfinite(time):
                light[row] += weight[row] * end_light(
                    assembly, scene, picture, points[row], ways[row], lights
                )
                alive[row] = False
                continue
            points[row] += time * ways[row]
            if choice[k] < len(assembly.panels):
                mirror = assembly.mirrors[choice[k]]
                weight[row] *= mirror.reflectance * np.array(mirror.tint)
                face = normals[choice[k]]
                ways[row] -= 2 * (ways[row] @ face) * face
                continue
            spot = points[row] - place.centre
            if place.shape == "ball":
                facing = -(spot @ ways[row]) / (place.width / 2)
                u = math.atan2(spot @ place.right, spot @ normal) / (2 * math.pi) + 0.5
                texel = look_up(picture, np.array([u]), np.array([0.5 - spot @ place.up / place.width]))[0]
                light[row] += weight[row] * texel[:3] * (0.45 + 0.55 * facing)
            else:
                texel = card_texel(place, picture, points[row])
                light[row] += weight[row] * texel[:3]
            weight[row] *= 1 - texel[3]
            if texel[3] > 0.99:
                alive[row] = False
    return light.reshape(height, width, 3)


def end_light(assembly, scene, picture, point, way, lights):
    """Linear light of what a ray ends on that meets no more mirror."""
    place = assembly.place
    low = min(panel.outline[:, 2].min() for panel in assembly.panels)
    floor = (low - point[2]) / way[2] if way[2] < 0 else np.inf
    reaches = np.inf
    if assembly.kind == "wedge":
        far = assembly.panels[0].outline[:, 1].max()
        reaches = (far - point[1]) / way[1] if way[1] > 0 else np.inf
        into = place.inside
        if floor < reaches and floor < np.inf:
            return lights[4] if into else card_light(place, picture, point + floor * way, lights)
        if reaches < np.inf and not into:
            high = assembly.panels[0].outline[:, 2].max()
            if point[2] + reaches * way[2] <= high:
                return lights[3]
    elif floor < np.inf and (low > 0 or assembly.kind == "tube"):
        return card_light(place, picture, point + floor * way, lights)
    rise = 0.5 + 0.5 * way @ scene.upwards
    return lights[0] + (lights[1] - lights[0]) * rise


def card_light(place, picture, spot, lights):
    """Linear light of the card that closes the far end, or of the lit plate there when the object stands free."""
    return lights[2] if place.inside else card_texel(place, picture, spot)[:3]


def card_texel(place, picture, spot):
    """What a card shows at a place: the picture covers it and keeps its proportions."""
    aspect = picture.shape[1] / picture.shape[0]
    scale = max(place.width / aspect, place.height)
    u = 0.5 + (spot - place.centre) @ place.right / (scale * aspect)
    v = 0.5 - (spot - place.centre) @ place.up / scale
    return look_up(picture, np.array([u]), np.array([v]))[0]
