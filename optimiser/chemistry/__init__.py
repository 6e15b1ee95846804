"""Room 3: species, thermodynamics, equations of state, equilibrium and rate laws.

Formulas are written once and read the same for a float, an array, a casadi symbol and a Pyomo expression.
"""
