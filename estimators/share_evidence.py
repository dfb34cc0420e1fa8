"""What a sample says about a share, before any method turns it into an interval."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from estimators.proportion_methods import Numbers

_NO_VARIATION = 1e14  # equivalent base per row above which the variance is rounding noise
_CENSUS = 1e-12  # what 1 - f may differ from 0 by rounding


@dataclass(frozen=True, slots=True, eq=False)
class ShareEvidence:
    """What a sample says about one share, or about m shares at once (arrays of one length).

    Parameters
    ----------
    share : float or (m,) float
        Estimated share, 0 to 1.
    base : float or (m,) float
        Rows that gave an answer.
    equivalent_base : float or (m,) float
        p(1-p) k/(k-1) / v; NaN or infinite where no answer varies.
    sampling_fraction : float or (m,) float
        base / weighted base; 0 for an endless or unknown universe and with replacement.
    degrees_of_freedom : float or (m,) float
        Behind the variance v; 0 when there are none.
    stand_in_effect : float or (m,) float
        Used where no answer varies: weighting effect x (1 + (mean cluster size - 1) x 0.05).
    universe : float or (m,) float
        The most units the base can hold, when each row speaks for the same number of them:
        N - n + rows asked in the base, those without an answer included. NaN otherwise.
    simple_random : bool
        A simple random sample of everyone, drawn without replacement.
    """

    share: Numbers
    base: Numbers
    equivalent_base: Numbers
    sampling_fraction: Numbers = 0.0
    degrees_of_freedom: Numbers = math.inf
    stand_in_effect: Numbers = 1.0
    universe: Numbers = math.nan
    simple_random: bool = False

    @property
    def does_not_vary(self) -> NDArray[np.bool_]:
        """Whether no answer varies though not everybody was asked: the result needs a caution."""
        unseen = 1 - np.asarray(self.sampling_fraction, dtype=float)
        some = np.asarray(self.base) > 0
        return np.asarray(self._equivalent_is_noise & (unseen > _CENSUS) & some)

    @property
    def usable_equivalent_base(self) -> NDArray[np.float64]:
        """The equivalent base, or what stands in for it; infinite in a census."""
        unseen = 1 - np.asarray(self.sampling_fraction, dtype=float)
        with np.errstate(divide="ignore"):
            stand_in = np.asarray(self.base) / (
                np.asarray(self.stand_in_effect) * np.maximum(unseen, 0.0)
            )
        measured = np.where(self._equivalent_is_noise, np.inf, self.equivalent_base)
        return np.where(self.does_not_vary, stand_in, measured)

    @property
    def _equivalent_is_noise(self) -> NDArray[np.bool_]:
        """Whether v < 1e-14 p(1-p)/n, which says that no answer varies."""
        equivalent = np.asarray(self.equivalent_base, dtype=float)
        noise = equivalent > _NO_VARIATION * np.asarray(self.base)
        return np.asarray(np.isnan(equivalent) | noise)
