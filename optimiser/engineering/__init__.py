"""Equipment formulas: pressure drop, heat exchange, compression, refrigeration, vessel walls and costs.

Every formula that the algebraic section needs reads the same for floats, casadi symbols and Pyomo
expressions.
"""
