"""`import whitefringe` against `import astropy.units`, each in fresh interpreters."""

import subprocess
import sys
from time import perf_counter


def seconds(statement: str) -> float:
    times = []
    for _ in range(3):
        start = perf_counter()
        subprocess.run([sys.executable, "-c", statement], check=True)
        times.append(perf_counter() - start)
    return min(times)


def test_import_costs_less_than_twice_astropy_units(benchmark):
    floor = seconds("import astropy.units")
    ours = benchmark.pedantic(seconds, args=("import whitefringe",), rounds=1)
    benchmark.extra_info.update(ours_over_astropy_units=round(ours / floor, 2))
    assert ours < 2 * floor
