"""The reference page of everything a run file holds, written from the registry.

python -m toeline.results.reference_page > docs/output_reference.md
"""

from toeline.results.provenance import ATTRIBUTES
from toeline.results.variables import VARIABLES, Variable, end_state, fixed, growing

_SECTIONS = (
    ("Along `time`: every output step", growing("time")),
    ("Along `profile_time`: the long profile", growing("profile_time")),
    ("Along `order`: what became of the orders", growing("order")),
    ("Fixed: the canal and its parts", fixed()),
    ("At the end of the run: what the next day starts from", end_state()),
)

_INTRODUCTION = """\
# What a run file holds

Written from `results/variables.py` by `python -m toeline.results.reference_page`; a test holds it in step.

One flat NetCDF-4 file after the CF conventions, opened with `xarray.open_dataset("run.nc")` or, with rows that a
killed run never wrote left out, `toeline.results.dataset.open_run("run.nc")`. Everything is in SI units. Values along
`time` and `profile_time` hold at the instant; none is a mean over the step. Times are UTC. Missing values are NaN.
Output steps stand at whole multiples of `every` (or `events_every`), long profiles of `profiles_every`, from the start
on: the last one is at the end of the period where they divide it, else before it, and the rest is stepped without being
seen. Values that change at once are the new ones at that instant; but a change at the very end of the period belongs to
the next day, and the last values are those before it. What the next day starts from is always of the very end.
While a run goes on, and after one that stopped early, its file is named `run.nc.partial`; attribute `outcome` says how
it ended. `run.nc.checkpoint` beside it is what `toeline run --resume` needs to go on. A killed run may also leave
`run.nc.writing` or `run.nc.copying`: they are of no use, and the next run of that name removes them. A file in which
an attribute or a variable is missing or is not as below, because another version or a hand wrote it, is refused with
its name, what was found and what is expected. No state in any file is safe to enter.
"""


def reference_page() -> str:
    """The page, in Markdown."""
    parts = [_INTRODUCTION, _attributes_table()]
    parts += [f"## {title}\n\n{_table(variables)}" for title, variables in _SECTIONS]
    return "\n".join(parts) + "\n" + _flags_table()


def _attributes_table() -> str:
    rows = "".join(f"| `{name}` | {meaning} |\n" for name, meaning in ATTRIBUTES.items())
    return "## Global attributes\n\n| attribute | meaning |\n|---|---|\n" + rows


def _table(variables: list[Variable]) -> str:
    head = "| variable | dimensions | unit | stored as | meaning |\n|---|---|---|---|---|\n"
    return head + "".join(_row(variable) for variable in variables)


def _row(variable: Variable) -> str:
    meaning = f"{variable.long_name}; {variable.comment}" if variable.comment else variable.long_name
    unit = variable.unit or ("flag" if variable.dtype == "i1" else "")
    return f"| `{variable.name}` | {', '.join(variable.dimensions)} | {unit} | {variable.dtype} | {meaning} |\n"


def _flags_table() -> str:
    flagged = [variable for variable in VARIABLES.values() if variable.flags]
    head = "## Meanings of flags\n\nThe values are 0, 1, 2, … in this order.\n\n| variable | meanings |\n|---|---|\n"
    return head + "".join(f"| `{variable.name}` | {', '.join(variable.flags)} |\n" for variable in flagged)


if __name__ == "__main__":
    print(reference_page(), end="")
