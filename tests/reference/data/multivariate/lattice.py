"""Generating vector of the embedded lattice in src/numerics/distributions/multivariate_t/lattice.rs.

The points {k z / 2^m}, k < 2^m, are to be good for every m from 5 to 14 at once. Component by component (Sloan and
Reztsov 2002) each z_j is the odd number whose worst ratio, over the m, of the squared worst-case error to the best
one at that m is smallest (the criterion of Cools, Kuo and Nuyens 2006); the space is the weighted Korobov space of
smoothness 1, kernel prod (1 + g_j 2 pi^2 B2({x_j})), with weights g_j = 1/j, in which tent-transformed lattices of
smooth integrands are analysed (Hickernell 2002). Written for this project with numpy 2; run time some minutes.
"""

import sys
import numpy as np

LEVELS = range(5, 15)
DIMENSIONS = int(sys.argv[1]) if len(sys.argv) > 1 else 100
TOP = max(LEVELS)


def bernoulli2(x):
    return x * x - x + 1.0 / 6.0


products = {m: np.ones(2**m) for m in LEVELS}
# For each m the kernel at i / 2^m, and the Hadamard-like sums over k by the discrete convolution over the group of odd
# numbers would be faster; the plain sums are fast enough in blocks.
vector = []
for j in range(1, DIMENSIONS + 1):
    weight = 1.0 / j
    ratios = np.zeros(2 ** (TOP - 1))
    for m in LEVELS:
        n = 2**m
        kernel = (2.0 * np.pi**2 * bernoulli2(np.arange(n) / n)).astype(np.float64)
        k = np.arange(n, dtype=np.int64)
        odd = np.arange(1, n, 2, dtype=np.int64)
        errors = np.empty(len(odd))
        # B2 is symmetric: z and n - z are equally good.
        half = odd[: max(1, len(odd) // 2)]
        block = max(1, 2**21 // n)
        for start in range(0, len(half), block):
            z = half[start : start + block]
            index = (z[:, None] * k[None, :]) & (n - 1)
            errors[start : start + len(z)] = kernel[index] @ products[m]
        errors[len(half) :] = errors[: len(odd) - len(half)][::-1]
        squared = (products[m].sum() + weight * errors) / n - 1.0
        relative = squared / squared.min()
        # Every odd number below 2^TOP, by its remainder modulo n.
        remainder = (np.arange(1, 2**TOP, 2) & (n - 1)) // 2
        ratios = np.maximum(ratios, relative[remainder])
    z = 1 if j == 1 else int(2 * np.argmin(ratios) + 1)
    vector.append(z)
    for m in LEVELS:
        n = 2**m
        products[m] *= 1.0 + weight * 2.0 * np.pi**2 * bernoulli2(((np.arange(n) * z) % n) / n)
    print(z, end=", ", flush=True)
print()
