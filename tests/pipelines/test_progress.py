"""Progress is for people who watch, timings for everybody."""

import gc
import io

import pytest

from pipelines.progress import Progress


class Terminal(io.StringIO):
    """A stream that says it is a terminal."""

    def isatty(self):
        """Say so."""
        return True


def test_shows_stages_on_a_terminal():
    stream = Terminal()
    with Progress(stream=stream).stage("reading", "reading the logs"):
        pass
    assert stream.getvalue().startswith("reading the logs ...\rreading the logs 0.")
    assert stream.getvalue().endswith("\n")


@pytest.mark.parametrize(("quiet", "stream"), [(True, Terminal()), (False, io.StringIO())])
def test_shows_nothing_when_quiet_or_not_a_terminal(quiet, stream):
    with Progress(quiet, stream).stage("reading", "reading the logs"):
        pass
    assert stream.getvalue() == ""


def test_says_where_it_stopped():
    stream = Terminal()
    progress = Progress(stream=stream)
    with pytest.raises(KeyError), progress.stage("replay", "replaying"):
        raise KeyError
    assert "replaying stopped" in stream.getvalue()
    assert progress.timings["replay"] >= 0.0


def test_times_of_one_name_add_up():
    progress = Progress(quiet=True)
    for _ in range(2):
        with progress.stage("figures", "drawing"):
            pass
    assert list(progress.timings) == ["figures"]


def fail_to_load(progress):
    with progress.loading("loading"):
        assert not gc.isenabled()
        raise ImportError


@pytest.mark.parametrize("working", [True, False])
def test_loading_puts_the_collector_back_as_it_was(working):
    before = gc.isenabled()
    progress = Progress(quiet=True)
    try:
        (gc.enable if working else gc.disable)()
        with pytest.raises(ImportError):
            fail_to_load(progress)
        assert gc.isenabled() is working
    finally:
        (gc.enable if before else gc.disable)()
    assert progress.timings["imports"] >= 0.0
