"""Room 4: the synthesis section as Pyomo blocks, one file for each piece of plant and one that assembles them."""
