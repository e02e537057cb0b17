"""Value objects: stress, strain, stiffness and compliance, free of any notation.

They are read from arrays in a named notation and written to arrays in a named notation; in between there is physics
only. Each object is an immutable batch of any shape.
"""

from typing import ClassVar, final

import numpy as np
from numpy.typing import NDArray

from . import _mandel
from ._arrays import Inexact, broadcast_batches
from ._fourth_rank import FourthRank
from ._packing import Side
from ._second_rank import SecondRank
from ._value import make, working

__all__ = ["Compliance", "Stiffness", "Strain", "Stress"]


@final
class Stress(SecondRank):
    """Stress tensors, a batch of any shape, in any consistent unit.

    Made by `from_vector` and `from_tensor`; immutable. Annotations of arrays state the real case: they are complex128
    where complex components were given.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, Stress
    >>> sigma = Stress.from_tensor([[1.0, 2.0, 0.0], [2.0, 0.0, 0.0], [0.0, 0.0, 0.0]])
    >>> sigma.vector(Notation.voigt(Ordering("xx yy zz xy yz zx")))
    array([1., 0., 0., 2., 0., 0.])
    """

    __slots__ = ()

    _side: ClassVar[Side] = "stress"

    def dot(self, strain: "Strain") -> NDArray[np.float64]:
        """Return the double contraction with a strain: ``sigma_ij eps_ij``, twice the energy density.

        Parameters
        ----------
        strain : Strain
            The strain; batches broadcast.

        Returns
        -------
        ndarray of float64 (complex128 where one is complex; no conjugate is taken), shape (...)
            In the unit of the stress.

        Raises
        ------
        ShapeError
            If the batches do not broadcast.
        """
        _require(strain, Strain)
        return _double_contraction(self, strain)


@final
class Strain(SecondRank):
    """Strain tensors (small strain), a batch of any shape.

    Made by `from_vector` and `from_tensor`; immutable. Annotations of arrays state the real case: they are complex128
    where complex components were given.

    Examples
    --------
    >>> from fourthrank import Notation, Ordering, Strain
    >>> eps = Strain.from_vector([1e-3, 0, 0, 0, 0, 4e-3], Notation.voigt(Ordering("11 22 33 23 13 12")))
    >>> float(eps.tensor()[0, 1].round(12))
    0.002
    """

    __slots__ = ()

    _side: ClassVar[Side] = "strain"

    def dot(self, stress: Stress) -> NDArray[np.float64]:
        """Return the double contraction with a stress: ``sigma_ij eps_ij``, twice the energy density.

        Parameters
        ----------
        stress : Stress
            The stress; batches broadcast.

        Returns
        -------
        ndarray of float64 (complex128 where one is complex; no conjugate is taken), shape (...)
            In the unit of the stress.

        Raises
        ------
        ShapeError
            If the batches do not broadcast.
        """
        _require(stress, Stress)
        return _double_contraction(stress, self)


@final
class Stiffness(FourthRank):
    """Stiffness tensors, a batch of any shape, in any consistent unit.

    Made by `from_matrix`, `from_tensor` and `from_triangle`; immutable. Annotations of arrays state the real case: they
    are complex128 where complex moduli were given (symmetric, not Hermitian).

    Examples
    --------
    >>> import numpy as np
    >>> from fourthrank import Notation, Ordering, Stiffness, Strain
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> C = Stiffness.from_matrix(np.diag([2.0, 2.0, 2.0, 1.0, 1.0, 1.0]), voigt)
    >>> (C @ Strain.from_vector([1, 0, 0, 0, 0, 3], voigt)).vector(voigt)
    array([2., 0., 0., 0., 0., 3.])
    """

    __slots__ = ()

    _rows: ClassVar[Side] = "stress"
    _columns: ClassVar[Side] = "strain"

    def inverse(self) -> "Compliance":
        """Return the compliance: ``S_ijmn C_mnkl`` is the identity of symmetric tensors.

        Returns
        -------
        Compliance
            In the inverse unit.

        Raises
        ------
        AdmissibilityError
            If a tensor is singular to working precision.
        """
        return make(Compliance, self._inverted())

    def __matmul__(self, strain: Strain) -> Stress:
        """Return the stress ``sigma_ij = C_ijkl eps_kl``; batches broadcast."""
        if type(strain) is not Strain:
            return NotImplemented
        return make(Stress, _contract(self, strain))


@final
class Compliance(FourthRank):
    """Compliance tensors, a batch of any shape, in any consistent unit.

    Made by `from_matrix`, `from_tensor` and `from_triangle`; immutable. Annotations of arrays state the real case: they
    are complex128 where complex moduli were given (symmetric, not Hermitian).

    Examples
    --------
    >>> import numpy as np
    >>> from fourthrank import Compliance, Notation, Ordering
    >>> voigt = Notation.voigt(Ordering("11 22 33 23 13 12"))
    >>> S = Compliance.from_matrix(np.diag([1.0, 1.0, 1.0, 4.0, 4.0, 4.0]), voigt)
    >>> float(S.tensor()[0, 1, 0, 1])
    1.0
    """

    __slots__ = ()

    _rows: ClassVar[Side] = "strain"
    _columns: ClassVar[Side] = "stress"

    def inverse(self) -> Stiffness:
        """Return the stiffness: ``C_ijmn S_mnkl`` is the identity of symmetric tensors.

        Returns
        -------
        Stiffness
            In the inverse unit.

        Raises
        ------
        AdmissibilityError
            If a tensor is singular to working precision.
        """
        return make(Stiffness, self._inverted())

    def __matmul__(self, stress: Stress) -> Strain:
        """Return the strain ``eps_ij = S_ijkl sigma_kl``; batches broadcast."""
        if type(stress) is not Stress:
            return NotImplemented
        return make(Strain, _contract(self, stress))


def _contract(fourth: FourthRank, second: SecondRank) -> Inexact:
    broadcast_batches(**{type(fourth).__name__: fourth.shape, type(second).__name__: second.shape})
    return _mandel.apply(working(fourth), working(second))


def _double_contraction(stress: Stress, strain: Strain) -> NDArray[np.float64]:
    broadcast_batches(Stress=stress.shape, Strain=strain.shape)
    return np.asarray(_mandel.dot(working(stress), working(strain)))


def _require(given: object, kind: type[Stress] | type[Strain]) -> None:
    if type(given) is not kind:
        raise TypeError(
            f"dot takes a {kind.__name__} here, got {type(given).__name__}: work needs a stress and a strain"
        )
