"""What a validator knows of the file that it reads."""

from dataclasses import dataclass, field
from pathlib import Path
from typing import Any
from zoneinfo import ZoneInfo

from toeline.scenario.csv_rows import Columns, CsvFile, read_csv
from toeline.scenario.misfits import shown
from toeline.scenario.text_file import UnreadableFileError
from toeline.scenario.times import Clock
from toeline.units import UnitSystem


@dataclass
class Reading:
    """Units of plain numbers, the folder of files named, the zone and period of a day, and the CSV files read and the
    sources of rules run so far, by name.

    Without a clock, as where the period itself is at fault, times have no meaning and are not read.
    """

    system: UnitSystem = UnitSystem.metric
    folder: Path = Path()
    zone: ZoneInfo | None = None
    clock: Clock | None = None
    csv_texts: dict[str, str] = field(default_factory=dict)
    rule_sources: dict[str, str] = field(default_factory=dict)

    def read_csv(self, name: str, columns: Columns) -> CsvFile:
        """Read a CSV file and keep its text. Raises ValueError where it is not there."""
        try:
            file = read_csv(self.folder / name, columns)
        except UnreadableFileError as error:
            raise ValueError(f"found {shown(name)}; {error}") from None
        self.csv_texts[name] = file.text
        return file


def reading_of(info: Any) -> Reading:
    """Give the reading that a pydantic validation runs under; SI units where it has none."""
    reading = info.context
    return reading if isinstance(reading, Reading) else Reading()
