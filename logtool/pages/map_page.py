"""One HTML file that shows who was heard from where, and that asks nothing of any network."""

from __future__ import annotations

import html
import re
from importlib import resources
from typing import TYPE_CHECKING, Any

from logtool.pages.map_data import MapData
from logtool.pages.map_json import map_payload, script_safe_json

if TYPE_CHECKING:
    import folium

SCRIPTS = (
    "map_geo.js",
    "map_ramp.js",
    "map_model.js",
    "map_choice.js",
    "map_paint.js",
    "map_layer.js",
    "map_panel.js",
    "map_controls.js",
    "map.js",
)
POLICY = (
    "default-src 'none'; script-src 'unsafe-inline'; style-src 'unsafe-inline'; img-src data:; "
    "base-uri 'none'; form-action 'none'"
)
MAP_OPTIONS: dict[str, Any] = {
    "zoom_start": 1,
    "min_zoom": 0,
    "max_zoom": 8,
    "zoom_snap": 0.1,
    "zoom_delta": 0.5,
    "zoom_animation": False,
    "attribution_control": False,
}


def map_html(data: MapData) -> str:
    """Return the map page as one HTML text, with data, land, script and style inside; distances are in km.

    Meridians and parallels are straight and evenly spaced, so both poles are on the map; shapes are right
    at 40 degrees north and south only. Distances and bearings are those given in `data`, never measured on
    the map. The same data gives the same text, byte for byte.

    Parameters
    ----------
    data
        What to show; see `MapData` for the tables and their units.

    Returns
    -------
    str
        The page; write it as UTF-8.

    Raises
    ------
    LogtoolError
        Columns of the counts or totals differ in length.
    ValueError
        A number in the data is not finite.
    """
    page: str = _figure(data).render()
    return page.replace("<html>", '<html lang="en">', 1)


def _figure(data: MapData) -> folium.Figure:
    import folium
    from branca.element import Element, MacroElement
    from jinja2 import Template

    class PlainMap(folium.Map):
        """Folium's map without its header, which sizes the map and forbids zooming the page."""

        def render(self, **kwargs: Any) -> str:
            super().render(**kwargs)  # type: ignore[no-untyped-call]
            del figure.header._children[self.get_name()]
            return ""  # folium's own parts put themselves into the figure

    class Markup(Element):
        """Text put into the page as it is; `Element(text)` would run `{{ }}` of a log as a template."""

        def __init__(self, markup: str) -> None:
            super().__init__()
            self.markup = markup
            self._template = Template("{{ this.markup }}\n")

    class Start(MacroElement):
        """The line that hands folium's map to the page's script."""

        _template = Template(
            "{% macro script(this, kwargs) %}logtoolMap.start({{ this._parent.get_name() }});{% endmacro %}"
        )

    figure = folium.Figure(title=html.escape(data.title.encode("utf-8", "replace").decode("utf-8")))
    for part in _head():
        figure.header.add_child(Markup(part))
    figure.html.add_child(Markup(_asset("map_body.html")))
    figure.html.add_child(Markup(_block("logtool-map-data", script_safe_json(map_payload(data)))))
    figure.html.add_child(Markup(_block("logtool-map-land", _asset("land.json").strip())))
    chart = PlainMap(location=(0, 0), tiles=None, crs="TrueAt40", **MAP_OPTIONS)
    chart._id = "1"  # folium takes a random one, which would differ from run to run
    chart.default_js, chart.default_css = [], []  # links to other hosts
    chart.add_child(Start())  # type: ignore[no-untyped-call]
    chart.add_to(figure)
    return figure


def _head() -> tuple[str, ...]:
    own_script = "\n".join(_asset(name) for name in SCRIPTS)
    return (
        f'<meta http-equiv="Content-Security-Policy" content="{POLICY}" />',
        '<meta name="viewport" content="width=device-width, initial-scale=1" />',
        '<meta name="color-scheme" content="light dark" />',
        '<link rel="icon" href="data:," />',
        f"<style>{_leaflet_style()}\n{_asset('map.css')}</style>",
        f"<!--\n{_asset('leaflet_licence.txt')}-->",
        f"<script>{_leaflet_script()}</script>",
        f'<script>"use strict";\nconst logtoolMap = {{}};\n{own_script}</script>',
    )


def _block(name: str, safe_json: str) -> str:
    return f'<script type="application/json" id="{name}">{safe_json}</script>'


def _asset(name: str) -> str:
    return resources.files("logtool.pages").joinpath("assets", name).read_text("utf-8")


def _leaflet(name: str) -> str:
    return resources.files("xstatic.pkg.leaflet").joinpath("data", name).read_text("utf-8")


def _leaflet_script() -> str:
    """Return Leaflet's script without the address of its source map, which browsers' tools ask for."""
    return re.sub(r"//# sourceMappingURL=\S+", "", _leaflet("leaflet.js"))


def _leaflet_style() -> str:
    """Return Leaflet's style without its pictures, of which this page shows none."""
    return re.sub(r"url\(images/[^)]*\)", "none", _leaflet("leaflet.css"))
