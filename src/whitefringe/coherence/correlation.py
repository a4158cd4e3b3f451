"""Correlation of recorded or simulated signals, with bias and standard errors, in one pass and bounded memory."""

from __future__ import annotations

import warnings
from dataclasses import dataclass, field
from typing import Any

import astropy.units as u
import numpy as np
from scipy.special import chndtrinc, ndtri

from ..errors import InputError, WhitefringeWarning
from ..units import FloatArray
from ._bartlett import spread, two_sided
from ._blocks import Signal, check_length, interval_si, whole_lags
from ._intensity import IntensityCorrelation, intensity_correlation
from ._lag import lag_between
from ._lagsums import LagSums, lag_sums

__all__ = ["Correlation", "IntensityCorrelation", "correlate", "intensity_correlation", "lag_between"]

FEWEST = 4
"""Samples per lag asked for, at least."""

ONE_SIGMA = 0.682689492137
"""Probability of one standard deviation about a normal mean."""

CLEAR = 6.0
"""From so many standard errors on, |gamma| is taken to be normally distributed."""


@dataclass(frozen=True, kw_only=True, eq=False)
class Correlation:
    """Normalised correlation, one value per lag.

    Parameters
    ----------
    lag : Quantity [time], shape (m,)
        From zero on for one signal, from minus to plus the greatest lag for two.
    value : ndarray, shape (m,)
        Estimate of gamma, corrected for bias: complex for complex signals, else real.
    standard_error : ndarray, shape (m,)
        Of the part of `value` along gamma, and so of |gamma|.
    across_error : ndarray, shape (m,)
        Of the part at right angles to it, |gamma| times that of its phase in radians; zero for real signals.
    samples : int
    independent_samples : float
        `samples` over the sum of |gamma|^2 over all lags.
    definition, method, citation : str
    """

    lag: u.Quantity = field(repr=False)
    value: Signal = field(repr=False)
    standard_error: FloatArray = field(repr=False)
    across_error: FloatArray = field(repr=False)
    samples: int
    independent_samples: float
    definition: str
    method: str
    citation: str = "bartlett"

    @property
    def abs(self) -> FloatArray:
        """Estimate of |gamma|, shape (m,): noise adds to the square of a modulus, so its variance is taken off."""
        squares = np.abs(self.value) ** 2
        return np.asarray(np.sqrt(np.maximum(squares - self.across_error**2, 0.0)))

    @property
    def abs_error(self) -> FloatArray:
        """Standard error of |gamma|, shape (m,)."""
        return np.asarray(self.standard_error)

    def abs_interval(self, level: float = ONE_SIGMA) -> FloatArray:
        """Central confidence interval of |gamma|, shape (2, m).

        Where |gamma| is 6 standard errors or more, `abs` plus or minus its normal share of them; below, and for complex signals, the
        interval of a Rice distribution, whose lower end may be zero (Rice 1944).

        Raises
        ------
        InputError
            `level` is not between 0 and 1.
        """
        if not 0 < level < 1:
            raise InputError(f"level must be between 0 and 1; got {level}")
        margin = float(ndtri(0.5 + level / 2)) * self.standard_error
        result = np.maximum(np.array([self.abs - margin, self.abs + margin]), 0.0)
        sigma = np.hypot(self.standard_error, self.across_error) / np.sqrt(2)
        faint = np.flatnonzero((self.across_error > 0) & (np.abs(self.value) < CLEAR * sigma))
        for row, tail in ((0, 0.5 + level / 2), (1, 0.5 - level / 2)):
            square = (np.abs(self.value[faint]) / sigma[faint]) ** 2
            # the modulus at which a square as large as this one has the probability `tail`; zero where even none makes it likely enough
            found = np.nan_to_num(chndtrinc(square, 2.0, np.full(faint.size, tail)), nan=0.0)
            reachable = -np.expm1(-square / 2) > tail
            result[row, faint] = np.where(reachable, sigma[faint] * np.sqrt(found), 0.0)
        return np.asarray(result)


def correlate(x: Any, y: Any = None, *, sample_interval: Any, lags: Any = None, remove_mean: bool | None = None) -> Correlation:
    """Normalised correlation of one signal with itself, or of two.

    gamma(tau) = <x(t + tau) x*(t)> / <|x|^2>,   or   <x(t + tau) y*(t)> / sqrt(<|x|^2> <|y|^2>)

    Parameters
    ----------
    x, y : array_like, memory-mapped array, or iterator of arrays, shape (n,)
        Complex fields or real signals, equally sampled; an iterator yields one-dimensional pieces of any lengths.
    sample_interval : Quantity [time]
    lags : int or Quantity [time, or path difference], optional
        Greatest lag, in samples or as a delay; 100 samples by default, at most a quarter of the record.
    remove_mean : bool, optional
        Take off the mean first. By default the mean of real signals is taken off, and complex fields are left as they are.

    Returns
    -------
    Correlation

    Raises
    ------
    UnitsError
        `sample_interval` is not a time, `lags` neither a number of samples nor a delay.
    InputError
        Not one row of finite numbers, too short for its lags, of two lengths, one real and one complex, or without any change.

    Warns
    -----
    WhitefringeWarning
        The correlation lasts longer than four times `lags`, and than 16000 samples; then the standard errors are too small.

    Notes
    -----
    Read once, in blocks of 16384 samples or four times `lags`; memory does not grow with the record, and how it is cut into pieces does not
    change the result. Products are averaged over n - k pairs; the bias of the normalisation and of the mean, of order 1/n, is taken off.
    Standard errors are Bartlett's, for stationary linear processes: thermal light, few wave trains, and noisy channels alike; real
    signals vary sqrt(2) times as much as circular complex ones. With fields going as exp(-2 pi i nu t), light of higher frequency turns
    faster towards negative phase as the lag grows. A signal x that repeats y later gives a peak at a positive lag.

    References
    ----------
    Bartlett 1946, doi:10.2307/2983611; Mandel & Wolf, sec. 4.3.

    Examples
    --------
    >>> import astropy.units as u
    >>> import numpy as np
    >>> from whitefringe import coherence
    >>> lamp = coherence.WaveTrains(rate=5 / u.ps, damping_time=20 * u.ps)
    >>> light = lamp.simulate(duration=1 * u.us, sample_interval=1 * u.ps, rng=np.random.default_rng(1))
    >>> found = coherence.correlate(light.field, sample_interval=1 * u.ps, lags=40 * u.ps)
    >>> print(f"{found.abs[20]:.3f} +- {found.abs_error[20]:.3f}, expected {np.exp(-1):.3f}")
    0.366 +- 0.002, expected 0.368
    """
    interval = interval_si(sample_interval)
    reach = whole_lags(lags, interval)
    sums = lag_sums(x, y, reach, remove_mean)
    check_length(sums.count, reach, FEWEST)
    known = max(reach, min(sums.products["xx"].size - 1, sums.count // FEWEST))
    rho = {name: values[: known + 1] for name, values in _normalised(sums).items()}
    xx = two_sided(rho["xx"], rho["xx"])
    yy, xy = (xx, xx) if y is None else (two_sided(rho["yy"], rho["yy"]), two_sided(rho["xy"], rho["yx"]))
    steps = np.arange(0 if y is None else -reach, reach + 1)
    errors = spread(xx, yy, xy, steps, sums.count, is_complex=sums.is_complex, centred=sums.centred)
    if not errors.settled:
        warnings.warn(
            f"the correlation does not die away within {known} samples, so its standard errors are too small; ask for more lags, "
            "or record for longer",
            WhitefringeWarning,
            stacklevel=2,
        )
    value = xy[steps + known] - errors.bias
    if y is None:
        value[0] = 1.0
    return Correlation(
        lag=steps * u.Quantity(sample_interval),
        value=value,
        standard_error=errors.along,
        across_error=errors.across,
        samples=sums.count,
        independent_samples=sums.count / errors.extent,
        definition=_definition(y is not None, sums.centred),
        method="lag products averaged over overlapping Fourier blocks, bias taken off; standard errors by Bartlett's formula",
    )


def _definition(two: bool, centred: bool) -> str:
    ratio = "<x(t + tau) y*(t)> / sqrt(<|x|^2> <|y|^2>)" if two else "<x(t + tau) x*(t)> / <|x|^2>"
    return f"{ratio}, {'means taken off' if centred else 'as recorded'}"


def _normalised(sums: LagSums) -> dict[str, Signal]:
    """Lag products over the geometric mean of the two mean squares."""
    power = {name[0]: float(np.real(values[0])) for name, values in sums.products.items() if name[0] == name[1]}
    for name, mean_square in power.items():
        if not mean_square > 0:
            raise InputError(f"{name} does not change: it has no correlation")
    return {name: values / np.sqrt(power[name[0]] * power[name[1]]) for name, values in sums.products.items()}
