"""Figures of a run, one file a figure: a dataset in, matplotlib Figures and the numbers behind them out.

Everything here works on Figure objects: no window, no backend, nothing global is left behind.
"""
