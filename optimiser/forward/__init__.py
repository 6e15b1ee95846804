"""Room 5: the section step by step in plain numbers: starting points, and the audit of an optimum.

Nothing here knows the algebraic section: beds are integrated, phases flashed by successive substitution, temperatures
found from enthalpies one after the other.
"""
