"""Nothing that is written runs over the edge of its sheet, with long names and far times too."""

import matplotlib.text
import pytest
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from toeline.report.figures import plans
from toeline.report.figures.catalogue import FIGURES, run_pictures

LONG = "The check below the old brick aqueduct "


def cut_texts(figure: Figure) -> list[str]:
    """Texts that do not stand wholly on the sheet."""
    canvas = FigureCanvasAgg(figure)
    canvas.draw()
    sheet, renderer = figure.bbox.padded(1.0), canvas.get_renderer()
    cut = []
    for text in figure.findobj(matplotlib.text.Text):
        box = text.get_window_extent(renderer)
        is_shown = text.get_visible() and text.get_text() and (text.axes is None or is_in_range(text))
        if is_shown and not (sheet.contains(box.x0, box.y0) and sheet.contains(box.x1, box.y1)):
            cut.append(text.get_text())
    return cut


def is_in_range(text: matplotlib.text.Text) -> bool:
    """Tick labels beyond the ends of an axis stay invisible."""
    axis = next((a for a in (text.axes.xaxis, text.axes.yaxis) if text in a.get_ticklabels(which="both")), None)
    if axis is None:
        return True
    place = text.get_position()[axis is text.axes.yaxis]
    low, high = sorted(axis.get_view_interval())
    return low <= place <= high


@pytest.fixture
def run(invented_run):
    names = {
        "gate": [f"{LONG}1", f"{LONG}2"], "pool": [f"{LONG}A", f"{LONG}B"], "offtake": [f"{LONG}x"],
        "escape": [f"{LONG}y"],
    }  # fmt: skip
    about = {"canal": LONG * 2, "title": LONG * 3}
    return invented_run("stopped: " + LONG * 3, about).assign_coords(names)


@pytest.mark.parametrize("name", FIGURES)
def test_no_text_of_a_figure_is_cut(name, run, metric):
    for picture in run_pictures(run, metric, [name]):
        assert cut_texts(picture.figure) == []


def test_no_text_of_the_comparing_figure_is_cut(run, metric):
    (picture,) = plans.pictures([run, run], metric)
    assert cut_texts(picture.figure) == []
