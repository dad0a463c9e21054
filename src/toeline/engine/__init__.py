"""The time loop: a chain of stored water and the links between it."""
