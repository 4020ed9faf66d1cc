"""Motion against exact values, and wall drag against a flow solution of its own."""

from functools import cache

import numpy as np
import pytest

from model import channel, motion

VACUUM = 8.8541878128e-12  # CODATA 2018
HEIGHTS = np.array([10.0677, 3.7622, 2.3524, 1.5431, 1.1276])


def blake(points, sources):
    """Flow by point forces above a plane at rest, 8πη times the tensor: Blake 1971.

    Shapes ``(n, 3)`` and ``(m, 3)`` give ``(n, m, 3, 3)``; the plane is z = 0.
    """
    unit, up = np.eye(3), np.array([0.0, 0.0, 1.0])

    def outer(vector):
        return vector[..., :, None] * vector[..., None, :]

    direct = points[:, None] - sources
    image = points[:, None] - sources * [1.0, 1.0, -1.0]
    near, far = (np.linalg.norm(line, axis=-1)[..., None, None] for line in (direct, image))
    height = sources[:, 2, None, None]
    above, lift = image[..., 2][..., None, None], up[:, None] * image[..., None, :]
    doublet = unit / far**3 - 3.0 * outer(image) / far**5
    stokeslet = (unit * above + image[..., :, None] * up - lift) / far**3
    stokeslet -= 3.0 * outer(image) * above / far**5
    mirrored = 2.0 * height * (height * doublet - stokeslet) * [1.0, 1.0, -1.0]
    return unit / near + outer(direct) / near**3 - unit / far - outer(image) / far**3 + mirrored


@cache
def exact_wall_factors(height, rings=36, around=56):
    """Drag factors of a unit sphere: moved along the wall, and held still in shear.

    Method of fundamental solutions: rings of point forces inside the sphere, crowded towards the
    wall and as deep below the surface as they are apart; their strengths follow cos φ or sin φ
    and fit the speed on the sphere in the least-squares sense.
    """
    crowding = min(1.0, np.sqrt(2.0 * (height - 1.0)))

    def angles(count):
        return crowding * np.sinh(np.arcsinh(np.pi / crowding) * (np.arange(count) + 0.5) / count)

    inside, surface = angles(rings), angles(int(1.6 * rings))
    depth = np.minimum(0.35, 3.0 * np.gradient(inside))
    turn = 2.0 * np.pi * (np.arange(around) + 0.5) / around
    cos, sin, none = np.cos(turn), np.sin(turn), np.zeros(around)
    forces = np.array(
        [[cos * cos, cos * sin, none], [-sin * sin, sin * cos, none], [none, none, cos]]
    )
    level, reach, rest = height - np.cos(surface), np.sin(surface), np.zeros(surface.size)
    points = np.concatenate(
        [np.stack([reach, rest, level], axis=1), np.stack([rest, reach, level], axis=1)]
    )
    matrix = np.empty((3 * surface.size, 3 * rings))
    for ring, (angle, deep) in enumerate(zip(inside, depth, strict=True)):
        radius, centre = (1.0 - deep) * np.sin(angle), height - (1.0 - deep) * np.cos(angle)
        sources = np.stack([radius * cos, radius * sin, np.full(around, centre)], axis=1)
        speed = np.einsum("nmik,bkm->nbi", blake(points, sources), forces) / around
        along, aside = np.split(speed, 2)
        matrix[:, 3 * ring : 3 * ring + 3] = np.concatenate(
            [along[:, :, 0], aside[:, :, 0], along[:, :, 2]]
        )
    wanted = np.zeros((3 * surface.size, 2))
    wanted[: 2 * surface.size, 0] = 1.0
    wanted[: 2 * surface.size, 1] = np.tile(level / height, 2)
    strength = np.linalg.lstsq(matrix, wanted, rcond=1e-13)[0]
    total = 0.5 * (strength[0::3] - strength[1::3]).sum(axis=0)
    return tuple(total * 8.0 / 6.0)


# h/a, moved along the wall, held in shear: tables of Goldman, Cox and Brenner 1967, from memory.
TABLE = [
    (10.0677, 1.0591, 1.0587),
    (3.7622, 1.1738, 1.1671),
    (2.3524, 1.3079, 1.2780),
    (1.5431, 1.5675, 1.4391),
    (1.1276, 2.1515, 1.6160),
    (1.0453, 2.6475, 1.6682),
]


@pytest.mark.parametrize(("height", "moved", "held"), TABLE)
def test_flow_solution_gives_the_published_wall_factors(height, moved, held):
    # The published last digits are off by one here and there.
    assert exact_wall_factors(height) == pytest.approx((moved, held), rel=2.5e-4)


@pytest.mark.parametrize(
    "height", [1.005, 1.02, 1.0453, 1.1276, 1.3, 1.5431, 2.3524, 3.7622, 10.0677]
)
def test_wall_factors_against_the_flow_solution(height):
    moved, held = exact_wall_factors(height)
    assert motion.drag_parallel(height) == pytest.approx(moved, rel=1e-4)
    assert motion.drag_held(height) == pytest.approx(held, rel=1e-4)


def test_parallel_drag_far_from_the_wall_is_faxen_s():
    # Fifth order as in Happel and Brenner; printed values; it fails near the wall.
    def faxen(q):
        return 1.0 / (1.0 - 9 / 16 * q + q**3 / 8 - 45 / 256 * q**4 - q**5 / 16)

    printed = [1.059061, 1.173883, 1.309111, 1.583914, 2.245562]
    np.testing.assert_allclose(faxen(1.0 / HEIGHTS), printed, rtol=1e-6)
    excess = faxen(1.0 / HEIGHTS) / motion.drag_parallel(HEIGHTS) - 1.0
    np.testing.assert_allclose(excess, [0.0, 6e-5, 1e-3, 1.05e-2, 4.4e-2], atol=5e-4)
    far = np.array([5.0, 10.0, 20.0, 50.0])
    np.testing.assert_allclose(motion.drag_parallel(far), faxen(1.0 / far), rtol=3e-5)


def test_near_wall_form_of_parallel_drag():
    # −(8/15)·ln ε + 0.95429 at the least gaps (the constant from memory).
    gap = np.array([1e-5, 1e-7])
    expected = -8 / 15 * np.log(gap) + 0.95429
    np.testing.assert_allclose(motion.drag_parallel(1.0 + gap), expected, rtol=1e-5)


def test_held_sphere_at_contact():
    # 1.7005 in Goldman, Cox and Brenner 1967, 1.7009 in O'Neill 1968, both from memory.
    assert motion.drag_held(1.0) == pytest.approx(1.7005, rel=3e-4)


def test_perpendicular_drag_is_brenner_s_series():
    # Brenner 1961, evaluated apart from this program.
    heights = [*HEIGHTS, 1.005004]
    printed = [1.1252459, 1.4128734, 1.8374806, 3.0359942, 9.2533946, 201.873]
    np.testing.assert_allclose(motion.drag_perpendicular(heights), printed, rtol=1e-7)
    # far away 1/(1 − 9q/8 + q³/2 − 57q⁴/100), from memory
    far = np.array([20.0, 100.0, 1e4])
    expected = 1.0 / (1.0 - 9 / 8 / far + 1 / (2 * far**3) - 0.57 / far**4)
    np.testing.assert_allclose(motion.drag_perpendicular(far), expected, rtol=1e-6)


def test_perpendicular_drag_close_to_the_wall_in_many_digits():
    # The same series with as many terms as it takes, from 60-digit arithmetic.
    heights, exact = [1.01, 1.001, 1.0001], [101.896172325, 1002.35332688, 10002.8134086]
    np.testing.assert_allclose(motion.drag_perpendicular(heights), exact, rtol=1e-8)


def test_drag_and_sedimentation():
    # Stokes: exact arithmetic.
    assert motion.stokes_drag(5e-6, 0.89e-3, 100e-6) == pytest.approx(8.38805e-12, rel=1e-6)
    speed = motion.sedimentation_speed(5e-6, np.array([50.0, 60.0, 80.0]), 0.89e-3)
    np.testing.assert_allclose(speed * 1e6, [3.0608, 3.6729, 4.8972], rtol=2e-5)


def test_dielectrophoretic_force():
    # Jones 1995; equal to the integral of Maxwell's stress over the sphere.
    found = motion.dielectrophoretic_force(78.4085 * VACUUM, 5e-6, 0.5, 1e13)
    assert found == pytest.approx(2.7262882e-12, rel=1e-7)
    # grad(Erms²) with 2π is grad(Epeak²) with π
    peak = np.pi * 78.4085 * VACUUM * (5e-6) ** 3 * 0.5 * 2e13
    assert found == pytest.approx(peak, rel=1e-12)


def test_thermal_energy_and_diffusion():
    # k is exact in the SI of 2019.
    np.testing.assert_allclose(
        motion.thermal_energy(np.array([298.15, 298.0])), [4.116405e-21, 4.114334e-21], rtol=2e-7
    )
    # Stokes and Einstein
    found = motion.diffusion_coefficient(0.5e-6, 0.89e-3, 298.15)
    assert found == pytest.approx(4.90746e-13, rel=1e-5)


ASPECTS = np.array([1.0, 1.5, 2.0, 3.0, 5.0, 10.0])


def test_rectangular_channel():
    # Series as in Bruus 2008, equal to a finite-element solve at 1, 2 and 5.
    resistance = [channel.hydraulic_resistance(1.0, width, 1.0, 1.0) for width in ASPECTS]
    printed = [28.454154, 13.622073, 8.745782, 5.063607, 2.746152, 1.280717]
    np.testing.assert_allclose(resistance, printed, rtol=1e-6)
    peak = [channel.peak_ratio(1.0, width) for width in ASPECTS]
    printed = [2.096256, 2.059073, 1.991796, 1.863646, 1.714970, 1.600896]
    np.testing.assert_allclose(peak, printed, rtol=1e-6)


def test_shorthand_of_the_channel_resistance():
    # 12ηL/(h³w(1 − 0.63h/w)): Bruus 2008, from memory; 14 % high for a square.
    width = np.array([1.0, 2.0, 3.0, 5.0])
    exact = [channel.hydraulic_resistance(1.0, one, 1.0, 1.0) for one in width]
    error = 12.0 / (width * (1.0 - 0.63 / width)) / exact - 1.0
    np.testing.assert_allclose(error, [0.1398, 0.00153, -0.00006, -0.00006], atol=2e-5)
