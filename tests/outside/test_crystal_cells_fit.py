"""Measured angles against closed arrangements: χ² against SciPy, synthetic sets with known answers, slow twins."""

import math
from fractions import Fraction
from itertools import combinations, permutations, product

import numpy as np
import pytest
from scipy.stats import chi2

from mirrorlab.angles import AngleError
from mirrorlab.crystal.fit import fit_angles, probability_of
from mirrorlab.crystal.fit_candidates import closing_sides, closing_triples, fold, zone_triples
from mirrorlab.crystal.fit_result import TOLD_APART, FitError
from mirrorlab.crystal.pointgroups import point_group
from mirrorlab.mirrors import Arrangement

RNG = np.random.default_rng(24)
HALF = Fraction(1, 2)


@pytest.mark.parametrize("freedom", [1, 2, 3, 6, 28])
def test_probability_is_scipys_chi_squared(freedom):
    for value in (0.0, 0.3, 1.7, 12.0, 80.0, 900.0):
        assert probability_of(value, freedom) == pytest.approx(chi2.sf(value, freedom), rel=1e-10, abs=1e-300)


def test_pulls_chi_squared_and_probability_by_hand():
    found = fit_angles(["59.8(3)", "90.1(2)", "44.6(4)"])
    best = found.best
    assert best.angles == (Fraction(1, 3), HALF, Fraction(1, 4))
    assert best.pulls == pytest.approx((-0.2 / 0.3, 0.1 / 0.2, -0.4 / 0.4))
    assert best.chi_squared == pytest.approx(4 / 9 + 1 / 4 + 1)
    assert best.probability == pytest.approx(chi2.sf(4 / 9 + 1 / 4 + 1, 3))
    assert (best.symbol, best.finding.families) == ("m-3m", ("B3",))
    assert found.tied == ()
    assert "probability 0.64" in found.sentence


def noisy(degrees: list[float], sigma: float, supplements: float = 0.0) -> list[str]:
    texts = []
    for value in degrees:
        measured = value + sigma * RNG.normal()
        if RNG.random() < supplements:
            measured = 180 - measured
        texts.append(f"{abs(measured):.4f}±{sigma}")
    return texts


@pytest.mark.parametrize("family", ["A2", "I2(7)", "A3", "B3", "H3", "A1xA2", "A1xI2(9)", "A4", "B4", "D4", "F4", "H4",
                                    "A5", "D6", "E6", "E7", "E8", "A8", "B8", "A1xI2(7)xA2", "B3xH3"])  # fmt: skip
def test_synthetic_sets_come_back_at_the_top(family):
    """Walls of a known group, in a mixed order, with noise, some measured as the supplement."""
    walls = Arrangement.from_family(family)
    size = walls.size
    order = RNG.permutation(size)
    of_pair = {pair: float(180 * f.fraction) for pair, f in zip(walls.pairs, walls.angles, strict=True)}
    pairs = [tuple(sorted((order[i], order[j]))) for i, j in walls.pairs]
    found = fit_angles(noisy([of_pair[pair] for pair in pairs], 0.3, supplements=0.3))
    assert sorted(found.best.finding.families) == sorted(walls.finding().families)
    assert found.best.fits
    assert found.complete
    assert [float(180 * fold(f)) for f in found.best.angles] == pytest.approx(
        [of_pair[pair] for pair in pairs]
    )


def test_probabilities_of_true_sets_are_spread_evenly():
    # Under the true hypothesis the probability is uniform on (0, 1): a check of χ² and its degrees of freedom.
    values = []
    for _ in range(300):
        found = fit_angles(noisy([45.0, 60.0, 90.0], 0.4))
        values.append(found.best.probability)
    assert 0.4 < np.mean(values) < 0.6
    assert 0.02 < np.mean(np.array(values) < 0.1) < 0.2


def test_wedge_and_supplement():
    straight = fit_angles(["60.1(5)", "59.7(5)", "60.2(5)"]).best
    assert straight.symbol == "-43m"
    assert sorted(straight.angles) == [
        Fraction(1, 3),
        Fraction(1, 3),
        Fraction(2, 3),
    ]  # 60/60/60 closes on no side
    assert sum(straight.supplements) == 1
    typed = fit_angles(["60.1(5)", "59.7(5)", "120.2(5)"]).best
    assert typed.angles == (Fraction(1, 3), Fraction(1, 3), Fraction(2, 3))
    assert not any(typed.supplements)
    for theta in ("44.8(3)", "135.2(3)"):
        assert fit_angles([theta]).best.finding.families == ("B2",)


# Angles between the mirrors of one zone: 45° steps in 4mm, 30° in 6mm, 60° in 3m (International Tables A, from memory).
@pytest.mark.parametrize(
    ("degrees", "symbol"),
    [
        ((45, 90, 45), "4mm"),
        ((45, 135, 90), "4mm"),
        ((30, 90, 60), "6mm"),
        ((30, 120, 30), "6mm"),
        ((36, 108, 36), "5m"),
    ],
)
def test_mirrors_through_one_line(degrees, symbol):
    found = fit_angles(noisy(list(degrees), 0.3))
    assert found.best.one_line
    assert (found.best.symbol, found.best.finding.rank) == (symbol, 2)
    assert [float(180 * f.fraction) for f in found.best.arrangement.angles] == pytest.approx(degrees)
    assert not fit_angles([f"{d}±0.3" for d in degrees], subdivided=False).best.one_line


def test_zone_or_corner_is_left_open_where_both_have_the_angles():
    # 60/60/60 as typed are the three mirrors of 3m; with one supplement, 60/60/120, they are a corner of -43m.
    found = fit_angles(["60.1(5)", "59.7(5)", "60.2(5)"])
    assert [(one.symbol, one.one_line) for one in (found.best, *found.tied)] == [
        ("-43m", False),
        ("3m", True),
    ]


def test_every_zone_has_the_angles_it_says():
    for folded in zone_triples()[::3]:
        found = fit_angles([f"{float(180 * f):.7f}±0.01" for f in folded])
        one = next(c for c in found.candidates if c.one_line)
        assert one.chi_squared < 1e-6
        assert tuple(angle.fraction for angle in one.arrangement.angles) == one.angles
        assert one.finding.rank == 2


def test_the_misfit_is_named():
    found = fit_angles(["59.8(3)", "90.1(2)", "47.6(4)"])
    assert not found.best.fits
    assert found.best.misfit == "bc"
    assert found.best.probability_without == pytest.approx(chi2.sf(4 / 9 + 1 / 4, 2))
    assert "misfit is bc" in found.sentence


def test_candidates_that_cannot_be_told_apart_are_said():
    found = fit_angles(["41(4)", "60(1)", "90(1)"])
    assert {found.best.symbol, *(one.symbol for one in found.tied)} >= {"m-3m", "m-3-5"}
    assert "cannot be told from" in found.sentence
    other = next(one for one in found.tied if one.symbol != found.best.symbol)
    # 45° and 36° are 9° apart: with σ = 4° one expects Δχ² = (9/4)² for the other; with 4° times the factor, the limit.
    assert found.sharper(other) == pytest.approx((9 / 4) / math.sqrt(TOLD_APART))
    at_limit = fit_angles([f"45±{4 * found.sharper(other):.9f}", "60(1)", "90(1)"])
    assert [one.chi_squared for one in at_limit.candidates[:2]] == pytest.approx([0, TOLD_APART])
    decided = fit_angles(["44.9(4)", "60(1)", "90(1)"])
    assert decided.tied == ()


def test_small_angles_leave_many_wedges_open():
    found = fit_angles(["2.0(3)"])
    assert len(found.tied) == 11
    assert found.best.angles == (Fraction(1, 90),)


def pairs_of(normals: np.ndarray) -> list[float]:
    return [math.degrees(math.acos(min(1.0, abs(float(a @ b))))) for a, b in combinations(normals, 2)]


def test_closing_triples_are_the_triples_of_mirrors_of_the_groups():
    """All sets of three mirrors, not through one line, of the groups of rank 3 that do not split, by their angles."""
    options = {
        round(float(180 * f), 6): f for f in {fold(Fraction(k, m)) for m in range(2, 6) for k in range(1, m)}
    }
    seen = set()
    for symbol in ("-43m", "m-3m", "m-3-5"):
        for chosen in combinations(point_group(symbol).mirror_normals, 3):
            if abs(np.linalg.det(np.array(chosen))) > 1e-9:
                seen.add(tuple(sorted(options[round(angle, 6)] for angle in pairs_of(np.array(chosen)))))
    split = {tuple(sorted((HALF, HALF, f))) for f in options.values()}
    assert seen | split == set(closing_triples())


# Schwarz triangles (H. A. Schwarz 1873; H. S. M. Coxeter, Regular Polytopes, from memory): some of the triples that
# close on a sphere, as p q r with angles 180°/p, and the order of the group.
@pytest.mark.parametrize(
    ("p", "q", "r", "order"),
    [
        ("2", "3", "3", 24), ("3/2", "3", "3", 24), ("2", "3", "4", 48), ("3/2", "4", "4", 48), ("2", "3", "5", 120),
        ("5/2", "3", "3", 120), ("2", "5/2", "5", 120), ("5/3", "3", "5", 120), ("5/2", "5/2", "5/2", 120),
        ("3/2", "3", "5", 120), ("3/2", "5", "5", 120), ("2", "5/2", "3", 120), ("5/4", "5", "5", 120),
    ],
)  # fmt: skip
def test_schwarz_triangles_fit_themselves(p, q, r, order):
    angles = [1 / Fraction(text) for text in (p, q, r)]
    for turned in permutations(angles):
        found = fit_angles([f"{float(180 * f):.6f}±0.2" for f in turned])
        assert found.best.chi_squared < 1e-6
        assert found.best.angles == turned
        assert found.best.finding.order == order


def test_every_way_of_writing_a_set_closes():
    for triple in closing_triples():
        for sides in closing_sides(triple):
            finding = Arrangement.from_angles(sides).finding()
            assert finding.kind.startswith("closed")
            assert finding.rank == 3


def test_four_mirrors_against_trying_everything():
    """Walls of finite groups of rank 4: angles 180°/m, m from 2 to 5 here, and a positive definite Gram matrix."""
    fractions = [Fraction(1, m) for m in (2, 3, 4, 5)]
    table = np.array(list(product(range(4), repeat=6)))
    degrees = np.array([float(180 * f) for f in fractions])[table]
    gram = np.zeros((len(table), 4, 4)) + np.eye(4)
    for k, (i, j) in enumerate(combinations(range(4), 2)):
        gram[:, i, j] = gram[:, j, i] = -np.cos(np.radians(degrees[:, k]))
    good = np.linalg.eigvalsh(gram)[:, 0] > 1e-9
    for _ in range(12):
        measured = RNG.uniform(30, 92, 6)
        sigma = RNG.uniform(0.5, 8, 6)
        cost = (((np.minimum(measured, 180 - measured) - degrees) / sigma) ** 2).sum(axis=1)
        slow = np.sort(cost[good])[:5]
        found = fit_angles([f"{m:.9f}±{s:.9f}" for m, s in zip(measured, sigma, strict=True)], most=40)
        assert found.complete
        ours = [one.chi_squared for one in found.candidates if all(f.denominator < 6 for f in one.angles)][:5]
        assert ours == pytest.approx(slow, rel=1e-6)


def test_three_mirrors_against_trying_everything():
    every = {order for one in closing_triples() for order in permutations(one)}
    for _ in range(8):
        measured = RNG.uniform(20, 160, 3)
        found = fit_angles([f"{m:.6f}±2" for m in measured], most=200)
        folded = np.minimum(measured, 180 - measured)
        slow = min(sum(((folded[k] - float(180 * f)) / 2) ** 2 for k, f in enumerate(one)) for one in every)
        inside = [one for one in found.candidates if tuple(fold(f) for f in one.angles) in every]
        assert inside[0].chi_squared == pytest.approx(slow, rel=1e-4)
        assert found.best.chi_squared <= inside[0].chi_squared


def test_walls_only():
    found = fit_angles(["72.1(3)", "60.0(3)", "60.1(3)"], subdivided=False)
    assert all(fold(f).numerator == 1 for one in found.candidates for f in one.angles)
    assert not found.best.fits
    assert fit_angles(["72.1(3)", "60.0(3)", "60.1(3)"]).best.fits


def test_angles_without_an_uncertainty():
    rounded = fit_angles(["59.8", "90.1(2)", "45"])
    # Half a unit of the last digit, evenly spread: σ = 0.05/√3 (GUM 4.3.7).
    assert rounded.measured[0].sigma == pytest.approx(0.05 / math.sqrt(3))
    assert [one.source for one in rounded.measured] == ["rounded", "measured", "exact"]
    assert rounded.degrees_of_freedom == 2
    assert len(rounded.notes) == 2
    assert all(fold(one.angles[2]) == Fraction(1, 4) for one in rounded.candidates)
    given = fit_angles(["59.8", "90.1(2)", "45"], sigma=0.3)
    assert [one.sigma for one in given.measured] == pytest.approx([0.3, 0.2, 0.3])
    assert given.notes == ()


def test_too_many_ties_are_said():
    found = fit_angles(["60(20)"] * 28)
    assert not found.complete
    assert any("cut short" in note for note in found.notes)
    assert found.candidates


@pytest.mark.parametrize(
    ("angles", "settings", "said"),
    [
        ([], {}, "0 angles"),
        (["60(1)", "60(1)"], {}, "2 angles fit no number of mirrors"),
        (["60(1)"] * 29, {}, "29 angles"),
        (["60(1)"] * 36, {}, "36 angles"),
        (["60(1)", "6o", "90(1)"], {}, "angle 2 of 3"),
        (["200(1)"], {}, "200"),
        (["60(0)"], {}, "uncertainty of 0"),
        (["60", "60", "90"], {}, "no angle has an uncertainty"),
        (["59(1)", "61", "62"], {}, "no closed arrangement has exactly ac = 61, bc = 62"),
        (["60(1)"], {"sigma": 0.0}, "uncertainty 0"),
        (["60(1)"], {"sigma": float("nan")}, "uncertainty nan"),
        (["60(1)"], {"most": 0}, "0 candidates"),
    ],
)
def test_measurements_that_are_refused_say_why(angles, settings, said):
    with pytest.raises((FitError, AngleError)) as caught:
        fit_angles(angles, **settings)
    assert said in str(caught.value)
