"""Compiled kernels: arrays and scalars in, arrays out; no pandas, no domain objects.

Every kernel is compiled by :func:`harvest.kernels.compiling.kernel`, which keeps the machine code in a cache
that is keyed by the text of all kernels, so that an edited helper is never served stale.
"""
