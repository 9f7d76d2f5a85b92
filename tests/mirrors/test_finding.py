"""What a finding says, as plain values and as a sentence."""

from __future__ import annotations

import json
import subprocess
import sys

import numpy as np
import pytest

from mirrorlab.mirrors import Arrangement

KEYS = {
    "kind",
    "rank",
    "families",
    "order",
    "mirror_count",
    "chambers_between",
    "crystallographic",
    "flags",
    "point_group",
    "tube",
    "suggestions",
    "evidence",
}

SAMPLES = {
    "closed": ["90", "60", "45"],
    "closed-subdivided": ["90", "60", "72"],
    "open": ["90", "60", "31"],
    "tube": ["60", "60", "60"],
    "unbuildable": ["60", "60", "45"],
}


@pytest.mark.parametrize("kind", SAMPLES)
def test_plain_values_are_json(kind):
    plain = Arrangement.from_angles(SAMPLES[kind]).finding().to_dict()
    assert plain["kind"] == kind
    assert set(plain) >= KEYS
    again = json.loads(json.dumps(plain, allow_nan=False))
    assert again == plain


def test_families_are_texts_and_symbols_are_two():
    plain = Arrangement.from_family("A1xI2(5)").finding().to_dict()
    assert plain["families"] == ["A1", "I2(5)"]
    assert plain["point_group"] == {"hermann_mauguin": "-10m2", "schoenflies": "D5h"}
    assert (plain["rank"], plain["order"], plain["mirror_count"]) == (3, 20, 6)
    assert plain["crystallographic"] is False
    assert plain["tube"] is None


def test_higher_ranks_and_normals_are_json_too():
    for arrangement in (
        Arrangement.from_family("E8"),
        Arrangement.from_family("A1xA1xA1xA1xI2(7)"),
        Arrangement.from_normals([[1, 0, 0], [0, 1, 0], [1, 1, 0], [0, 0, 1]]),
        Arrangement.from_angles([]),
    ):
        json.dumps(arrangement.finding().to_dict(), allow_nan=False)


def test_numbers_of_the_group():
    group = Arrangement.from_family("H3").finding().to_dict()["group"]
    assert group["degrees"] == [2, 6, 10]
    assert group["exponents"] == [1, 5, 9]
    assert group["coxeter_numbers"] == [10]
    assert group["contains_inversion"] is True
    assert group["rotation_order"] == 60
    assert group["rotation_point_group"] == {"hermann_mauguin": "235", "schoenflies": "I"}
    assert group["coxeter_matrix"] == [[1, 5, 2], [5, 1, 3], [2, 3, 1]]
    assert group["graph"] == [{"mirrors": ["a", "b"], "order": 5}, {"mirrors": ["b", "c"], "order": 3}]


def test_evidence_can_be_checked_by_hand():
    arrangement = Arrangement.from_angles(["90", "60", "45"])
    evidence = arrangement.finding().evidence
    assert evidence.determinant == pytest.approx(np.linalg.det(evidence.gram))
    assert evidence.determinant == pytest.approx(1 - 0.25 - 0.5)
    assert evidence.four_cos == (("ab", 0, 2), ("ac", 1, 3), ("bc", 2, 4))
    assert evidence.bounds == ("a finite group of rank 3 that does not split has at most 15 mirrors; here 9",)
    assert evidence.broken == ()
    assert evidence.witness is None


def test_evidence_of_parallel_mirrors_has_no_product_order():
    assert Arrangement.from_angles(["0"]).finding().evidence.four_cos == (("ab", 4, None),)


def test_infinite_findings_have_no_group():
    for kind in ("open", "tube", "unbuildable"):
        finding = Arrangement.from_angles(SAMPLES[kind]).finding()
        assert (finding.group, finding.families, finding.order, finding.mirror_count) == (
            None,
            (),
            None,
            None,
        )
        assert finding.chambers_between is None
        assert finding.point_group is None
        assert finding.rotation_group is None
        assert finding.wall_words == ()
    assert finding.crystallographic is None


SENTENCES = {
    "90 60 45": "Closes as m-3m (B3): 48 images, 9 mirrors; a lattice can carry it.",
    "90 60 36": "Closes as m-3-5 (H3): 120 images, 15 mirrors; no lattice can carry it, because of bc.",
    "90 60 72": "Finite but cut up: m-3-5 (H3), 120 images, 15 mirrors, 7 chambers between the typed mirrors; "
    "no lattice can carry it, because of bc.",
    "90 60 31": "Never closes: b and c make mirrors 1° apart.",
    "0": "Parallel mirrors: the images tile the strip once; moved onto one another the same planes make m (A1).",
    "60 60 90 60 90 90": "A cell open on one side: the images tile the space once; moved through one point the same "
    "planes make -6m2 (A2 × A1).",
    "45 90 90 60 90 45": "A cell: the images tile the space once; moved through one point the same planes "
    "make m-3m (B3).",
    "60 60 45": "Cannot be built: no planes have these angles.",
    "60": "Closes as 3m (A2): 6 images, 3 mirrors; a lattice can carry it.",
    "": "Closes as m (A1): 2 images, 1 mirror; a lattice can carry it.",
}


@pytest.mark.parametrize("angles", SENTENCES)
def test_sentences(angles):
    assert Arrangement.from_angles(angles.split()).finding().sentence.startswith(SENTENCES[angles])


def test_every_pair_has_its_product_order():
    finding = Arrangement.from_angles(["90", "108", "2pi/7"]).finding()
    assert [order for _, _, order in finding.evidence.four_cos] == [2, 5, 7]


def test_a_finding_needs_neither_scipy_nor_a_window():
    code = (
        "import sys, mirrorlab as ml\n"
        "f = ml.Arrangement.from_angles(['90', '61', '45']).finding(); f.suggestions; f.to_dict()\n"
        "o = ml.Arrangement.from_angles(['90', '60', '45']).orbit(place='centre'); o.words()\n"
        "heavy = {'scipy', 'numba', 'gemmi', 'ezdxf', 'trimesh', 'PySide6', 'pyqtgraph', 'OpenGL', 'sympy'}\n"
        "print(sorted(heavy & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"
