"""Room 7: what an optimum means: binding limits and their worth, the audit, the result that users read."""
