"""Studies: many runs of one day, and what they say together."""
