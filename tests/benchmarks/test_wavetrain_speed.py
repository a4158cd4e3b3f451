"""Ten million samples of a wave train against one real FFT pair of that length; a hundred million read in blocks."""

import subprocess
import sys
from time import perf_counter

import astropy.units as u
import numpy as np
import pytest
from scipy.fft import irfft, rfft

from whitefringe import spectra
from whitefringe.coherence import WaveTrains

SAMPLES = 10_000_000

LINUX = pytest.mark.skipif(sys.platform != "linux", reason="the greatest resident memory is read from Linux's /proc")

SOURCES = {
    "damped": (WaveTrains(rate=1 / u.ps, damping_time=20 * u.ps), 1 * u.ps),
    "gaussian": (WaveTrains(rate=1 / u.ps, damping_time=20 * u.ps, envelope="gaussian"), 1 * u.ps),
    "box": (WaveTrains(rate=1 / u.ps, damping_time=20 * u.ps, envelope="box"), 1 * u.ps),
    "spectrum": (WaveTrains(spectrum=spectra.detected(spectra.Flat(), spectra.TopHat(centre=1.65 * u.um, width=0.3 * u.um))), 15 * u.fs),
}


def seconds(call):
    start = perf_counter()
    call()
    return perf_counter() - start


@pytest.mark.parametrize("name", SOURCES)
def test_a_wave_train_costs_at_most_three_real_fft_pairs(benchmark, name):
    source, step = SOURCES[name]
    signal = np.random.default_rng(1).standard_normal(SAMPLES)
    generator = np.random.default_rng(2)

    pairs, trains = [], []

    def simulate():
        trains.append(seconds(lambda: source.simulate(duration=SAMPLES * step, sample_interval=step, rng=generator)))

    # scipy.fft.rfft and irfft, one thread; in turn with ours, because the machine may be busy
    benchmark.pedantic(simulate, setup=lambda: pairs.append(seconds(lambda: irfft(rfft(signal), SAMPLES))), rounds=2)
    floor, ours = min(pairs), min(trains)
    benchmark.extra_info.update(over_one_fft_pair=round(ours / floor, 2))
    assert ours <= 3 * floor


HIGH_WATER = """
def high_water(reset=False):
    # ru_maxrss would still hold the peak of the process that started this one
    if reset:
        with open("/proc/self/clear_refs", "w") as references:
            references.write("5")
    with open("/proc/self/status") as status:
        return next(int(line.split()[1]) for line in status if line.startswith("VmHWM:")) * 1024
"""


def in_fresh_process(*lines: str) -> list[float]:
    done = subprocess.run([sys.executable, "-c", HIGH_WATER + "\n".join(lines)], check=True, capture_output=True, text=True)
    return [float(number) for number in done.stdout.split()]


PEAKS = (
    "import importlib.util",
    "import numpy as np",
    f"spec = importlib.util.spec_from_file_location('speed', {__file__!r})",
    "speed = importlib.util.module_from_spec(spec)",
    "spec.loader.exec_module(speed)",
    "for source, step in speed.SOURCES.values():",
    "    draw = lambda n: source.simulate(duration=n * step, sample_interval=step, rng=np.random.default_rng(1))",
    "    draw(1000)",
    "    before = high_water(reset=True)",
    "    light = draw(speed.SAMPLES)",
    "    print((high_water() - before) / (8 * speed.SAMPLES))",
    "    del light",
)


@LINUX
def test_peak_memory_is_at_most_six_arrays(benchmark):
    """Growth of the greatest resident memory while a field is simulated, over an array of SAMPLES float64 (8 bytes each)."""
    arrays = benchmark.pedantic(in_fresh_process, args=PEAKS, rounds=1)
    benchmark.extra_info.update({f"arrays_{name}": round(number, 2) for name, number in zip(SOURCES, arrays, strict=True)})
    # the complex field alone is two
    assert all(1.9 < number <= 6 for number in arrays)


BLOCKS = (
    "import astropy.units as u",
    "import numpy as np",
    "from whitefringe.coherence import correlate",
    "piece = np.random.default_rng(1).normal(size=2_000_000).view(complex)",
    "blocks = (piece * np.exp(1j * k) for k in range(100))",
    "found = correlate(blocks, sample_interval=1 * u.ps, lags=100)",
    "assert found.samples == 100_000_000",
    "print(high_water())",
)


@LINUX
def test_a_hundred_million_samples_read_in_blocks(benchmark):
    (peak,) = benchmark.pedantic(in_fresh_process, args=BLOCKS, rounds=1)
    benchmark.extra_info.update(peak_gigabytes=round(peak / 1e9, 2))
    assert peak < 2e9
