"""Visibility over a band, closure phase, and the field that a packet covers."""

import itertools
import re

import astropy.units as u
import mpmath as mp
import numpy as np
import pytest

from whitefringe.coherence import COHERENCE_DEFINITIONS, coherence_length, self_coherence
from whitefringe.errors import InputError, UnitsError
from whitefringe.sky import observables
from whitefringe.sky.composite import Binary, Group, WithBackground
from whitefringe.sky.observables import band_visibility, closure_phase, closure_phase_si, field_of_view
from whitefringe.sky.visibility import GaussianDisc, Point, Ring, UniformDisc
from whitefringe.spectra import Flat, Line, Lines, Spectrum, TabulatedSource, Thermal, TopHat, detected
from whitefringe.spectra import Gaussian as GaussianFilter

C = 299_792_458
BAND = TopHat(centre=1.65 * u.um, width=0.3 * u.um)
LIGHT = detected(Flat(), BAND)
ROUGH = Spectrum(start=100 * u.THz, step=10 * u.THz, density=[1, 0, 5, 2, 0, 0.1])
RAMP = detected(TabulatedSource(wavelength=[1.4, 1.9] * u.um, values=[1.0, 4.0], quantity="photons", per="wavelength"), BAND)


def test_a_wide_disc_over_a_band_against_mpmath():
    low, high = mp.mpf(C) / mp.mpf("1.8e-6"), mp.mpf(C) / mp.mpf("1.5e-6")
    size = 8 * mp.pi / 180 / 3600 / 1000

    def visibility(nu):
        x = mp.pi * size * 150 * nu / C
        return 2 * mp.besselj(1, x) / x

    expected = mp.quad(visibility, mp.linspace(low, high, 5)) / (high - low)
    found = band_visibility(UniformDisc(diameter=8 * u.mas), 90 * u.m, 120 * u.m, LIGHT)
    assert found == pytest.approx(float(expected), abs=1e-12)


def test_a_double_star_under_a_sloped_spectrum_against_mpmath():
    pair = Binary(flux_ratio=0.6, separation=80 * u.mas, position_angle=40 * u.deg)
    east, north = (float(part) for part in pair.offset_si)
    step, start = 10e12, 100e12

    # the six cells of a rough spectrum, each linear with the slope that the spectrum states
    def rate(nu):
        place = (nu - start) / step
        cell = min(int(place), 5)
        return float(ROUGH.density[cell]) + float(ROUGH.slopes[cell]) * (place - cell - mp.mpf("0.5"))

    def turned(nu):
        return rate(nu) * (1 + mp.mpf("0.6") * mp.expjpi(-2 * nu / C * (70 * east - 50 * north))) / mp.mpf("1.6")

    edges = [start + k * step for k in range(7)]
    expected = sum(mp.quad(turned, [low + 1, high - 1]) for low, high in itertools.pairwise(edges)) / ROUGH.total_rate
    assert band_visibility(pair, 70 * u.m, -50 * u.m, ROUGH) == pytest.approx(complex(expected), abs=1e-8)


@pytest.mark.parametrize("light", [LIGHT, ROUGH, RAMP, detected(Thermal(temperature=2900 * u.K), BAND)])
@pytest.mark.parametrize("mas", [-1.0, 10.0, 300.0])
@pytest.mark.filterwarnings("ignore::whitefringe.errors.ResolutionWarning")
def test_a_point_off_the_centre_is_the_degree_of_coherence_of_its_path(light, mas):
    point = Group(objects=[Point()], east=[mas] * u.mas)
    path = (mas * u.mas).to_value(u.rad) * 100 * u.m
    assert band_visibility(point, 100 * u.m, 0 * u.m, light) == pytest.approx(self_coherence(light, path), abs=1e-10)


def test_a_narrow_band_is_one_wavelength():
    narrow = detected(Flat(), TopHat(centre=1.65 * u.um, width=0.001 * u.nm))
    disc = UniformDisc(diameter=2.5 * u.mas)
    assert band_visibility(disc, 200 * u.m, 0 * u.m, narrow) == pytest.approx(disc.visibility(200 * u.m, 0 * u.m, 1.65 * u.um), abs=1e-9)


def test_lines_count_with_their_strengths():
    strengths = {1.53: 1.0, 1.7: 3.0}
    lines = [Line(wavelength=at * u.um, strength=strength) for at, strength in strengths.items()]
    pair = Binary(first=UniformDisc(diameter=1 * u.mas), flux_ratio=0.5, separation=6 * u.mas, position_angle=70 * u.deg)
    by_hand = sum(strength * pair.visibility(60 * u.m, 5 * u.m, at * u.um) for at, strength in strengths.items())
    only = detected(Lines(lines))
    assert band_visibility(pair, 60 * u.m, 5 * u.m, only) == pytest.approx(by_hand / 4, abs=1e-13)
    both = Spectrum(start=LIGHT.start, step=LIGHT.step, density=LIGHT.density, lines=lines)
    share = LIGHT.continuum_rate * band_visibility(pair, 60 * u.m, 5 * u.m, LIGHT)
    assert band_visibility(pair, 60 * u.m, 5 * u.m, both) == pytest.approx((share + by_hand) / both.total_rate, abs=1e-13)


@pytest.mark.parametrize("profile", ["gaussian", "lorentzian"])
def test_a_line_of_some_width_is_right_to_its_stated_error(profile):
    light = Spectrum(lines=(Line(wavelength=1.6 * u.um, fwhm=50 * u.GHz, profile=profile),))
    point = Group(objects=[Point()], east=[30] * u.mas)
    path = (30 * u.mas).to_value(u.rad) * 100 * u.m
    error = abs(band_visibility(point, 100 * u.m, 0 * u.m, light) - self_coherence(light, path))
    assert 0 < error < np.pi * 50e9 * path.to_value(u.m) / C


def test_photons_or_power_as_the_spectrum_is_weighted():
    disc = UniformDisc(diameter=6 * u.mas)
    photon, power = (band_visibility(disc, 60 * u.m, 0 * u.m, light).real for light in (LIGHT, LIGHT.power_weighted()))
    # power weighs the high frequencies more, where the disc is more resolved
    assert power < photon - 1e-4


def test_shapes_and_blocks(monkeypatch):
    ring = WithBackground(object=Ring(diameter=3 * u.mas, width=1 * u.mas), fraction=0.1)
    east, north = np.linspace(-100, 100, 7) * u.m, np.linspace(0, 50, 3)[:, None] * u.m
    whole = band_visibility(ring, east, north, LIGHT)
    assert whole.shape == (3, 7)
    assert whole[1, 2] == pytest.approx(band_visibility(ring, east[2], north[1, 0], LIGHT), abs=1e-14)
    assert band_visibility(ring, [] * u.m, [] * u.m, LIGHT).shape == (0,)
    monkeypatch.setattr(observables, "_BLOCK", 100)
    assert band_visibility(ring, east, north, LIGHT) == pytest.approx(whole, abs=1e-14)


def test_what_a_band_refuses():
    point = Group(objects=[Point()], east=[1] * u.deg)
    with pytest.raises(InputError, match=r"obj is too wide for this band and baseline: its phase turns so often .* 4096 frequencies"):
        band_visibility(point, 100 * u.m, 0 * u.m, ROUGH)
    with pytest.raises(InputError, match="obj must be an object such as"):
        band_visibility("star", 100 * u.m, 0 * u.m, LIGHT)
    with pytest.raises(InputError, match=r"light must be a Spectrum, as spectra\.detected gives it; got Flat"):
        band_visibility(Point(), 100 * u.m, 0 * u.m, Flat())
    with pytest.raises(UnitsError, match="u must carry a unit"):
        band_visibility(Point(), 100, 0 * u.m, LIGHT)
    with pytest.raises(InputError, match=r"u, v must have shapes that broadcast; got \(2,\), \(3,\)"):
        band_visibility(Point(), [1, 2] * u.m, [1, 2, 3] * u.m, LIGHT)


TRIANGLE = (80 * u.m, 0 * u.m, -30 * u.m, 70 * u.m)


def test_closure_phase_of_a_faint_companion():
    # r (sin a12 + sin a23 + sin a31) with a = -2 pi B.rho/lambda to first order in the flux ratio
    ratio, wavelength = 1e-6, 1.65e-6
    pair = Binary(flux_ratio=ratio, separation=5 * u.mas, position_angle=30 * u.deg)
    east, north = pair.offset_si
    phases = [-2 * np.pi * (x * east + y * north) / wavelength for x, y in ((80, 0), (-30, 70), (-50, -70))]
    found = closure_phase(pair, *TRIANGLE, wavelength * u.m)
    assert found.unit == u.deg
    assert found.to_value(u.rad) == pytest.approx(ratio * np.sum(np.sin(phases)), abs=10 * ratio**2)


def test_closure_phase_is_the_sum_of_three_phases_and_changes_sign_with_the_triangle():
    pair = Binary(first=GaussianDisc(fwhm=1 * u.mas), flux_ratio=0.5, separation=3 * u.mas, position_angle=30 * u.deg)
    ends = [(80, 0), (-30, 70), (-50, -70)]
    total = sum(np.angle(pair.visibility(x * u.m, y * u.m, 1.65 * u.um), deg=True) for x, y in ends)
    found = closure_phase(pair, *TRIANGLE, 1.65 * u.um).value
    assert np.exp(1j * np.deg2rad(found - total)) == pytest.approx(1, abs=1e-12)
    back = closure_phase(pair, *(-side for side in TRIANGLE), 1.65 * u.um).value
    assert back == pytest.approx(-found, abs=1e-12)


@pytest.mark.parametrize("sign", [1, -1])
def test_a_negative_product_is_at_plus_180_degrees(sign):
    # the long side lies in the first negative lobe, the two short ones in the central one
    disc, side = UniformDisc(diameter=2.5 * u.mas), sign * 100 * u.m
    assert closure_phase(disc, side, 0 * u.m, side, 0 * u.m, 1.65 * u.um) == 180 * u.deg
    assert closure_phase(disc, 0.5 * side, 0 * u.m, 0.5 * side, 0 * u.m, 1.65 * u.um) == 0 * u.deg


class AlmostOpposite:
    """Any class with `visibility_si` is an object: this one is -1 with a last digit of imaginary part on long baselines."""

    def visibility_si(self, east, north):
        return np.where(np.hypot(east, north) > 1.5, -1 - 1e-300j, 1 + 0j)


def test_half_a_turn_is_never_written_with_a_minus():
    assert closure_phase_si(AlmostOpposite(), 1.0, 0.0, 1.0, 0.0) == np.pi


def test_closure_phase_over_wavelengths_and_refusals():
    pair = Binary(flux_ratio=0.5, separation=3 * u.mas, position_angle=30 * u.deg)
    many = closure_phase(pair, *TRIANGLE, [1.5, 1.65, 1.8] * u.um)
    assert many.shape == (3,)
    assert many[1] == closure_phase(pair, *TRIANGLE, 1.65 * u.um)
    with pytest.raises(UnitsError, match="v2 must carry a unit"):
        closure_phase(pair, 80 * u.m, 0 * u.m, -30 * u.m, 70, 1.65 * u.um)
    with pytest.raises(InputError, match="obj must be an object such as"):
        closure_phase(3, *TRIANGLE, 1.65 * u.um)
    with pytest.raises(InputError, match=r"u1 and v1, u2 and v2 must have shapes that broadcast; got \(2,\), \(3,\)"):
        closure_phase(pair, [1, 2] * u.m, 0 * u.m, [1, 2, 3] * u.m, 0 * u.m, 1.65 * u.um)
    with pytest.raises(InputError, match=r"u1, v1, wavelength must have shapes that broadcast"):
        closure_phase(pair, [1, 2] * u.m, [1, 2, 3] * u.m, 1 * u.m, 0 * u.m, 1.65 * u.um)


def test_field_of_view_is_coherence_length_over_baseline():
    field = field_of_view(LIGHT, 100 * u.m)
    assert field.unit == u.mas
    # 9 um over 100 m
    assert field.to_value(u.rad) == pytest.approx(9e-8, rel=1e-6)
    assert field.definition.startswith("full angle along the baseline: coherence length over baseline; bandwidth: ")
    assert field.citation == coherence_length(LIGHT).citation


@pytest.mark.parametrize("item", COHERENCE_DEFINITIONS, ids=lambda item: item.name)
def test_field_of_view_by_every_definition(item):
    light = detected(Flat(), BAND)
    length = coherence_length(light, item.name)
    field = field_of_view(light, 50 * u.m, item.name)
    assert field.to_value(u.rad) == pytest.approx(length.to_value(u.m) / 50, rel=1e-12)
    counted = "angle from the centre" if item.name in ("e-fold", "first-null") else "full angle"
    assert field.definition == f"{counted} along the baseline: coherence length over baseline; {length.definition}"


def test_at_the_edge_of_the_field_the_contrast_is_what_the_definition_says():
    light = detected(Flat(), GaussianFilter(centre=1.65 * u.um, fwhm=0.1 * u.um))
    for definition, part, contrast in (("half", 0.5, 0.5), ("e-fold", 1.0, np.exp(-1))):
        edge = part * field_of_view(light, 120 * u.m, definition).value
        point = Group(objects=[Point()], north=[edge.to_value(u.mas)] * u.mas)
        assert abs(band_visibility(point, 0 * u.m, 120 * u.m, light)) == pytest.approx(contrast, abs=1e-6)


def test_what_a_field_of_view_refuses():
    with pytest.raises(UnitsError, match="baseline must carry a unit"):
        field_of_view(LIGHT, 100)
    with pytest.raises(InputError, match=re.escape("baseline must be above zero; got 0.0 m")):
        field_of_view(LIGHT, 0 * u.m)
    with pytest.raises(InputError, match="definition must be one of bandwidth"):
        field_of_view(LIGHT, 100 * u.m, "longest")
    with pytest.raises(InputError, match=r"light must be a Spectrum, as spectra\.detected gives it; got 5"):
        field_of_view(5, 100 * u.m)


def test_against_added_path_a_packet_is_gamma_times_the_conjugate_of_v():
    """A star 0.7 mas to the east on a baseline to the east: station 2 is nearer, the first arm's light late, the packet at +u alpha."""
    light = detected(Flat(), TopHat(centre=1.65 * u.um, width=0.05 * u.um))
    alpha = 0.7 * u.mas
    path = (100 * u.m * alpha.to_value(u.rad)).to(u.um)
    star = Group(objects=[Point()], east=[0.7] * u.mas)
    v = band_visibility(star, 100 * u.m, 0 * u.m, light)
    assert self_coherence(light, -path) == pytest.approx(np.conj(v), abs=1e-9)
