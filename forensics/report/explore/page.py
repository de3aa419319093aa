"""The explorer: one offline page to look at a whole run in."""

from __future__ import annotations

import json
from functools import cache
from importlib import util
from pathlib import Path

from forensics.errors import legible
from forensics.report.describe import version
from forensics.report.explore.content import content_of, episode_words
from forensics.report.render import environment
from forensics.report.scene import Scene
from forensics.report.words import count

# Bokeh's own scripts, as the package brings them: the plots are put together in the page, by its script.
SCRIPTS = ("bokeh.min.js", "bokeh-api.min.js")


def render_explorer(scene: Scene) -> str:
    """Render the explorer of one run.

    Parameters
    ----------
    scene : Scene
        Findings and how to show them.

    Returns
    -------
    str
        One HTML document with all it needs inside; the same findings give the same bytes.
    """
    content, pack = content_of(scene)
    findings, show = scene.findings, scene.show
    episodes = findings.episodes
    return environment().get_template("explore.html.j2").render(
        case=findings.case,
        zone=content["zone"],
        show=show,
        content=as_script_data(content),
        data=pack.text(),
        scripts=plot_scripts(),
        episodes=[(e.id, episode_words(show, e)) for e in episodes],
        counted=count(len(episodes), "episode"),
        versions=f"tallyback {version('tallyback')}, bokeh {version('bokeh')}",
    )


def as_script_data(content: object) -> str:
    r"""Write content as JSON that can't end the element it stands in.

    Examples
    --------
    >>> print(as_script_data({"well": "</script>"}))
    {"well":"\u003c/script\u003e"}
    """
    text = json.dumps(content, ensure_ascii=False, allow_nan=False, separators=(",", ":"))
    text = legible(text)
    for sign in "<>&\u2028\u2029":
        text = text.replace(sign, f"\\u{ord(sign):04x}")
    return text


@cache
def plot_scripts() -> tuple[str, ...]:
    """Read the plotting library's scripts, without loading the library."""
    spec = util.find_spec("bokeh")
    assert spec is not None, "bokeh is a dependency"
    assert spec.origin is not None
    folder = Path(spec.origin).parent / "server" / "static" / "js"
    return tuple((folder / name).read_text(encoding="utf-8") for name in SCRIPTS)
