"""Spectral channels."""

import astropy.units as u
import numpy as np
import pytest

from whitefringe import coherence, spectra
from whitefringe.errors import InputError
from whitefringe.spectra import CHANNEL_PROFILES, Flat, Lines, TopHat, detected, split
from whitefringe.units import SPEED_OF_LIGHT

BAND = TopHat(centre=1.65 * u.um, width=0.3 * u.um)
LIGHT = detected(Flat(), BAND)


def test_equal_channels_touch_and_fill_the_band():
    channels = split(LIGHT, 5)
    assert len(channels) == 5
    supports = [channel.profile.support_si for channel in channels]
    assert supports[0][0] == pytest.approx(BAND.support_si[0])
    assert supports[-1][1] == pytest.approx(BAND.support_si[1])
    assert [high for _, high in supports[:-1]] == pytest.approx([low for low, _ in supports[1:]])
    assert sum(channel.light.total_rate for channel in channels) == pytest.approx(LIGHT.total_rate, rel=1e-9)


def test_numbers_of_a_channel():
    channel = split(LIGHT, 5)[2]
    width = (BAND.support_si[1] - BAND.support_si[0]) / 5
    assert channel.coherence_length.to_value(u.m) == pytest.approx(SPEED_OF_LIGHT / width)
    assert channel.coherence_length.value == coherence.coherence_length(channel.light).value
    assert channel.centre.to_value(u.m) == pytest.approx(SPEED_OF_LIGHT / channel.profile.centre_si)
    low, high = channel.profile.support_si
    assert channel.width.to_value(u.m) == pytest.approx(SPEED_OF_LIGHT / low - SPEED_OF_LIGHT / high)


def test_ambiguity_is_one_over_the_wavenumber_step():
    # references section 9: unambiguous range 1 / ds; five channels with centres from 2.4 to 2.0 um, equal in 1/lambda: 48.0 um
    step = (1 / 2.0 - 1 / 2.4) / 4
    edges = np.array([1 / 2.4 - step / 2, 1 / 2.0 + step / 2]) / u.um
    low, high = edges.to(u.Hz, equivalencies=u.spectral())
    light = detected(Flat(), TopHat(centre=(low + high) / 2, width=high - low))
    assert split(light, 5).ambiguity.to_value(u.um) == pytest.approx(48.0, rel=1e-9)


def test_resolving_power_is_met_by_every_channel():
    channels = split(LIGHT, resolving_power=50)
    powers = [channel.profile.centre_si / channel.profile.width_si for channel in channels]
    assert min(powers) >= 50
    assert max(powers) < 50 * (1 + 1 / len(channels))
    assert powers == pytest.approx([powers[0]] * len(powers))
    assert "soft" in channels.ambiguity.definition


def test_channels_equal_in_wavelength():
    widths = [channel.width.to_value(u.nm) for channel in split(LIGHT, 6, axis="wavelength")]
    assert widths == pytest.approx([50.0] * 6, rel=1e-9)


@pytest.mark.parametrize("profile", CHANNEL_PROFILES)
def test_reach_is_where_the_widest_channel_keeps_half(profile):
    channels = split(LIGHT, 8, profile=profile)
    middle = channels[4]
    half = coherence.delay_for_contrast(middle.light, 0.5).to_value(u.um)
    assert channels.reach.to_value(u.um) == pytest.approx(half, rel=2e-3)
    assert middle.profile.transmission_si(np.array([middle.profile.centre_si])) == 1.0


def test_profiles_have_their_full_width():
    for profile in CHANNEL_PROFILES[1:]:
        response = split(LIGHT, 8, profile=profile)[4].profile
        at_half = np.array([response.centre_si - response.width_si / 2, response.centre_si + response.width_si / 2])
        assert response.transmission_si(at_half) == pytest.approx([0.5, 0.5])


@pytest.mark.parametrize(
    ("settings", "message"),
    [
        ({}, "give channels .* or resolving_power"),
        ({"channels": 3, "resolving_power": 20}, "give channels .* or resolving_power"),
        ({"channels": 0}, "channels must be a whole number from 1; got 0"),
        ({"channels": 2.5}, "channels must be a whole number from 1; got 2.5"),
        ({"resolving_power": 0.5}, r"resolving_power must be above 0\.5"),
        ({"channels": 3, "profile": "odd"}, "profile must be one of top-hat, gaussian, triangular; got 'odd'"),
        ({"channels": 3, "axis": "colour"}, 'axis must be "frequency" or "wavelength"'),
    ],
)
def test_what_cannot_be_split(settings, message):
    with pytest.raises(InputError, match=message):
        split(LIGHT, **settings)


def test_lines_and_single_channels():
    with pytest.raises(InputError, match="light of lines only has no band to split"):
        split(detected(Lines([spectra.Line(wavelength=1 * u.um)])), 3)
    with pytest.raises(InputError, match="one channel has no group delay"):
        _ = split(LIGHT, 1).ambiguity
