"""The shared state, without any widget."""

import astropy.units as u
import pytest

from whitefringe import coherence, spectra
from whitefringe.errors import InputError, UnitsError
from whitefringe.scans import Outcome
from whitefringe.widgets import Bench


def test_results_are_those_of_the_core(bench):
    light = bench.setup.light
    assert bench.results.wavelength == spectra.mean_wavelength(light)
    assert bench.results.width.value == coherence.packet_width(light).value
    bench.update(delay=5 * u.um)
    assert bench.results.gamma == coherence.self_coherence(light, 5 * u.um)
    assert bench.results.reduction.verdict is Outcome.INSIDE


def test_listeners_hear_every_change_until_they_are_ignored(bench):
    heard = []

    def listener():
        heard.append(bench.setup.delay.value)

    bench.listen(listener)
    bench.update(delay=1 * u.um)
    bench.update(delay=2 * u.um)
    bench.ignore(listener)
    bench.update(delay=3 * u.um)
    assert heard == [1.0, 2.0]


def test_a_change_that_cannot_be_leaves_everything_as_it_was(bench):
    setup, results = bench.setup, bench.results
    apart = spectra.TopHat(centre=0.5 * u.um, width=10 * u.nm)
    with pytest.raises(InputError, match="no common band"):
        bench.update(filters=(*setup.filters, apart))
    with pytest.raises(UnitsError, match="delay must carry a unit"):
        bench.update(delay=3.0)
    with pytest.raises(InputError, match="a setup has no field 'colour'; its fields are source, filters"):
        bench.update(colour="red")
    assert bench.setup is setup
    assert bench.results is results


def test_the_definition_reaches_prediction_and_measurement(bench):
    bench.update(definition="half")
    assert "half" in bench.results.length.definition
    assert "half" in bench.results.reduction.coherence_length.definition


def test_light_of_lines_has_no_bandwidth_but_is_shown(setup):
    lamp = spectra.Lines([spectra.Line(wavelength=w * u.nm, fwhm=0.1 * u.nm) for w in (577, 579)])
    bench = Bench(setup)
    bench.update(source=lamp, filters=(spectra.TopHat(centre=578 * u.nm, width=20 * u.nm),))
    assert bench.results.length is None
    assert "no scan" in bench.summary()


def test_code_makes_the_same_numbers(bench, monkeypatch, repository):
    monkeypatch.chdir(repository)
    bench.update(filters=(spectra.Gaussian(centre=1.62 * u.um, fwhm=180 * u.nm),), delay=4.25 * u.um)
    names: dict[str, object] = {}
    exec(bench.as_code(), names)
    assert complex(names["gamma"]) == bench.results.gamma
    assert names["length"].value == bench.results.length.value
    assert names["result"].verdict == bench.results.reduction.verdict


def test_code_for_a_lamp_of_lines_runs(setup):
    lamp = spectra.Lines([spectra.Line(wavelength=546.1 * u.nm, fwhm=0.1 * u.nm), spectra.Line(wavelength=577 * u.nm, strength=0.5)])
    bench = Bench(setup)
    bench.update(source=lamp, filters=(), definition="power")
    with pytest.raises(Exception, match="monochromatic"):
        exec(bench.as_code(), {})
    assert "spectra.Line(wavelength=" in bench.as_code()
