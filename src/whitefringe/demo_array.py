"""Larkmoor's array: invented stations, delay lines, feed paths and stars to try the arms and the sky on.

Nothing here exists. The place is chosen for round numbers, the stars are made up, and the setup file says so.
"""

from __future__ import annotations

from pathlib import Path

from .io import write_text

ARRAY_TEXT = """# Larkmoor array (invented): stations, delay lines, arms and stars, for `whitefringe track` and the notebooks.
name = "Larkmoor array"

[source]
shape = "thermal"
temperature = "5500 K"

[[filter]]               # the science band
shape = "super-gaussian"
centre = "1.65 um"
fwhm = "0.28 um"
order = 4.0

[[tracking]]             # the band in which fringes are followed
shape = "super-gaussian"
centre = "0.80 um"
fwhm = "0.06 um"
order = 4.0

[air]                    # no single model covers both bands: the step between the two is taken out, and said
model = "two air models"
short = "ciddor 1996"
long = "mathar 2007"
meet = "1.4 um"
levelled = true
temperature = "14 deg_C"
pressure = "900 hPa"
humidity = "35 %"
co2 = 370e-6

[air_uncertainty]        # one standard deviation, of what all air has in common
temperature = "0.3 K"
pressure = "0.5 hPa"
humidity = "5 %"

[[first_arm]]            # Kiln: an evacuated pipe, and the plate of its vacuum window
medium = "vacuum"
length = "24 m"

[[first_arm]]
medium = "fused silica"
length = "8 mm"
length_uncertainty = "10 um"

[[second_arm]]           # Weir: the same way in air, with a thinner window
medium = "air"
length = "24 m"
length_uncertainty = "2 mm"

[[second_arm]]
medium = "fused silica"
length = "6 mm"
length_uncertainty = "10 um"

[array]
name = "Larkmoor"
longitude = "-15 deg"
latitude = "35 deg"
height = "1000 m"

[[array.station]]
name = "Kiln"
east = "0 m"
north = "0 m"
up = "0 m"
uncertainty = "4 um"
line = { stroke = "18 m", greatest_speed = "12 mm / s", passes = 4 }

[[array.station]]
name = "Weir"
east = "80 m"
north = "60 m"
up = "0.5 m"
uncertainty = "4 um"
line = { stroke = "18 m", greatest_speed = "12 mm / s", passes = 4, offset = "0.35 m" }

[[array.station]]
name = "Tarn"
east = "-45 m"
north = "120 m"
up = "-2 m"
uncertainty = "6 um"
line = { stroke = "12 m", greatest_speed = "1.2 mm / s", passes = 4, offset = "-1.2 m" }

[[target]]
name = "Ember"
ra = "60 deg"
dec = "25 deg"
pm_ra_cosdec = "35 mas / yr"
pm_dec = "-110 mas / yr"
parallax = "42 mas"
epoch = "J2016.0"
uncertainty = "0.02 mas"
proper_motion_uncertainty = "0.02 mas / yr"
object = { shape = "darkened-disc", diameter = "2.1 mas", darkening = 0.3 }

[[target]]
name = "Sable"
ra = "142 deg"
dec = "8 deg"
uncertainty = "0.3 mas"
object = { shape = "binary", flux_ratio = 0.4, separation = "6 mas", position_angle = "70 deg" }

[[target]]
name = "Rush"
ra = "25 deg"
dec = "62 deg"
uncertainty = "20 mas"
object = { shape = "uniform-disc", diameter = "0.6 mas" }

[[target]]
name = "Fen"
ra = "15 deg"
dec = "-58 deg"
uncertainty = "1 mas"

[night]
date = "2026-12-01"
least_altitude = "30 deg"
sun_below = "-12 deg"
step = "5 min"
"""


def write_array(folder: str | Path, *, overwrite: bool = False) -> Path:
    """Write the array's setup file ``array.toml`` to a folder.

    Raises
    ------
    SetupError
        The folder is missing, or the file exists and `overwrite` is false.
    """
    return write_text(ARRAY_TEXT, Path(folder) / "array.toml", overwrite=overwrite)
