"""The kernels: decoder, annealing and exact search on flat arrays, compiled by numba or run as plain Python.

Importing this package imports numba; nothing above imports it at module level.
"""
