"""Reference calculations that share no code with the package: numpy, mpmath and sympy alone.

``atoms`` has the numbers of an isotope and its ground states, ``dipoles`` the matrix
elements to the excited states, ``light`` the sums over them, ``frames`` directions and
polarisations.
"""
