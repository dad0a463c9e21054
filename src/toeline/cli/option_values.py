"""Values of options that carry a unit."""

from typing import TYPE_CHECKING

from toeline.errors import UsageError

if TYPE_CHECKING:
    from toeline.units import UnitSystem


def lengths(option: str, text: str, system: "UnitSystem") -> list[float]:
    """The lengths of a list such as "3.2, 3.6" or "340 ft", rising, in SI."""
    from toeline.units import parse_quantity

    try:
        return sorted({parse_quantity(_plain_or_text(part.strip()), "length", system) for part in text.split(",")})
    except ValueError as error:
        raise UsageError(f"{option}: {error}") from error


def _plain_or_text(part: str) -> float | str:
    try:
        return float(part)
    except ValueError:
        return part
