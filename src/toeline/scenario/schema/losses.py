"""What a canal loses along its way: through the wetted perimeter and by the surface."""

from typing import Annotated

from pydantic import Field

from toeline.scenario.schema.day_series import SeriesKind
from toeline.scenario.schema.table import Name, Table
from toeline.scenario.schema.value_kinds import Quantity
from toeline.scenario.series import Series

METRE_A_DAY = 1.0 / 86_400.0

SEEPAGE = Quantity("rate of loss", least=0.0, most=10.0 * METRE_A_DAY)
SURFACE_RATE = Quantity("rate of loss", least=0.0, most=5.0 * METRE_A_DAY)

Seepage = Annotated[float, SEEPAGE]
SurfaceRate = Annotated[float, SURFACE_RATE]
SurfaceRateSeries = Annotated[Series, SeriesKind(SURFACE_RATE, "steps")]


class Losses(Table):
    """Losses along the whole canal; a node that dries loses nothing any more."""

    seepage: Seepage = Field(0.0, description="Seepage through the wetted perimeter, where its surface gives no other.")
    evaporation: SurfaceRate = Field(
        0.0, description="Evaporation from the water surface, where the day file gives no other."
    )
    rain: SurfaceRate = Field(0.0, description="Rain on the water surface, where the day file gives no other.")


class LossesOfDay(Table):
    """Weather and seepage of the day, in place of what the canal file gives."""

    seepage: dict[Name, Seepage] = Field(
        {},
        description="Seepage through the wetted perimeter of a pool, over all its surfaces, as measured lately or "
        "after a repair. Pools left out: as the canal file gives it.",
    )
    evaporation: SurfaceRateSeries | None = Field(
        None, description="Evaporation from the water surface. Left out: that of the canal file."
    )
    rain: SurfaceRateSeries | None = Field(
        None, description="Rain on the water surface. Left out: that of the canal file."
    )
