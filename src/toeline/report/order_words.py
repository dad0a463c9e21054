"""What an order asks for, in words."""

from toeline.units import Display


def order_words(kind: str, value: float, display: Display) -> str:
    """An order in words; `kind` is opening [m], by [m] or discharge [m³/s]."""
    if kind == "discharge":
        return f"pass {display.discharge(value)}"
    if kind == "opening":
        return f"open to {display.opening(value)}" if value > 0.0 else "close"
    return f"{'open' if value > 0.0 else 'close'} by {display.opening(abs(value))}"
