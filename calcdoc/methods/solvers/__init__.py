"""Numeric solvers: plain array functions in SI units, for what has no closed form.

They know nothing of texts and sheets: arrays in, a frozen result of arrays out.
"""
