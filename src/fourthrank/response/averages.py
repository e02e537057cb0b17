"""Averages over all orientations: the isotropic constants of a polycrystal without texture, bounded and estimated."""

import numpy as np
from numpy.typing import NDArray

from .._arrays import Inexact
from .._value import working
from ..moduli import Isotropic
from ..tensors import Compliance, Stiffness

__all__ = ["hill_average", "log_euclidean_anisotropy", "reuss_average", "universal_anisotropy", "voigt_average"]


def voigt_average(C: Stiffness | Compliance) -> Isotropic:
    """Return Voigt's average, of equal strain in all grains: ``9 K = C_iijj`` and ``30 G = 3 C_ijij - C_iijj``.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The single crystal, in any consistent unit.

    Returns
    -------
    Isotropic
        The upper bound of K and G of an aggregate without texture.

    Raises
    ------
    AdmissibilityError
        If a compliance is singular.
    ModuliError
        If an average is not that of a stable solid.

    References
    ----------
    Hill, R. (1952), Proc. Phys. Soc. A 65, 349-354.

    Examples
    --------
    >>> from fourthrank.moduli import Isotropic
    >>> from fourthrank.response import voigt_average
    >>> float(voigt_average(Isotropic.from_two(K=160.0, G=80.0).stiffness()).G.round(9))
    80.0
    """
    return Isotropic.from_two(**_voigt(C))


def reuss_average(C: Stiffness | Compliance) -> Isotropic:
    """Return Reuss's average, of equal stress in all grains: ``1 / K = S_iijj``, ``15 / (2 G) = 3 S_ijij - S_iijj``.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The single crystal, in any consistent unit.

    Returns
    -------
    Isotropic
        The lower bound of K and G of an aggregate without texture.

    Raises
    ------
    AdmissibilityError
        If a stiffness is singular.
    ModuliError
        If an average is not that of a stable solid.

    References
    ----------
    Hill, R. (1952), Proc. Phys. Soc. A 65, 349-354.

    Examples
    --------
    >>> from fourthrank.moduli import Isotropic
    >>> from fourthrank.response import reuss_average
    >>> float(reuss_average(Isotropic.from_two(K=160.0, G=80.0).stiffness()).K.round(9))
    160.0
    """
    return Isotropic.from_two(**_reuss(C))


def hill_average(C: Stiffness | Compliance) -> Isotropic:
    """Return Hill's average: the arithmetic means of K and of G of Voigt's and Reuss's averages.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The single crystal, in any consistent unit.

    Returns
    -------
    Isotropic
        An estimate of the constants of an aggregate without texture.

    Raises
    ------
    AdmissibilityError, ModuliError
        As `voigt_average` and `reuss_average`.

    References
    ----------
    Hill, R. (1952), Proc. Phys. Soc. A 65, 349-354.

    Examples
    --------
    >>> from fourthrank.moduli import Isotropic
    >>> from fourthrank.response import hill_average
    >>> float(hill_average(Isotropic.from_two(K=160.0, G=80.0).stiffness()).K.round(9))
    160.0
    """
    upper, lower = _voigt(C), _reuss(C)
    return Isotropic.from_two(G=(upper["G"] + lower["G"]) / 2.0, K=(upper["K"] + lower["K"]) / 2.0)


def universal_anisotropy(C: Stiffness | Compliance) -> NDArray[np.float64]:
    """Return the universal anisotropy index ``5 G_V / G_R + K_V / K_R - 6``, zero for isotropy.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The tensors, in any consistent unit.

    Returns
    -------
    ndarray of float64, shape (...)
        The index, from Voigt's and Reuss's averages.

    Raises
    ------
    AdmissibilityError
        If a tensor is singular.

    References
    ----------
    Ranganathan, S. I. and Ostoja-Starzewski, M. (2008), Phys. Rev. Lett. 101, 055504.

    Examples
    --------
    >>> from fourthrank.moduli import Isotropic
    >>> from fourthrank.response import universal_anisotropy
    >>> abs(float(universal_anisotropy(Isotropic.from_two(K=160.0, G=80.0).stiffness()))) < 1e-12
    True
    """
    upper, lower = _voigt(C), _reuss(C)
    return np.asarray(5.0 * (upper["G"] / lower["G"] - 1.0) + (upper["K"] / lower["K"] - 1.0))


def log_euclidean_anisotropy(C: Stiffness | Compliance) -> NDArray[np.float64]:
    """Return the log-Euclidean anisotropy index ``sqrt(log(K_V / K_R)^2 + 5 log(G_V / G_R)^2)``, zero for isotropy.

    Parameters
    ----------
    C : Stiffness or Compliance, batch shape (...)
        The tensors, in any consistent unit.

    Returns
    -------
    ndarray of float64, shape (...)
        The distance of Voigt's and Reuss's averages in the logarithms of their Kelvin moduli.

    Raises
    ------
    AdmissibilityError
        If a tensor is singular.

    References
    ----------
    Kube, C. M. (2016), AIP Advances 6, 095209.

    Examples
    --------
    >>> from fourthrank.moduli import Isotropic
    >>> from fourthrank.response import log_euclidean_anisotropy
    >>> float(log_euclidean_anisotropy(Isotropic.from_two(K=160.0, G=80.0).stiffness()).round(9))
    0.0
    """
    upper, lower = _voigt(C), _reuss(C)
    bulk, shear = np.log(upper["K"] / lower["K"]), np.log(upper["G"] / lower["G"])
    return np.asarray(np.sqrt(bulk**2 + 5.0 * shear**2))


def _voigt(C: Stiffness | Compliance) -> dict[str, Inexact]:
    bulk, total = _invariants(working(C if isinstance(C, Stiffness) else C.inverse()))
    return {"G": (3.0 * total - bulk) / 30.0, "K": bulk / 9.0}


def _reuss(C: Stiffness | Compliance) -> dict[str, Inexact]:
    bulk, total = _invariants(working(C if isinstance(C, Compliance) else C.inverse()))
    return {"G": 7.5 / (3.0 * total - bulk), "K": 1.0 / bulk}


def _invariants(array: Inexact) -> tuple[Inexact, Inexact]:
    """Return the two linear invariants T_iijj and T_ijij."""
    return array[..., :3, :3].sum(axis=(-2, -1)), np.trace(array, axis1=-2, axis2=-1)
