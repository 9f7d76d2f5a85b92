"""The stage: views that show a `Drawing` and say what is pointed at, picked and dragged.

`make_view` makes one for each picture.
"""

from mirrorlab.desktop.stage.gl_setup import why_no_opengl
from mirrorlab.desktop.stage.view import StageView, make_view

__all__ = ["StageView", "make_view", "why_no_opengl"]
