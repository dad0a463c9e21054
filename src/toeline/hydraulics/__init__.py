"""Equations of canal hydraulics: SI floats in, floats and a status out; no names, no files."""
