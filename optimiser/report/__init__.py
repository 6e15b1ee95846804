"""Room 10: how findings look to a reader: pages for a terminal, JSON. Formats only, computes nothing."""
