"""Room 6: from a Pyomo model through casadi derivatives to Ipopt."""
