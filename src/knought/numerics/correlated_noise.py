"""Linear fits to a record whose noise may be correlated from one point to the next.

The idea first: 2 000 readings a second apart are not 2 000 independent measurements; an instrument
wanders. The noise is taken as white plus a wander with exponential correlation,

    V = σ² [(1 - w) 1 + w C],   C_ij = exp(-|t_i - t_j|/τ),

with w and τ unknown. On a grid of (w, τ) everything is closed: generalised least squares, Student
t for the parameters, and the residual likelihood (Patterson and Thompson, Biometrika 58 (1971)
545) as the weight of the cell. The answer is their mixture, so that not knowing the correlation is
in the uncertainty. One factorisation of C for each τ serves every w.

Long records are first averaged in bins, design included, so that nothing is lost but the white
part within a bin.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.numerics.quantiles import Mixture

__all__ = [
    "FEW_CORRELATION_TIMES",
    "MUCH_WANDER",
    "Binned",
    "Noise",
    "Projected",
    "binned",
    "correlation_times",
    "mixture_of",
    "project",
]

#: Longer records are averaged into this many bins.
MOST_BINS = 64

#: Shares of wander of the noise, up to nearly all.
_SHARES = np.array([0.25, 0.6, 0.9, 0.995])

#: Correlation times reach over this many points, but no further than thrice the record and no less
#: than a fifth of it: a short record cannot tell a slow wander from its own course, and must not
#: rule it out.
_CORRELATION_TIMES, _LONGEST_POINTS, _LONGEST_TIME = 8, 120.0, (0.2, 3.0)

#: Weight before the data are seen of "no correlation"; the rest is spread over the cells.
_WHITE = 0.4


#: Where more than this share of a point's variance wanders, and the record is fewer correlation
#: times long than that, it is few independent pieces, and u itself is poorly known.
MUCH_WANDER, FEW_CORRELATION_TIMES = 0.4, 20


@dataclass(frozen=True, eq=False)
class Binned:
    """A record in bins.

    Attributes
    ----------
    time : (n,) ndarray
        Mean time of each bin.
    values : (m, n) ndarray
        Mean of each bin for each record.
    counts : (n,) ndarray
        Points a bin.
    edges : (n,) ndarray of int
        First point of each bin.
    """

    time: FloatArray
    values: FloatArray
    counts: FloatArray
    edges: FloatArray

    def averaged(self, columns: FloatArray) -> FloatArray:
        """Average rows of ``(..., points, p)`` in the same bins: ``(..., n, p)``."""
        starts = self.edges.astype(int)
        return np.asarray(
            np.add.reduceat(columns, starts, axis=-2) / self.counts[:, None], dtype=float
        )


def binned(
    time: FloatArray, values: FloatArray, most: int = MOST_BINS, place: FloatArray | None = None
) -> Binned:
    """Average records into at most `most` bins.

    Parameters
    ----------
    time : (points,) ndarray
        Rising times.
    values : (m, points) ndarray
        Records on them.
    most
        Number of bins.
    place : (points,) ndarray, optional
        Rising coordinate in which the bins are equally wide, where the signal moves faster in
        some places than in others; bins of equally many points if not given.
    """
    points = len(time)
    if points <= most:
        edges = np.arange(points)
    elif place is None:
        edges = (np.arange(most) * points) // most
    else:
        share = (place - place[0]) / (place[-1] - place[0])
        edges = np.unique(np.searchsorted(share, np.arange(most) / most))
        edges = edges[edges < points]
    counts = np.diff(np.append(edges, points)).astype(float)
    return Binned(
        frozen(np.add.reduceat(time, edges) / counts),
        frozen(np.add.reduceat(values, edges, axis=1) / counts),
        frozen(counts),
        frozen(edges),
    )


class Noise:
    """Cells (w, τ) of the noise, as they show in the bins of one record.

    Parameters
    ----------
    record
        The bins.
    times
        Correlation times τ, in the unit of time; chosen from the record if not given.
    wander
        Whether wander is considered at all; else the noise is white.

    Attributes
    ----------
    shares : (c,) ndarray
        w of each cell: wander's share of the variance of one point.
    times : (t,) ndarray
        Correlation times.
    log_prior : (c,) ndarray
    log_determinant : (c,) ndarray
        ln |V/σ²|.
    """

    def __init__(
        self, record: Binned, times: FloatArray | None = None, *, wander: bool = True
    ) -> None:
        t = record.time
        self.times = correlation_times(record) if times is None else times
        self._scale = np.sqrt(record.counts)
        self._values, self._vectors = _spectra(
            (t - t[0]).tobytes(), record.counts.tobytes(), self.times.tobytes()
        )
        per_time = len(_SHARES) if wander else 0
        rest = per_time * len(self.times)
        self.shares = np.concatenate([[0.0], np.tile(_SHARES[:per_time], len(self.times))])
        white = _WHITE if rest else 1.0
        self.log_prior = np.log(
            np.concatenate([[white], np.full(rest, (1 - white) / max(rest, 1))])
        )
        self._which = np.concatenate([[0], np.repeat(np.arange(len(self.times)), per_time)]).astype(
            np.intp
        )
        spectrum = 1 - self.shares[:, None] + self.shares[:, None] * self._values[self._which]
        self._weights = 1.0 / spectrum
        self.log_determinant = np.log(spectrum).sum(axis=1) - np.log(record.counts).sum()

    def rotated(self, rows: FloatArray) -> FloatArray:
        """Return ``(..., n)`` rows along the eigenvectors of each τ: ``(..., τ, n)``."""
        return np.asarray(np.einsum("...n,knj->...kj", rows * self._scale, self._vectors))

    def products(self, left: FloatArray, right: FloatArray) -> FloatArray:
        """Return leftᵀ V⁻¹ right for every cell, of ``(..., τ, n)`` that were rotated."""
        return np.asarray(
            np.einsum("...cn,cn->...c", (left * right)[..., self._which, :], self._weights)
        )

    def typical_time(self, weights: FloatArray) -> FloatArray:
        """Return the correlation time of each record, ``(m,)``: geometric mean over its cells.

        Parameters
        ----------
        weights : (m, c) ndarray
            Weights of the cells; cells count as their wander does.
        """
        each = np.concatenate([[0.0], np.log(self.times[self._which[1:]])])
        shares = weights * self.shares
        return np.asarray(np.exp(shares @ each / np.maximum(shares.sum(axis=1), 1e-300)))


def correlation_times(record: Binned) -> FloatArray:
    """Return the correlation times that are considered, from one point on."""
    span = float(record.time[-1] - record.time[0])
    points = float(record.counts.sum())
    longest = span * float(np.clip(_LONGEST_POINTS / points, *_LONGEST_TIME))
    return np.geomspace(span / points, longest, _CORRELATION_TIMES)


@lru_cache(maxsize=64)
def _spectra(time: bytes, counts: bytes, times: bytes) -> tuple[FloatArray, FloatArray]:
    """Return eigenvalues and vectors of C, scaled by √counts, for each τ.

    Traces of a study share their times, and so these, the dearest part; at most 15 MB are kept.
    """
    t, root = np.frombuffer(time), np.sqrt(np.frombuffer(counts))
    distance = np.abs(t[:, None] - t)
    decay = np.exp(-distance / np.frombuffer(times)[:, None, None])
    values, vectors = np.linalg.eigh(decay * (root[:, None] * root))
    return frozen(values), frozen(vectors)


@dataclass(frozen=True, eq=False)
class Projected:
    """Normal equations of m records in every cell, in an orthonormal basis of nested columns.

    Attributes
    ----------
    normal : (m or 1, c, p, p) ndarray
        Qᵀ V⁻¹ Q.
    right : (m, c, p) ndarray
        Qᵀ V⁻¹ r, with r the residual of the ordinary fit.
    square : (m, c) ndarray
        rᵀ V⁻¹ r.
    start : (m, p) ndarray
        The ordinary fit, along Q.
    upper : (m or 1, p, p) ndarray
        R: parameters = R⁻¹ (along Q).
    points
        Rows.
    log_fixed : (c,) ndarray
        ln prior - ½ ln |V|.
    """

    normal: FloatArray
    right: FloatArray
    square: FloatArray
    start: FloatArray
    upper: FloatArray
    points: int
    log_fixed: FloatArray

    def along(self, order: int) -> tuple[FloatArray, FloatArray, FloatArray]:
        """Return coefficients (along Q), their unscaled covariance, and RSS, of leading columns.

        Columns beyond `order` are left out of the model; what the ordinary fit put there is
        data again.
        """
        p = self.normal.shape[-1]
        tail = self.start[:, order:]
        # r of the smaller model is r + Q_tail start_tail.
        cross = self.normal[..., :, order:] @ tail[:, None, :, None]
        right = self.right + cross[..., 0]
        square = (
            self.square
            + 2 * np.einsum("mcj,mj->mc", self.right[..., order:], tail)
            + np.einsum("mcj,mj->mc", cross[..., order:, 0], tail)
        )
        if order == p:
            right, square = self.right, self.square
        inverse = np.linalg.inv(self.normal[..., :order, :order])
        moved = (inverse @ right[..., :order, None])[..., 0]
        rss = square - np.einsum("mcj,mcj->mc", right[..., :order], moved)
        coefficients = self.start[:, None, :order] + moved
        return coefficients, np.asarray(inverse, dtype=float), np.maximum(rss, 1e-300)

    def log_weight(self, order: int) -> FloatArray:
        """Return ln (prior times residual likelihood) of each cell, ``(m, c)``, but a constant."""
        _, inverse, rss = self.along(order)
        determinant = np.linalg.slogdet(inverse)[1]
        return np.asarray(
            self.log_fixed + 0.5 * determinant - 0.5 * (self.points - order) * np.log(rss)
        )

    def weights(self, order: int) -> FloatArray:
        """Return the weights of the cells, ``(m, c)``, each row adding up to one."""
        log = self.log_weight(order)
        raised = np.exp(log - log.max(axis=1, keepdims=True))
        return np.asarray(raised / raised.sum(axis=1, keepdims=True))

    def parameter(self, index: int, order: int) -> tuple[FloatArray, FloatArray]:
        """Return value and scale of one parameter in every cell, each ``(m, c)``."""
        coefficients, inverse, rss = self.along(order)
        leading = self.upper[..., :order, :order]
        row = np.linalg.inv(leading)[..., index, :]  # (m or 1, order)
        value = np.einsum("mcj,mj->mc", coefficients, np.broadcast_to(row, (len(rss), order)))
        variance = np.einsum("mj,mcjk,mk->mc", row, inverse, row)
        return value, np.sqrt(variance * rss / (self.points - order))

    def tail_probability(self, order: int, whole: int, weights: FloatArray) -> FloatArray:
        """Return the probability of columns `order` to `whole` helping so much by chance.

        F-test in each cell, averaged by the cells' weights, shape ``(m,)``.
        """
        from scipy.special import fdtrc

        small, large = self.along(order)[2], self.along(whole)[2]
        more, left = whole - order, self.points - whole
        ratio = np.maximum(small - large, 0.0) / more / (large / left)
        return np.asarray(np.sum(weights * fdtrc(more, left, ratio), axis=1))


def project(record: Binned, design: FloatArray, noise: Noise | None = None) -> Projected:
    """Set up the fits of a design to records.

    Parameters
    ----------
    record
        The bins, m records.
    design : (n, p) or (m, n, p) ndarray
        Columns in the order in which they are taken up, already averaged in the bins.
    noise
        Cells; made from the record if not given.
    """
    noise = Noise(record) if noise is None else noise
    design = design if design.ndim == 3 else design[None]
    basis, upper = np.linalg.qr(design)
    start = np.einsum(
        "mnp,mn->mp", np.broadcast_to(basis, (len(record.values), *basis.shape[1:])), record.values
    )
    residual = record.values - np.einsum(
        "mnp,mp->mn", np.broadcast_to(basis, (len(start), *basis.shape[1:])), start
    )
    columns = noise.rotated(np.swapaxes(basis, 1, 2))  # (m or 1, p, τ, n)
    rotated = noise.rotated(residual)  # (m, τ, n)
    p = design.shape[2]
    normal = np.empty((len(basis), len(noise.shares), p, p))
    right = np.empty((len(start), len(noise.shares), p))
    for i in range(p):
        right[:, :, i] = noise.products(columns[:, i], rotated)
        for j in range(i + 1):
            normal[:, :, i, j] = normal[:, :, j, i] = noise.products(columns[:, i], columns[:, j])
    return Projected(
        normal,
        right,
        noise.products(rotated, rotated),
        start,
        upper,
        len(record.time),
        noise.log_prior - 0.5 * noise.log_determinant,
    )


def mixture_of(
    weights: FloatArray, values: FloatArray, scales: FloatArray, degrees_of_freedom: int
) -> Mixture:
    """Return the mixture of Student t distributions of one record, from its cells ``(c,)``."""
    kept = weights > 1e-9
    total = weights[kept].sum()
    return Mixture(
        frozen(weights[kept] / total), values[kept], scales[kept], float(degrees_of_freedom)
    )
