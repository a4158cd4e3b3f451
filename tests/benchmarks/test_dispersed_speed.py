"""A dispersed packet against the undispersed one on the same path differences, in one run."""

from time import perf_counter

import astropy.units as u
import numpy as np

from whitefringe import media, spectra
from whitefringe.coherence import self_coherence_si
from whitefringe.units import SPEED_OF_LIGHT


def test_a_dispersed_packet_costs_a_few_plain_ones(benchmark):
    """Three to ten points per cell instead of one transform: at most 20 plain packets, the arms' phases included."""
    light = spectra.detected(spectra.Thermal(temperature=2900 * u.K), spectra.TopHat(centre=1.5 * u.um, width=0.3 * u.um))
    air = media.Ciddor1996(temperature=12 * u.deg_C, pressure=850 * u.hPa, humidity=30 * u.percent)
    silica = media.Segment(medium=media.Glass.named("fused silica"), length=20 * u.mm)
    pair = media.ArmPair(first=[silica], second=[media.Segment(medium=air, length=100 * u.m)])
    around = np.linspace(-60e-6, 60e-6, 2001)
    centre = media.DispersedPacket(pair=pair, light=light).centre_si

    def dispersed():
        return media.DispersedPacket(pair=pair, light=light).degree_si(centre + around)

    def plain():
        return self_coherence_si(light, around / SPEED_OF_LIGHT)

    times: dict[str, list[float]] = {"plain": [], "dispersed": []}
    for _ in range(15):
        for name, call in (("plain", plain), ("dispersed", dispersed)):
            start = perf_counter()
            call()
            times[name].append(perf_counter() - start)
    ratio = np.median(times["dispersed"]) / np.median(times["plain"])
    benchmark.extra_info.update(dispersed_over_plain=round(ratio, 1))
    benchmark.pedantic(dispersed, rounds=5)
    assert ratio <= 20
