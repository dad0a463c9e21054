"""Physical constants, and the caution that goes wherever results go."""

GRAVITY = 9.80665
"""Standard acceleration of gravity [m/s²] (CGPM 1901)."""

WATER_DENSITY = 1000.0
"""Density of fresh water [kg/m³], for the power of a jump."""

CAUTION = (
    "Planning aid from idealised one-dimensional quasi-steady hydraulics; it commands nothing. "
    "Surges, cross waves, eddies, air, ice and debris are not simulated. "
    "A qualified (where the law asks, licensed) engineer must review limits and results; "
    "local codes and the owner's standing orders govern. "
    "Verify gauges, gate scales and one jump in the field. "
    "Water below gates drowns people: no state shown here is safe to enter. "
    "A dry canal can fill without warning."
)
"""The short form, for run files, pages and the end of every summary."""

FIELD_CAUTION = (
    "Water below gates drowns people: no state shown here is safe to enter. A dry canal can fill without warning. "
    "Expected readings are estimates; this sheet commands nothing beyond the owner's standing orders, which govern."
)
"""The shortest form, at the foot of every page that is carried to a gate; the whole caution stands once beside it."""
