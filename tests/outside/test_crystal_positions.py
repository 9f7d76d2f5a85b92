"""General and special positions of the 32 point groups against International Tables A, chapter 10.1."""

import gemmi
import numpy as np
import pytest

from mirrorlab.crystal.generators import THE_32
from mirrorlab.crystal.pointgroups import point_group
from mirrorlab.crystal.positions import orbit_under, positions_of

# Multiplicity, oriented site symmetry, one of the points (from memory of table 10.1.2.2 and of the symmorphic
# primitive space groups, whose positions through the origin have the same symbols).
TABLE = {
    "1": "1 1 x,y,z",
    "-1": "2 1 x,y,z; 1 -1 0,0,0",
    "2": "2 1 x,y,z; 1 2 0,y,0",
    "m": "2 1 x,y,z; 1 m x,0,z",
    "2/m": "4 1 x,y,z; 2 m x,0,z; 2 2 0,y,0; 1 2/m 0,0,0",
    "222": "4 1 x,y,z; 2 2.. x,0,0; 2 .2. 0,y,0; 2 ..2 0,0,z; 1 222 0,0,0",
    "mm2": "4 1 x,y,z; 2 .m. x,0,z; 2 m.. 0,y,z; 1 mm2 0,0,z",
    "mmm": "8 1 x,y,z; 4 ..m x,y,0; 4 .m. x,0,z; 4 m.. 0,y,z; 2 2mm x,0,0; 2 m2m 0,y,0; 2 mm2 0,0,z; 1 mmm 0,0,0",
    "4": "4 1 x,y,z; 1 4.. 0,0,z",
    "-4": "4 1 x,y,z; 2 2.. 0,0,z; 1 -4.. 0,0,0",
    "4/m": "8 1 x,y,z; 4 m.. x,y,0; 2 4.. 0,0,z; 1 4/m.. 0,0,0",
    "422": "8 1 x,y,z; 4 .2. x,0,0; 4 ..2 x,x,0; 2 4.. 0,0,z; 1 422 0,0,0",
    "4mm": "8 1 x,y,z; 4 .m. x,0,z; 4 ..m x,x,z; 1 4mm 0,0,z",
    "-42m": "8 1 x,y,z; 4 ..m x,x,z; 4 .2. x,0,0; 2 2.mm 0,0,z; 1 -42m 0,0,0",
    "-4m2": "8 1 x,y,z; 4 .m. x,0,z; 4 ..2 x,x,0; 2 2mm. 0,0,z; 1 -4m2 0,0,0",
    "4/mmm": "16 1 x,y,z; 8 m.. x,y,0; 8 .m. x,0,z; 8 ..m x,x,z; 4 m2m. x,0,0; 4 m.2m x,x,0; 2 4mm 0,0,z;"
    " 1 4/mmm 0,0,0",
    "3": "3 1 x,y,z; 1 3.. 0,0,z",
    "-3": "6 1 x,y,z; 2 3.. 0,0,z; 1 -3.. 0,0,0",
    "32": "6 1 x,y,z; 3 .2. x,0,0; 2 3.. 0,0,z; 1 32. 0,0,0",
    "312": "6 1 x,y,z; 3 ..2 x,-x,0; 2 3.. 0,0,z; 1 3.2 0,0,0",
    "3m": "6 1 x,y,z; 3 .m. x,-x,z; 1 3m. 0,0,z",
    "31m": "6 1 x,y,z; 3 ..m x,0,z; 1 3.m 0,0,z",
    "-3m": "12 1 x,y,z; 6 .m. x,-x,z; 6 .2. x,0,0; 2 3m. 0,0,z; 1 -3m. 0,0,0",
    "-31m": "12 1 x,y,z; 6 ..m x,0,z; 6 ..2 x,-x,0; 2 3.m 0,0,z; 1 -3.m 0,0,0",
    "6": "6 1 x,y,z; 1 6.. 0,0,z",
    "-6": "6 1 x,y,z; 3 m.. x,y,0; 2 3.. 0,0,z; 1 -6.. 0,0,0",
    "6/m": "12 1 x,y,z; 6 m.. x,y,0; 2 6.. 0,0,z; 1 6/m.. 0,0,0",
    "622": "12 1 x,y,z; 6 .2. x,0,0; 6 ..2 x,-x,0; 2 6.. 0,0,z; 1 622 0,0,0",
    "6mm": "12 1 x,y,z; 6 ..m x,0,z; 6 .m. x,-x,z; 1 6mm 0,0,z",
    "-6m2": "12 1 x,y,z; 6 m.. x,y,0; 6 .m. x,-x,z; 3 mm2 x,-x,0; 2 3m. 0,0,z; 1 -6m2 0,0,0",
    "-62m": "12 1 x,y,z; 6 m.. x,y,0; 6 ..m x,0,z; 3 m2m x,0,0; 2 3.m 0,0,z; 1 -62m 0,0,0",
    "6/mmm": "24 1 x,y,z; 12 m.. x,y,0; 12 ..m x,0,z; 12 .m. x,2x,z; 6 m2m x,0,0; 6 mm2 x,2x,0; 2 6mm 0,0,z;"
    " 1 6/mmm 0,0,0",
    "23": "12 1 x,y,z; 6 2.. x,0,0; 4 .3. x,x,x; 1 23. 0,0,0",
    "m-3": "24 1 x,y,z; 12 m.. 0,y,z; 8 .3. x,x,x; 6 mm2.. x,0,0; 1 m-3. 0,0,0",
    "432": "24 1 x,y,z; 12 ..2 0,y,y; 8 .3. x,x,x; 6 4.. x,0,0; 1 432 0,0,0",
    "-43m": "24 1 x,y,z; 12 ..m x,x,z; 6 2.mm x,0,0; 4 .3m x,x,x; 1 -43m 0,0,0",
    "m-3m": "48 1 x,y,z; 24 m.. 0,y,z; 24 ..m x,x,z; 12 m.m2 0,y,y; 8 .3m x,x,x; 6 4m.m x,0,0; 1 m-3m 0,0,0",
}


@pytest.mark.parametrize("symbol", list(TABLE))
def test_positions_table(symbol):
    wanted = [row.split() for row in TABLE[symbol].split(";")]
    found = positions_of(point_group(symbol))
    assert sorted((str(row.multiplicity), row.site_symmetry) for row in found) == sorted(
        (multiplicity, site) for multiplicity, site, _ in wanted
    )
    for multiplicity, site, triplet in wanted:
        assert any(
            (str(row.multiplicity), row.site_symmetry) == (multiplicity, site) and triplet in row.triplets
            for row in found
        ), (site, triplet)


def test_the_table_has_all_32():
    assert set(THE_32) <= set(TABLE)


@pytest.mark.parametrize("symbol", THE_32)
def test_multiplicities_against_images_made_by_gemmi(symbol):
    """Every position, filled with numbers, has as many different images under gemmi's operations."""
    group = point_group(symbol)
    ops = [gemmi.Op(element.triplet) for element in group.operations]
    for row in positions_of(group):
        point = row.images[0] @ np.array([0.1234, 0.2713, 0.3917])
        images = {tuple(round(value, 9) + 0.0 for value in op.apply_to_xyz(point.tolist())) for op in ops}
        assert len(images) == row.multiplicity
        orbit = orbit_under(group, point)
        assert len(orbit.points) == row.multiplicity
        assert orbit.position.triplets == row.triplets
        assert {tuple(round(v, 9) + 0.0 for v in p) for p in orbit.points.tolist()} == images
