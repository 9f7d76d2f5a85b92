"""Making assemblies from an arrangement, or from the plain description that a file keeps."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import TYPE_CHECKING, Any

from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.build_corner import corner
from mirrorlab.optics.build_tube import tube
from mirrorlab.optics.build_wedge import wedge
from mirrorlab.optics.kinds import kind_of
from mirrorlab.optics.lengths import AssemblyError
from mirrorlab.optics.mirror import MirrorSpec

if TYPE_CHECKING:
    from mirrorlab.mirrors import Arrangement


def assembly_for(arrangement: Arrangement, **dimensions: Any) -> Assembly:
    """Return the assembly of an arrangement: a wedge of two mirrors, a corner or tube of three, a tube of four.

    `dimensions` are those of `wedge`, `corner` or `tube`.

    Raises
    ------
    AssemblyError
        Mirrors that make none of these, or a dimension at fault.
    """
    kind = kind_of(arrangement)
    if kind == "wedge":
        return wedge(arrangement.angles[0], **dimensions)
    return (corner if kind == "corner" else tube)(arrangement.angles, **dimensions)


def assembly_from(dimensions: Mapping[str, Any]) -> Assembly:
    """Return the assembly that `Assembly.dimensions` describes.

    Raises
    ------
    AssemblyError
        An unknown kind or dimension, or one at fault.
    """
    makers: dict[str, Callable[..., Assembly]] = {"wedge": wedge, "corner": corner, "tube": tube}
    rest = {key: value for key, value in dimensions.items() if value is not None}
    kind = rest.pop("kind", None)
    if kind not in makers:
        msg = f"kind {kind!r}: must be 'wedge', 'corner' or 'tube'"
        raise AssemblyError(msg, "kind")
    if "mirrors" in rest and not isinstance(rest["mirrors"], str):
        rest["mirrors"] = [_mirror_from(value) for value in rest["mirrors"]]
    try:
        return makers[kind](**rest)
    except TypeError as error:
        known = set(makers[kind].__annotations__) - {"return"}
        strange = sorted(set(rest) - known)
        if not strange:
            msg = f"{kind}: {error}"
            raise AssemblyError(msg, "kind") from error
        msg = f"{', '.join(strange)}: no dimension of a {kind}; it has {', '.join(sorted(known))}"
        raise AssemblyError(msg, strange[0]) from error


def with_angles(assembly: Assembly, degrees: Sequence[float]) -> Assembly:
    """Return an assembly of the same dimensions whose mirrors stand at other angles, to see what an error does.

    Parameters
    ----------
    degrees : sequence of float
        Exactly as given, in the order of the angles that made the assembly; one for a wedge.

    Raises
    ------
    AssemblyError
        Another number of angles (`field` is "actual"), or angles that cannot stand.
    """
    given = dict(assembly.dimensions)
    typed = given.get("angles", [None])
    count = len(typed) if isinstance(typed, list) else 1
    if len(degrees) != count:
        msg = f"{len(degrees)} actual angles for {count}: give as many as made the {assembly.kind}"
        raise AssemblyError(msg, "actual")
    actual: object = float(degrees[0]) if assembly.kind == "wedge" else [float(value) for value in degrees]
    return assembly_from(given | {"angle" if assembly.kind == "wedge" else "angles": actual})


def _mirror_from(value: Any) -> str | MirrorSpec:
    if isinstance(value, str | MirrorSpec):
        return value
    return MirrorSpec(value["surface"], value["reflectance"], tuple(value["tint"]), value.get("name", ""))
