"""The face forms of the 32 point groups: every row, names, counts, open or closed.

Source: International Tables for Crystallography A, tables 10.1.2.2 and 10.1.2.3, from memory throughout. Counts are
checked again by the number of different normals that gemmi's operations make of one.
"""

import gemmi
import numpy as np
import pytest

from mirrorlab.crystal.forms import form, forms_of
from mirrorlab.crystal.generators import THE_32
from mirrorlab.crystal.indices import parse_indices
from mirrorlab.crystal.pointgroups import point_group

OPEN = {"pedion", "pinacoid", "dome", "sphenoid"}  # with all prisms and pyramids; every other form closes

# Group: rows "name, number of faces: faces that make it". Two sets of indices where one might be special by chance.
ROWS = {
    "1": "pedion 1: 100 010 001 123 -2,1,3",
    "-1": "pinacoid 2: 100 010 001 123 -2,1,3",
    "2": "sphenoid 2: 110 011 123 1-23; pinacoid 2: 100 001 101 -102; pedion 1: 010 0-10",
    "m": "dome 2: 110 011 123 1-23; pinacoid 2: 010; pedion 1: 100 001 101 -102",
    "2/m": "rhombic prism 4: 110 011 111 123 -123; pinacoid 2: 010 100 001 101 -102",
    "222": "rhombic disphenoid 4: 111 1-11 123; rhombic prism 4: 110 101 011 210 302; pinacoid 2: 100 010 001",
    "mm2": "rhombic pyramid 4: 111 11-1 123; rhombic prism 4: 110 210; dome 2: 101 102 011 0-12; pinacoid 2: 100 010;"
    "pedion 1: 001 00-1",
    "mmm": "rhombic dipyramid 8: 111 123 3-21; rhombic prism 4: 110 101 011 210 302; pinacoid 2: 100 010 001",
    "4": "tetragonal pyramid 4: 101 111 123 21-1; tetragonal prism 4: 100 110 210; pedion 1: 001 00-1",
    "-4": "tetragonal disphenoid 4: 101 111 123 21-1; tetragonal prism 4: 100 110 210; pinacoid 2: 001",
    "4/m": "tetragonal dipyramid 8: 101 111 123; tetragonal prism 4: 100 110 210; pinacoid 2: 001",
    "422": "tetragonal trapezohedron 8: 211 123; ditetragonal prism 8: 210 310; tetragonal dipyramid 8: 101 111 112;"
    "tetragonal prism 4: 100 110; pinacoid 2: 001",
    "4mm": "ditetragonal pyramid 8: 211 12-3; ditetragonal prism 8: 210 310; tetragonal pyramid 4: 101 111 11-2;"
    "tetragonal prism 4: 100 110; pedion 1: 001 00-1",
    "-42m": "tetragonal scalenohedron 8: 211 123; ditetragonal prism 8: 210; tetragonal dipyramid 8: 101 102;"
    "tetragonal disphenoid 4: 111 1-11 112; tetragonal prism 4: 100 110; pinacoid 2: 001",
    "-4m2": "tetragonal scalenohedron 8: 211 123; ditetragonal prism 8: 210; tetragonal dipyramid 8: 111 112;"
    "tetragonal disphenoid 4: 101 10-1 102; tetragonal prism 4: 100 110; pinacoid 2: 001",
    "4/mmm": "ditetragonal dipyramid 16: 211 123; ditetragonal prism 8: 210; tetragonal dipyramid 8: 101 111 112;"
    "tetragonal prism 4: 100 110; pinacoid 2: 001",
    "3": "trigonal pyramid 3: 10-11 11-21 21-31 21-3-1; trigonal prism 3: 10-10 11-20 21-30; pedion 1: 0001 000-1",
    "-3": "rhombohedron 6: 10-11 11-21 21-31; hexagonal prism 6: 10-10 11-20 21-30; pinacoid 2: 0001",
    "32": "trigonal trapezohedron 6: 21-31 12-31; ditrigonal prism 6: 21-30 12-30; trigonal dipyramid 6: 11-21 11-22;"
    "rhombohedron 6: 10-11 01-11 10-12; trigonal prism 3: 11-20 -1-120; hexagonal prism 6: 10-10; pinacoid 2: 0001",
    "312": "trigonal trapezohedron 6: 21-31 12-31; ditrigonal prism 6: 21-30; trigonal dipyramid 6: 10-11 01-11;"
    "rhombohedron 6: 11-21 11-22; trigonal prism 3: 10-10 01-10; hexagonal prism 6: 11-20; pinacoid 2: 0001",
    "3m": "ditrigonal pyramid 6: 21-31 12-3-1; ditrigonal prism 6: 21-30; hexagonal pyramid 6: 11-21;"
    "trigonal pyramid 3: 10-11 01-11; hexagonal prism 6: 11-20; trigonal prism 3: 10-10 01-10; pedion 1: 0001 000-1",
    "31m": "ditrigonal pyramid 6: 21-31; ditrigonal prism 6: 21-30; hexagonal pyramid 6: 10-11;"
    "trigonal pyramid 3: 11-21; hexagonal prism 6: 10-10; trigonal prism 3: 11-20; pedion 1: 0001",
    "-3m": "ditrigonal scalenohedron 12: 21-31; dihexagonal prism 12: 21-30; hexagonal dipyramid 12: 11-21;"
    "rhombohedron 6: 10-11 01-12; hexagonal prism 6: 10-10 11-20; pinacoid 2: 0001",
    "-31m": "ditrigonal scalenohedron 12: 21-31; dihexagonal prism 12: 21-30; hexagonal dipyramid 12: 10-11;"
    "rhombohedron 6: 11-21; hexagonal prism 6: 10-10 11-20; pinacoid 2: 0001",
    "6": "hexagonal pyramid 6: 10-11 11-21 21-31; hexagonal prism 6: 10-10 11-20 21-30; pedion 1: 0001 000-1",
    "-6": "trigonal dipyramid 6: 10-11 11-21 21-31; trigonal prism 3: 10-10 11-20 21-30; pinacoid 2: 0001",
    "6/m": "hexagonal dipyramid 12: 10-11 11-21 21-31; hexagonal prism 6: 10-10 11-20 21-30; pinacoid 2: 0001",
    "622": "hexagonal trapezohedron 12: 21-31; dihexagonal prism 12: 21-30; hexagonal dipyramid 12: 10-11 11-21;"
    "hexagonal prism 6: 10-10 11-20; pinacoid 2: 0001",
    "6mm": "dihexagonal pyramid 12: 21-31; dihexagonal prism 12: 21-30; hexagonal pyramid 6: 10-11 11-21;"
    "hexagonal prism 6: 10-10 11-20; pedion 1: 0001",
    "-6m2": "ditrigonal dipyramid 12: 21-31; ditrigonal prism 6: 21-30; hexagonal dipyramid 12: 11-21;"
    "trigonal dipyramid 6: 10-11 01-11; hexagonal prism 6: 11-20; trigonal prism 3: 10-10 01-10; pinacoid 2: 0001",
    "-62m": "ditrigonal dipyramid 12: 21-31; ditrigonal prism 6: 21-30; hexagonal dipyramid 12: 10-11;"
    "trigonal dipyramid 6: 11-21; hexagonal prism 6: 10-10; trigonal prism 3: 11-20; pinacoid 2: 0001",
    "6/mmm": "dihexagonal dipyramid 24: 21-31; dihexagonal prism 12: 21-30; hexagonal dipyramid 12: 10-11 11-21;"
    "hexagonal prism 6: 10-10 11-20; pinacoid 2: 0001",
    "23": "pentagon-tritetrahedron 12: 123 3-21; pentagon-dodecahedron 12: 210 120 013; rhomb-dodecahedron 12: 110 101;"
    "tetragon-tritetrahedron 12: 221 2-21 331; trigon-tritetrahedron 12: 112 211 113;"
    "tetrahedron 4: 111 -1-1-1; cube 6: 100",
    "m-3": "didodecahedron 24: 123 321; trigon-trioctahedron 24: 221 331; tetragon-trioctahedron 24: 112 113;"
    "pentagon-dodecahedron 12: 210 120; rhomb-dodecahedron 12: 110; octahedron 8: 111; cube 6: 100",
    "432": "pentagon-trioctahedron 24: 123 321; trigon-trioctahedron 24: 221; tetragon-trioctahedron 24: 112;"
    "tetrahexahedron 24: 210 310; rhomb-dodecahedron 12: 110; octahedron 8: 111; cube 6: 100",
    "-43m": "hexatetrahedron 24: 123 1-23; tetrahexahedron 24: 210; tetragon-tritetrahedron 12: 221 2-21;"
    "trigon-tritetrahedron 12: 112 1-12; rhomb-dodecahedron 12: 110; tetrahedron 4: 111 1-11; cube 6: 100",
    "m-3m": "hexaoctahedron 48: 123 421; tetrahexahedron 24: 210 310; trigon-trioctahedron 24: 221 331;"
    "tetragon-trioctahedron 24: 112 311; rhomb-dodecahedron 12: 110; octahedron 8: 111; cube 6: 100",
}


def rows():
    for symbol, text in ROWS.items():
        for row in text.split(";"):
            head, faces = row.split(":")
            name, count = head.strip().rsplit(" ", 1)
            for face in faces.split():
                yield symbol, face, name, int(count)


@pytest.mark.parametrize("symbol", list(ROWS))
def test_rows_of_the_group(symbol):
    group = point_group(symbol)
    for _, face, name, count in (row for row in rows() if row[0] == symbol):
        made = form(group, face)
        assert (made.name, made.face_count) == (name, count), face
        assert made.closed == (name not in OPEN and not name.endswith(("prism", " pyramid"))), face


@pytest.mark.parametrize("symbol", list(ROWS))
def test_no_other_names_appear(symbol):
    assert {made.name for made in forms_of(point_group(symbol))} == {
        row[2] for row in rows() if row[0] == symbol
    }


def test_all_32_and_all_47_names_are_covered():
    assert set(THE_32) <= set(ROWS)
    names = {"dihedron" if row[2] in ("dome", "sphenoid") else row[2] for row in rows()}
    assert len(names) == 47


@pytest.mark.parametrize("symbol", list(ROWS))
def test_faces_are_those_gemmi_makes(symbol):
    """gemmi's Op.apply_to_hkl turns indices as a row, like ours."""
    group = point_group(symbol)
    ops = [gemmi.Op(element.triplet) for element in group.operations]
    for _, text, _, count in (row for row in rows() if row[0] == symbol):
        face = [int(value) for value in parse_indices(text, group.hexagonal)]
        images = {tuple(op.apply_to_hkl(face)) for op in ops}
        assert len(images) == count
        assert images == {tuple(row) for row in form(group, text).faces.tolist()}


GOLDEN = (1 + 5**0.5) / 2


@pytest.mark.parametrize(
    ("symbol", "normal", "name", "count"),
    # International Tables A, table 10.1.4.3 (from memory): forms of the icosahedral groups.
    [
        ("m-3-5", (0, 1, GOLDEN), "regular pentagon-dodecahedron", 12),
        ("m-3-5", (1, 1, 1), "regular icosahedron", 20),
        ("m-3-5", (1, 0, 0), "rhomb-triacontahedron", 30),
        ("m-3-5", (0, 1, 1), "deltoid-hexecontahedron", 60),
        ("m-3-5", (0, 1, 2), "pentakisdodecahedron", 60),
        ("m-3-5", (0, 4, 1), "trisicosahedron", 60),
        ("m-3-5", (1, 2, 5), "hecatonicosahedron", 120),
        ("235", (1, 2, 5), "pentagon-hexecontahedron", 60),
        ("235", (0, 1, GOLDEN), "regular pentagon-dodecahedron", 12),
        ("235", (1, 1, 1), "regular icosahedron", 20),
    ],
)
def test_icosahedral_forms(symbol, normal, name, count):
    made = form(point_group(symbol), np.array(normal))
    assert (made.name, made.face_count, made.closed) == (name, count, True)
