"""Compiled kernels: arrays in, arrays out, no objects, no checks."""
