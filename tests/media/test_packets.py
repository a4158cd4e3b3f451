"""Dispersed packets against direct quadrature with formulas written out here; moments, symmetries, traps."""

import astropy.units as u
import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from whitefringe import coherence, media, spectra
from whitefringe.errors import InputError, ResolutionWarning, UnitsError

C = mp.mpf(299792458)
AIR = media.Ciddor1996(temperature=15 * u.deg_C, pressure=101325 * u.Pa)
SILICA = media.Glass.named("fused silica")


def number(measured, unit=u.one):
    return measured.to_value(unit)


def segment(medium, length):
    return media.Segment(medium=medium, length=length)


UNEVEN = media.ArmPair(
    first=[segment(AIR, 20 * u.m), segment(media.Vacuum(), 103 * u.m)],
    second=[segment(AIR, 120 * u.m), segment(SILICA, 20 * u.mm), segment(media.Vacuum(), 3 * u.m)],
)
"""100 m of air and 20 mm of fused silica in the second arm, where the first has 100 m of vacuum."""


# ---------------------------------------------------------------- independent formulas: mpmath, nothing of the package


def air_index(s):
    """Dry standard air at wavenumber s [1/um]: Ciddor 1996, eq. 1."""
    return 1 + mp.mpf("0.05792105") / (mp.mpf("238.0185") - s**2) + mp.mpf("0.00167917") / (mp.mpf("57.362") - s**2)


def silica_index(s):
    """Malitson's formula at the wavelength in dry air of 20 deg_C, times that air's index."""

    def z(kelvin):
        t = kelvin - mp.mpf("273.15")
        first = mp.mpf("1.58123e-6") - mp.mpf("2.9331e-8") * t + mp.mpf("1.1043e-10") * t**2
        return 1 - 101325 / kelvin * first + (101325 / kelvin) ** 2 * mp.mpf("1.83e-11")

    standard, lab = mp.mpf("288.15"), mp.mpf("293.15")
    air = 1 + (air_index(s) - 1) * z(standard) * standard / (z(lab) * lab)
    square = 1 / (air * s) ** 2
    terms = (("0.6961663", "0.0684043"), ("0.4079426", "0.1162414"), ("0.8974794", "9.896161"))
    return air * mp.sqrt(1 + mp.fsum(mp.mpf(b) * square / (square - mp.mpf(c) ** 2) for b, c in terms))


def uneven_path(frequency):
    """Optical path difference [m] of `UNEVEN`, its geometry included."""
    s = frequency / C / 10**6
    return 100 * (air_index(s) - 1) + mp.mpf("0.02") * silica_index(s)


def turns(frequency, x):
    return mp.expj(-2 * mp.pi * frequency / C * (mp.mpf(x) + uneven_path(frequency)))


PEAK = -mp.diff(lambda nu: nu * uneven_path(nu), mp.mpf("250e12"), h=mp.mpf("1e9"))
"""Where the middle of the band is balanced [m]."""


def nodes(density, low, high, pieces=48):
    """Frequencies, and density times weight, of 24 Gauss-Legendre points in each of equal pieces."""
    points = mp.calculus.quadrature.GaussLegendre(mp.mp).calc_nodes(4, 90)
    half = (mp.mpf(high) - mp.mpf(low)) / (2 * pieces)
    places = [(mp.mpf(low) + half * (2 * piece + 1 + x), half * w) for piece in range(pieces) for x, w in points]
    return [(nu, density(nu) * weight) for nu, weight in places]


def integrated(density, low, high, places):
    """Integral of density exp(-2 pi i nu (x + path) / c) over that of the density, at each place [m]."""
    weighted = [(nu, weight, uneven_path(nu)) for nu, weight in nodes(density, low, high)]
    total = mp.fsum(weight for _, weight, _ in weighted)
    terms = (mp.fsum(w * mp.expj(-2 * mp.pi * nu / C * (mp.mpf(x) + path)) for nu, w, path in weighted) for x in places)
    return np.array([complex(term / total) for term in terms])


def test_the_quadrature_has_converged():
    with mp.workdps(25):
        few, many = (mp.fsum(w * turns(nu, PEAK) for nu, w in nodes(lambda nu: mp.mpf(1), LOW, HIGH, pieces)) for pieces in (24, 48))
        assert abs(few - many) < 1e-12 * (HIGH - LOW)


def linear_light(low, high, first, last, lines=()):
    """Light whose density is exactly linear in frequency [Hz] from `first` to `last`."""
    share = (np.arange(2048) + 0.5) / 2048
    return spectra.Spectrum(start=low * u.Hz, step=(high - low) / 2048 * u.Hz, density=first + (last - first) * share, lines=lines)


LOW, HIGH = 230e12, 270e12
OFFSETS = np.array([-150e-6, -40e-6, -7.3e-6, 0.0, 2.1e-6, 23e-6, 90e-6, 400e-6])


def about_the_peak(pair, light):
    return media.DispersedPacket(pair=pair, light=light).peak_si + OFFSETS


@pytest.mark.parametrize(("first", "last"), [(1.0, 1.0), (0.2, 1.7)], ids=["flat", "sloped"])
def test_complex_value_against_quadrature(first, last):
    """100 m of air and 20 mm of glass at once; the phase is right, not the contrast alone."""
    light = linear_light(LOW, HIGH, first, last)
    places = about_the_peak(UNEVEN, light)
    with mp.workdps(25):
        exact = integrated(lambda nu: first + (last - first) * (nu - LOW) / (HIGH - LOW), LOW, HIGH, places)
    found = media.DispersedPacket(pair=UNEVEN, light=light).degree(places * u.m)
    assert np.max(np.abs(exact)) > 0.1
    assert np.max(np.abs(found - exact)) < 1e-9
    # the sign conventions would be seen
    assert np.max(np.abs(np.conj(found) - exact)) > 0.1


def test_many_equally_spaced_places():
    """They go through a fast transform; the same numbers come out."""
    packet = media.DispersedPacket(pair=UNEVEN, light=linear_light(LOW, HIGH, 0.2, 1.7))
    places = packet.peak_si + np.linspace(-100e-6, 200e-6, 301)
    some = [0, 17, 150, 299]
    many = packet.degree_si(places)
    assert many[some] == pytest.approx(packet.degree_si(places[some]), abs=1e-9)
    assert packet.degree_si(places[:300].reshape(2, 150))[1, 3] == pytest.approx(many[153], abs=1e-9)
    assert packet.degree(places[5] * u.m).shape == ()


def test_continuum_with_a_line():
    line = spectra.Line(wavelength=250.5 * u.THz, fwhm=0.05 * u.THz, profile="gaussian", strength=15e12)
    light = linear_light(LOW, HIGH, 1.0, 1.0, lines=(line,))
    places = about_the_peak(UNEVEN, light)
    with mp.workdps(25):
        continuum = integrated(lambda nu: mp.mpf(1), LOW, HIGH, places)
        centre, sigma = mp.mpf("250.5e12"), mp.mpf("0.05e12") / mp.sqrt(8 * mp.log(2))
        profile = nodes(lambda nu: mp.exp(-(((nu - centre) / sigma) ** 2) / 2), centre - 8 * sigma, centre + 8 * sigma, pieces=6)
        area = mp.sqrt(2 * mp.pi) * sigma
        alone = [complex(mp.fsum(w * turns(nu, x) for nu, w in profile) / area) for x in places]
    exact = (40 * continuum + 15 * np.array(alone)) / 55
    found = media.DispersedPacket(pair=UNEVEN, light=light).degree_si(places)
    # dispersion within the line is left out: 9e-5 rad over its width
    assert np.max(np.abs(found - exact)) < 1e-4


def test_lines_only():
    """Sharp lines: the sum of their turns, whatever the lengths."""
    frequencies, strengths = (231e12, 250e12, 266e12), (1.0, 2.0, 0.5)
    lines = tuple(spectra.Line(wavelength=f * u.Hz, strength=s) for f, s in zip(frequencies, strengths, strict=True))
    packet = media.DispersedPacket(pair=UNEVEN, light=spectra.Spectrum(lines=lines))
    places = np.array([-0.0581, -0.056, 0.0, 0.3])
    with mp.workdps(25):
        exact = [
            complex(mp.fsum(s * turns(mp.mpf(f), x) for f, s in zip(frequencies, strengths, strict=True)) / mp.mpf(3.5)) for x in places
        ]
    assert packet.degree_si(places) == pytest.approx(np.array(exact), abs=1e-8)
    # the squared strengths weigh the group path differences
    with mp.workdps(25):
        group = [mp.diff(lambda nu: nu * uneven_path(nu), f) for f in frequencies]
        centre = -mp.fsum(s**2 * g for s, g in zip(strengths, group, strict=True)) / mp.mpf(5.25)
    assert packet.centre_si == pytest.approx(float(centre), abs=1e-11)


# ---------------------------------------------------------------- equal arms


@pytest.mark.parametrize("pair", [media.ArmPair(first=[], second=[]), media.ArmPair(first=UNEVEN.second, second=UNEVEN.second)])
@pytest.mark.parametrize("lines", [(), (spectra.Line(wavelength=245 * u.THz, fwhm=1 * u.THz, strength=5e12),)], ids=["bare", "line"])
def test_equal_arms_show_the_self_coherence(pair, lines):
    light = linear_light(LOW, HIGH, 0.2, 1.7, lines)
    packet = media.DispersedPacket(pair=pair, light=light)
    places = np.linspace(-80, 70, 151) * u.um
    assert np.max(np.abs(packet.degree(places) - coherence.self_coherence(light, places))) < 1e-10
    assert packet.degree_si(np.array(0.0)) == pytest.approx(1.0, abs=1e-12)
    assert number(packet.peak_contrast) == pytest.approx(1.0, abs=1e-9)
    assert abs(number(packet.position, u.nm)) < 1
    assert number(packet.broadening) == pytest.approx(1.0, abs=1e-4)
    assert number(packet.asymmetry) == pytest.approx(0.0, abs=1e-4)


def test_ten_kilometres_of_vacuum():
    """Geometry alone: the packet of equal arms, 10 km away, to what doubles hold of 10 km in phase."""
    light = linear_light(LOW, HIGH, 0.2, 1.7)
    packet = media.DispersedPacket(pair=media.ArmPair(first=[], second=[segment(media.Vacuum(), 10 * u.km)]), light=light)
    assert packet.peak_si == pytest.approx(-1e4, abs=2e-11)
    assert packet.centre_si == pytest.approx(-1e4, abs=1e-12)
    places = np.linspace(-30e-6, 40e-6, 30)
    exact = coherence.self_coherence(light, places * u.m)
    assert np.max(np.abs(packet.degree_si(places - 1e4) - exact)) < 2e-5
    assert number(packet.broadening) == pytest.approx(1.0, abs=1e-4)


def test_an_added_path_in_the_second_arm_moves_the_packet_to_negative():
    light = linear_light(LOW, HIGH, 1.0, 1.0)
    for length, side in ((segment(AIR, 1 * u.m), -1), (segment(SILICA, 1 * u.mm), -1)):
        late = media.DispersedPacket(pair=media.ArmPair(first=[], second=[length]), light=light)
        early = media.DispersedPacket(pair=media.ArmPair(first=[length], second=[]), light=light)
        assert np.sign(late.peak_si) == side
        assert early.peak_si == pytest.approx(-late.peak_si, abs=1e-10)
        group = media.ArmPair(first=[], second=[length]).group_opd(250 * u.THz)
        assert late.peak_si == pytest.approx(-group.to_value(u.m), abs=2e-7)


# ---------------------------------------------------------------- moments, properties


@pytest.mark.parametrize("samples", [1024, 4096])
def test_centre_of_the_squared_contrast(samples):
    """Its closed form is the moment of |gamma|^2, for a skew band that goes to zero at its ends."""
    share = (np.arange(samples) + 0.5) / samples
    band = share * (1 - share) ** 2
    light = spectra.Spectrum(start=LOW * u.Hz, step=(HIGH - LOW) / samples * u.Hz, density=band)
    packet = media.DispersedPacket(pair=UNEVEN, light=light)
    x = packet.peak_si + np.linspace(-2.5e-3, 2.5e-3, 40001)
    weight = np.abs(packet.degree_si(x)) ** 2
    middle = x - packet.centre_si
    assert np.sum(middle * weight) / np.sum(weight) == pytest.approx(0.0, abs=5e-10)
    # it is not the place of the greatest contrast
    assert abs(packet.centre_si - packet.peak_si) > 1e-6


LENGTHS = st.tuples(st.floats(0, 200), st.floats(0, 30), st.floats(0, 5))


@given(lengths=LENGTHS, slope=st.floats(0.1, 3), x=st.floats(-2e-4, 2e-4))
@settings(max_examples=25, deadline=None)
def test_swapped_arms_mirror_the_packet(lengths, slope, x):
    """gamma(-x) of the swapped arms is the conjugate; no contrast is above one."""
    air, glass, vacuum = lengths
    arm = [segment(AIR, air * u.m), segment(SILICA, glass * u.mm), segment(media.Vacuum(), vacuum * u.m)]
    light = linear_light(LOW, HIGH, 1.0, slope)
    here = media.DispersedPacket(pair=media.ArmPair(first=[], second=arm), light=light)
    there = media.DispersedPacket(pair=media.ArmPair(first=arm, second=[]), light=light)
    places = here.centre_si + x + np.array([0.0, 1e-5])
    found = here.degree_si(places)
    assert there.degree_si(-places) == pytest.approx(np.conj(found), abs=1e-8)
    assert there.centre_si == pytest.approx(-here.centre_si, abs=1e-12)
    assert np.all(np.abs(found) <= 1 + 1e-12)


@given(shift=st.floats(-1e-3, 1e-3))
@settings(max_examples=15, deadline=None)
def test_a_stage_step_is_a_vacuum_segment(shift):
    """Path added by the stage and by a vacuum segment are the same."""
    light = linear_light(LOW, HIGH, 0.2, 1.7)
    arm = {"second" if shift > 0 else "first": [segment(media.Vacuum(), abs(shift) * u.m)]}
    longer = media.ArmPair(first=[*UNEVEN.first, *arm.get("first", [])], second=[*UNEVEN.second, *arm.get("second", [])])
    here, there = (media.DispersedPacket(pair=pair, light=light) for pair in (UNEVEN, longer))
    places = here.centre_si + np.array([-2e-5, 0.0, 3e-5])
    assert there.degree_si(places - shift) == pytest.approx(here.degree_si(places), abs=1e-7)


# ---------------------------------------------------------------- traps


def test_wide_wings():
    """A Lorentzian filter passes a little far beyond what the media are stated for: finite, and no error for 1e-3 of the light."""
    light = spectra.detected(spectra.Flat(), spectra.Lorentzian(centre=1.2 * u.um, fwhm=2 * u.nm))
    pair = media.ArmPair(first=[], second=[segment(AIR, 10 * u.m), segment(SILICA, 1 * u.mm)])
    packet = media.DispersedPacket(pair=pair, light=light)
    assert np.isfinite(number(packet.peak_contrast))
    assert number(packet.peak_contrast) == pytest.approx(1.0, abs=2e-2)


def test_a_resonance_in_the_wings_does_not_poison_the_packet():
    """One part in 1e4 of the light where the glass has no real index at all."""
    base = np.linspace(25e12, 275e12, 2501)
    density = np.where((base > 230e12) & (base < 270e12), 1.0, 2e-5)
    light = spectra.Spectrum.from_samples(base * u.Hz, density)
    narrow = spectra.Spectrum.from_samples(base[2050:2450] * u.Hz, density[2050:2450])
    pair = media.ArmPair(first=[], second=[segment(SILICA, 1 * u.mm)])
    wide, alone = (media.DispersedPacket(pair=pair, light=item) for item in (light, narrow))
    places = alone.peak_si + np.array([-1e-5, 0.0, 1e-5])
    assert wide.degree_si(places) == pytest.approx(alone.degree_si(places), abs=1e-3)


def test_far_beyond_the_grid_warns():
    """Where the grid cannot follow the phase, the number must not come silently."""
    packet = media.DispersedPacket(pair=media.ArmPair(first=[], second=[]), light=linear_light(LOW, HIGH, 1, 1))
    with pytest.warns(ResolutionWarning, match="are .* times what this spectral grid resolves"):
        packet.degree(1 * u.m)


def test_flags_and_ranges():
    light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um), samples=512)
    with pytest.raises(InputError, match=r"Ciddor 1996: wavelength .* lies outside"):
        media.DispersedPacket(pair=UNEVEN, light=light)
    bold = media.ArmPair(first=[segment(media.Ciddor1996(extrapolate=True), 1 * u.m)], second=[])
    (flag,) = media.DispersedPacket(pair=bold, light=light).flags
    assert flag.startswith("Ciddor 1996 extrapolated: wavelength")


def test_units():
    packet = media.DispersedPacket(pair=UNEVEN, light=linear_light(LOW, HIGH, 1, 1))
    with pytest.raises(UnitsError, match="opd must carry a unit"):
        packet.degree(1e-6)
    with pytest.raises(UnitsError, match="opd must be convertible to m"):
        packet.degree(1 * u.s)


def test_rows():
    packet = media.DispersedPacket(pair=UNEVEN, light=linear_light(LOW, HIGH, 0.2, 1.7))
    named = dict(packet.rows)
    assert list(named) == ["peak contrast", "position", "centre", "width", "broadening", "asymmetry"]
    assert named["broadening"].value > 1
    assert named["peak contrast"].value < 1
    assert number(named["width"], u.m) == pytest.approx(number(named["broadening"]) * packet.undispersed_width_si, rel=1e-6)


def test_continuum_and_lines_have_no_centre():
    light = linear_light(LOW, HIGH, 1, 1, lines=(spectra.Line(wavelength=245 * u.THz, fwhm=1 * u.THz, strength=5e12),))
    packet = media.DispersedPacket(pair=UNEVEN, light=light)
    message = "the centre of a packet is not defined for light of continuum and lines together; ask for the greatest contrast"
    with pytest.raises(InputError, match=message):
        _ = packet.centre
    assert dict(packet.rows)["centre"] == message


def test_one_sharp_line_has_no_packet():
    light = spectra.Spectrum(lines=(spectra.Line(wavelength=1.2 * u.um),))
    named = dict(media.DispersedPacket(pair=UNEVEN, light=light).rows)
    assert isinstance(named["width"], str)
    assert named["centre"].value.unit == u.um


def test_numbers_carry_the_uncertainties_of_arms_and_air():
    """Each number moved by one standard deviation of the length, and of the air's temperature: what it changes by, in quadrature."""
    air = media.Ciddor1996(temperature=285 * u.K, pressure=850 * u.hPa, humidity=30 * u.percent)
    light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=0.8 * u.um, width=0.1 * u.um))
    known = media.AirUncertainty(temperature=2 * u.K)

    def packet(length=40.0, temperature=285.0, sigma=0.05):
        here = media.Segment(medium=air.under(temperature=temperature * u.K), length=length * u.m, length_uncertainty=sigma * u.m)
        return media.DispersedPacket(pair=media.ArmPair(first=[], second=[here]), light=light, air=known)

    middle, longer, warmer = packet(), packet(length=40.05), packet(temperature=287.0)
    for name in ("peak_contrast", "position", "centre", "width", "broadening", "asymmetry"):
        here = getattr(middle, name)
        moves = [(getattr(item, name).value - here.value).to_value(here.unit) for item in (longer, warmer)]
        assert here.uncertainty.to_value(here.unit) == pytest.approx(np.hypot(*moves), rel=0.05), name


def test_nothing_uncertain_leaves_no_uncertainty():
    light = spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.25 * u.um, width=0.1 * u.um), samples=512)
    assert all(value.uncertainty is None for _, value in media.DispersedPacket(pair=UNEVEN, light=light).rows)
