"""Water that a canal loses through its bed and by its surface."""

from toeline.hydraulics.cross_section import geometry
from toeline.hydraulics.gradually_varied_flow import DRY_DEPTH, WET_DEPTH
from toeline.hydraulics.kernel import kernel


@kernel
def loss_per_length(section, depth, seepage, surface_rate):
    """Loss of a metre of canal [m²/s] and its derivative to the depth [m/s]: s·P + e·T.

    `seepage` s through the wetted perimeter and `surface_rate` e from the water surface (evaporation less rain) in m/s.
    Both fade smoothly between 10 and 2 cm of depth (choice): a dry canal loses nothing, and rain on it is not counted.
    """
    share = min((depth - DRY_DEPTH) / (WET_DEPTH - DRY_DEPTH), 1.0)
    if share <= 0.0:
        return 0.0, 0.0
    _, width, perimeter, perimeter_slope = geometry(section, depth)
    full = seepage * perimeter + surface_rate * width
    fade = share * share * (3.0 - 2.0 * share)
    fade_slope = 6.0 * share * (1.0 - share) / (WET_DEPTH - DRY_DEPTH)
    return fade * full, fade * seepage * perimeter_slope + fade_slope * full
