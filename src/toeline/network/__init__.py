"""The scenario as arrays: nodes, links, gates and offtakes, and the state the day starts from."""
