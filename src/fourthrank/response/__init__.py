"""What a tensor means: directional constants, averages and measures of anisotropy."""

from .averages import hill_average, log_euclidean_anisotropy, reuss_average, universal_anisotropy, voigt_average
from .directional import linear_compressibility, poisson_ratio, shear_modulus, young_modulus

__all__ = [
    "hill_average",
    "linear_compressibility",
    "log_euclidean_anisotropy",
    "poisson_ratio",
    "reuss_average",
    "shear_modulus",
    "universal_anisotropy",
    "voigt_average",
    "young_modulus",
]
