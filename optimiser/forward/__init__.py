"""Room 5: the section step by step in plain numbers: starting points, and the audit of an optimum.

It shares the formulas of chemistry and engineering with the equations that it audits, and nothing else: beds
    are
integrated by a stiff integrator, phases part in a flash of their own, temperatures are found by Newton's
method.
"""
