"""A filter in a cone is fast enough to follow a slider: averaged and detected in 10 ms, from the f-number to the spectrum."""

from time import perf_counter

import astropy.units as u
import numpy as np
import pytest

from whitefringe import spectra

LAMP = spectra.Thermal(temperature=2900 * u.K)

X = np.linspace(1500, 1800, 301)

BANDS = {
    "top-hat": spectra.TopHat(centre=1.65 * u.um, width=0.1 * u.um),
    "super-gaussian": spectra.SuperGaussian(centre=1.65 * u.um, fwhm=50 * u.nm, order=6),
    "lorentzian": spectra.Lorentzian(centre=1.65 * u.um, fwhm=5 * u.nm),
    "multi-cavity": spectra.MultiCavity(centre=1.65 * u.um, fwhm=10 * u.nm, cavities=4),
    "table": spectra.Tabulated(wavelength=X * u.nm, transmission_values=np.sin(np.pi * (X - 1500) / 300) ** 2),
}


@pytest.mark.parametrize("name", BANDS)
def test_a_cone_follows_a_slider(name):
    times = []
    for f_number in np.linspace(3, 12, 15):
        start = perf_counter()
        light = spectra.detected(LAMP, BANDS[name].in_cone(f_number=f_number, effective_index=2.0))
        times.append(perf_counter() - start)
    assert light.density.size == 8192
    assert np.median(times) < 0.010
