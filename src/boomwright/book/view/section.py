"""The 3D view as a piece of a page: markup, data, style and script in one, nothing from outside."""

from __future__ import annotations

import base64
import json
from collections.abc import Mapping
from html import escape
from importlib.resources import files
from typing import Any

import numpy as np

from boomwright.book.axes import Axis
from boomwright.book.pictures import ABOVE
from boomwright.book.poses import Pose
from boomwright.book.scene import GROUPS, Scene, ScenePart

STYLE, LICENSE, LIBRARY = "view.css", "three.LICENSE.txt", "three.min.js"
VIEWER = ("view.js", "measure.js", "hands.js")
"""Files beside this one."""

WIDE_FROM = 1 << 16
"""Corner numbers from here on need 32 bits."""

PLACE_DIGITS = 6

HELP = (
    "Drag to turn; with Shift, the right button or two fingers to move. Click the picture first, then the wheel or two "
    "fingers zoom. Keys: arrows turn, Shift and arrows move, + and - zoom, 0 goes back. Click two rods to measure."
)
NO_WEBGL = "This browser has no WebGL, so the picture above stands still. Distances can be read here all the same."
NO_SCRIPT = "With scripts switched off the picture stands still."


def view_html(scene: Scene, still_png: bytes) -> str:
    """The view as an HTML fragment that works inside any page, opened from disk, with no network.

    scene      what it shows
    still_png  the picture that stands there on paper, without scripts and without WebGL

    Every class name begins with `bw-view`; colours are the page's where it has those named at the top of view.css.
    """
    title = escape(scene.title)
    still = base64.b64encode(still_png).decode("ascii")
    return "\n".join(
        (
            f'<section class="bw-view" aria-label="The antenna in three dimensions: {title}">',
            f"<style>\n{_file(STYLE)}</style>",
            '<div class="bw-view-stage">',
            f'<img class="bw-view-still" alt="{title}: the whole antenna" src="data:image/png;base64,{still}">',
            f'<canvas tabindex="0" role="application" aria-label="{title}: turn it with the arrow keys"></canvas>',
            '<svg aria-hidden="true"></svg>',
            "</div>",
            f"<noscript><p>{NO_SCRIPT}</p></noscript>",
            '<div class="bw-view-desk" hidden>',
            f'<p class="bw-view-fallback">{NO_WEBGL}</p>',
            _pose_buttons(scene),
            _measure(scene),
            _part_switches(scene),
            f'<p class="bw-view-help">{HELP}</p>',
            "</div>",
            f'<script type="application/json">{scene_json(scene)}</script>',
            f"<script>\n{_script()}</script>",
            "</section>",
            "",
        )
    )


def _file(name: str) -> str:
    return files(__package__).joinpath(name).read_text("utf-8")


def _script() -> str:
    """Library and viewer in one function, so that no name of theirs is seen outside; the licence goes with them."""
    viewer = "\n".join(_file(name) for name in VIEWER)
    return (
        f"/*! three.js\n{_file(LICENSE).rstrip()}\n*/\n"
        f'(function () {{\n"use strict";\n{_file(LIBRARY)}\n{viewer}\nstart();\n}})();\n'
    )


def scene_json(scene: Scene) -> str:
    """The scene as JSON that may stand in a script element: no `<`, `>` or `&` in it."""
    document = {
        "title": scene.title,
        "view": [ABOVE.azimuth_deg, ABOVE.elevation_deg],
        "size": [round(max(float(np.ptp(part.vertices_mm, axis=0).max()) for part in scene.parts), 3)],
        "parts": [_part_json(part) for part in scene.parts],
        "axes": [_axis_json(axis) for axis in scene.axes],
        "poses": [_pose_json(pose) for pose in scene.poses],
    }
    text = json.dumps(document, ensure_ascii=True, allow_nan=False, separators=(",", ":"))
    return text.replace("<", "\\u003c").replace(">", "\\u003e").replace("&", "\\u0026")


def _part_json(part: ScenePart) -> Mapping[str, Any]:
    wide = len(part.grid) >= WIDE_FROM
    numbers = "<u4" if wide else "<u2"
    return {
        "key": part.key,
        "colour": list(part.colour),
        "scale": [float(f"{value:.9g}") for value in part.scale_mm],
        "offset": [float(f"{value:.9g}") for value in part.offset_mm],
        "vertices": _base64(part.grid.astype("<i2")),
        "triangles": _base64(part.triangles.astype(numbers)),
        "edges": _base64(part.edges.astype(numbers)),
        "wide": wide,
    }


def _base64(values: Any) -> str:
    return base64.b64encode(values.tobytes()).decode("ascii")


def _axis_json(axis: Axis) -> Mapping[str, Any]:
    words = {"key": axis.key, "label": axis.label, "part": axis.part}
    return words | {"start": list(axis.start), "end": list(axis.end), "radius": axis.radius_mm}


def _pose_json(pose: Pose) -> Mapping[str, Any]:
    places = {
        key: [round(float(value), PLACE_DIGITS) + 0.0 for value in place[:3].ravel()]
        for key, place in pose.places.items()
    }
    return {"key": pose.key, "shows": list(pose.shows), "places": places, "true": pose.true}


def _pose_buttons(scene: Scene) -> str:
    buttons = [
        f'<button type="button" data-pose="{escape(pose.key)}" aria-pressed="false">{escape(pose.label)}</button>'
        for pose in scene.poses
    ]
    return f'<div class="bw-view-poses" role="group" aria-label="Show the antenna">{"".join(buttons)}</div>'


def _part_switches(scene: Scene) -> str:
    fieldsets = []
    for group in GROUPS:
        parts = [part for part in scene.parts if part.group == group]
        if parts:
            switches = "".join(_switch(part) for part in parts)
            fieldsets.append(f"<fieldset><legend>{escape(group)}</legend>{switches}</fieldset>")
    return f'<div class="bw-view-parts">{"".join(fieldsets)}</div>'


def _switch(part: ScenePart) -> str:
    red, green, blue = (round(255 * channel) for channel in part.colour)
    swatch = f'<span class="bw-view-swatch" style="background:rgb({red},{green},{blue})"></span>'
    box = f'<input type="checkbox" data-part="{escape(part.key)}">'
    return f"<label>{box}{swatch}<span>{escape(part.label)}</span></label>"


def _measure(scene: Scene) -> str:
    options = "".join(f'<option value="{escape(axis.key)}">{escape(axis.label)}</option>' for axis in scene.axes)
    choices = [
        f'<select aria-label="{words}"><option value="">choose an axis</option>{options}</select>'
        for words in ("Distance from this axis", "to this axis")
    ]
    return (
        f'<div><p class="bw-view-measure">Distance from {choices[0]} to {choices[1]}</p>'
        '<p class="bw-view-answer" role="status" aria-live="polite">'
        "Choose two axes here, or click two rods in the picture.</p></div>"
    )
