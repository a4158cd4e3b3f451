"""Citation keys: every formula and definition names one of these, and reports print them."""

from __future__ import annotations

from typing import NamedTuple


class Citation(NamedTuple):
    """A published source: short form and, where there is one, a DOI or a standard's number."""

    short: str
    locator: str


CITATIONS: dict[str, Citation] = {
    "goodman": Citation("Goodman, Statistical Optics, 2nd ed. (Wiley 2015), sec. 5.1", "ISBN 978-1-119-00945-0"),
    "mandel-wolf": Citation(
        "Mandel & Wolf, Optical Coherence and Quantum Optics (Cambridge 1995), sec. 4.3",
        "doi:10.1017/CBO9781139644105",
    ),
    "born-wolf": Citation("Born & Wolf, Principles of Optics, 7th ed. (Cambridge 1999), sec. 7.5.8", "doi:10.1017/CBO9781139644181"),
    "planck": Citation("Planck's law; constants CODATA 2018 as in astropy.constants", "doi:10.1103/RevModPhys.93.025010"),
    "tokunaga-vacca": Citation("Tokunaga & Vacca, PASP 117, 421 (2005), appendix", "doi:10.1086/429382"),
    "bracewell": Citation(
        "Bracewell, The Fourier Transform and Its Applications, 3rd ed. (McGraw-Hill 2000), ch. 8 and 11",
        "ISBN 978-0-07-303938-1",
    ),
    "rabiner": Citation(
        "Rabiner, Schafer & Rader, The chirp z-transform algorithm, IEEE Trans. Audio Electroacoust. 17, 86 (1969)",
        "doi:10.1109/TAU.1969.1162034",
    ),
    "kay": Citation(
        "Kay, Fundamentals of Statistical Signal Processing: Estimation Theory (Prentice Hall 1993), ch. 3",
        "ISBN 978-0-13-345711-7",
    ),
    "takeda": Citation("Takeda, Ina & Kobayashi, JOSA 72, 156 (1982), eqs 5-9", "doi:10.1364/JOSA.72.000156"),
    "ciddor": Citation("Ciddor, Appl. Opt. 35, 1566 (1996), eq. 1", "doi:10.1364/AO.35.001566"),
    "siegman": Citation("Siegman, Lasers (University Science Books 1986), axial modes; super-Gaussian profiles", "ISBN 978-0-935702-11-8"),
    "demtroeder": Citation(
        "Demtroeder, Laser Spectroscopy 1, 5th ed. (Springer 2014), ch. 3: widths and profiles of spectral lines",
        "doi:10.1007/978-3-642-53859-9",
    ),
    "nist-asd": Citation("NIST Atomic Spectra Database, lines of neutral Hg, Ne, Kr, Cd", "doi:10.18434/T4W30F"),
    "effective-index": Citation(
        "Macleod, Thin-Film Optical Filters, 4th ed. (CRC 2010), tilted narrow-band filters", "ISBN 978-1-4200-7302-7"
    ),
    "bartlett": Citation(
        "Bartlett, On the theoretical specification and sampling properties of autocorrelated time-series, "
        "J. R. Stat. Soc. Suppl. 8, 27 (1946)",
        "doi:10.2307/2983611",
    ),
    "knapp-carter": Citation("Knapp & Carter, IEEE Trans. Acoust. Speech Signal Process. 24, 320 (1976)", "doi:10.1109/TASSP.1976.1162830"),
    "jackknife": Citation("Miller, The jackknife - a review, Biometrika 61, 1 (1974)", "doi:10.1093/biomet/61.1.1"),
    "rice": Citation(
        "Rice, Mathematical analysis of random noise, Bell Syst. Tech. J. 23, 282 (1944), part I", "doi:10.1002/j.1538-7305.1944.tb00874.x"
    ),
    "ciddor-hill": Citation("Ciddor & Hill, Appl. Opt. 38, 1663 (1999), group index of air", "doi:10.1364/AO.38.001663"),
    "birch-downs": Citation("Birch & Downs, Metrologia 30, 155 (1993) and 31, 315 (1994)", "doi:10.1088/0026-1394/31/4/006"),
    "stone-zimmerman": Citation(
        "Stone & Zimmerman, Index of refraction of air (NIST Engineering Metrology Toolbox), appendices A and B",
        "report emtoolbox.nist.gov/Wavelength/Documentation.asp",
    ),
    "mathar": Citation("Mathar, J. Opt. A 9, 470 (2007), tables 1 to 5", "doi:10.1088/1464-4258/9/5/008"),
    "malitson": Citation("Malitson, JOSA 55, 1205 (1965), the three-term dispersion formula of glasses", "doi:10.1364/JOSA.55.001205"),
    "schott-tie-19": Citation("Schott, Technical Information TIE-19, temperature coefficient of the refractive index", "report TIE-19"),
    "saleh-teich": Citation("Saleh & Teich, Fundamentals of Photonics, 2nd ed. (Wiley 2007), ch. 5 and 22", "ISBN 978-0-471-35832-9"),
    "hanbury-brown": Citation("Hanbury Brown, Davis, Lake & Thompson, MNRAS 167, 475 (1974)", "doi:10.1093/mnras/167.3.475"),
    "hestroffer": Citation("Hestroffer, A&A 327, 199 (1997), power-law limb darkening", "bibcode:1997A&A...327..199H"),
    "thompson": Citation(
        "Thompson, Moran & Swenson, Interferometry and Synthesis in Radio Astronomy, 3rd ed. (Springer 2017), sec. 4.1",
        "doi:10.1007/978-3-319-44431-4",
    ),
    "iers-2010": Citation("Petit & Luzum (eds), IERS Conventions (2010), IERS Technical Note 36", "ISBN 3-89888-989-6"),
    "iers-bulletin-a": Citation(
        "IERS Bulletin A, accuracy of the predictions, and the file finals2000A it goes with", "report IERS Bulletin A, weekly"
    ),
    "oifits": Citation("Duvert, Young & Hummel, A&A 597, A8 (2017), OIFITS version 2", "doi:10.1051/0004-6361/201526405"),
}
"""Key -> citation. Edition and section numbers of the books are from memory, the DOIs of the papers too."""


def cite(key: str) -> str:
    """Return the short citation and locator for `key`.

    Examples
    --------
    >>> cite("takeda")
    'Takeda, Ina & Kobayashi, JOSA 72, 156 (1982), eqs 5-9; doi:10.1364/JOSA.72.000156'
    """
    source = CITATIONS[key]
    return f"{source.short}; {source.locator}"
