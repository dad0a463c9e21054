"""A file of results on a page: what it is, then what the run says."""

import xarray as xr

from toeline.report.layout import heading, paragraph
from toeline.report.run_summary import run_summary
from toeline.units import Display, UnitSystem


def run_page(run: xr.Dataset, *, width: int = 80) -> str:
    """The page of `toeline describe` for a run, in the units in which it was to be shown."""
    display = Display(UnitSystem(run.attrs["units_for_display"]))
    return "\n\n".join([run_summary(run, display, width=width), heading("File") + "\n" + _file_facts(run, width)])


def _file_facts(run: xr.Dataset, width: int) -> str:
    sizes = run.sizes
    facts = (
        f"made by {run.attrs['source']}; {run.attrs['history']}",
        f"{sizes['time']} output steps, {sizes['profile_time']} long profiles of {sizes['node']} nodes, "
        f"{len(run.data_vars)} variables in SI units",
        f"input hash {run.attrs['input_hash']}",
        "both input files and all settings are in it: attributes canal_file, day_file, resolved_settings",
    )
    return "\n".join(paragraph(fact, width, hanging="    ") for fact in facts)
