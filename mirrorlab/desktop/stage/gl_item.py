"""One item that draws a whole drawing with OpenGL, and takes another drawing by filling its buffers anew."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray
from OpenGL import GL
from OpenGL.GL import shaders
from pyqtgraph.opengl.GLGraphicsItem import GLGraphicsItem
from PySide6.QtGui import QOpenGLContext
from PySide6.QtOpenGL import QOpenGLBuffer

from mirrorlab.desktop.stage import shaders as glsl
from mirrorlab.desktop.stage.gl_arrays import (
    FACE_TYPE,
    LINE_TYPE,
    FaceArrays,
    face_arrays,
    line_arrays,
)
from mirrorlab.drawing.camera import Camera
from mirrorlab.drawing.hiding import LINE_LIFT, dimmed_alpha
from mirrorlab.drawing.look import Look, rgb
from mirrorlab.drawing.prepared import Prepared
from mirrorlab.drawing.strokes import Strokes

FACE_FIELDS = (("a_position", "position"), ("a_normal", "normal"), ("a_color", "color"), ("a_ball", "ball"))
LINE_FIELDS = (
    ("a_start", "start"),
    ("a_end", "end"),
    ("a_corner", "corner"),
    ("a_width", "width"),
    ("a_color", "color"),
)


class _Buffer:
    """A buffer on the card that is filled when it is next drawn."""

    def __init__(self, kind: QOpenGLBuffer.Type) -> None:
        self._buffer = QOpenGLBuffer(kind)
        self._data: NDArray[Any] = np.zeros(0, dtype=np.uint8)
        self._sent = True
        self.count = 0

    def put(self, data: NDArray[Any]) -> None:
        self._data = np.ascontiguousarray(data)
        self._sent = False
        self.count = data.size

    def bind(self) -> None:
        if not self._buffer.isCreated():
            self._buffer.create()
            self._buffer.setUsagePattern(QOpenGLBuffer.UsagePattern.DynamicDraw)
        self._buffer.bind()
        if not self._sent:
            size = self._data.nbytes
            if self._buffer.size() != size:
                self._buffer.allocate(self._data.tobytes(), size)
            elif size:
                self._buffer.write(0, self._data.tobytes(), size)
            self._sent = True

    def release(self) -> None:
        self._buffer.release()


class _Program:
    """A linked shader program with its fields at fixed places."""

    def __init__(self, vertex: str, fragment: str, fields: tuple[tuple[str, str], ...]) -> None:
        context = QOpenGLContext.currentContext()
        shape = context.format().version()
        one, other = glsl.sources(vertex, fragment, (shape[0], shape[1]), context.isOpenGLES())
        self.number = GL.glCreateProgram()
        for kind, source in ((GL.GL_VERTEX_SHADER, one), (GL.GL_FRAGMENT_SHADER, other)):
            shader = shaders.compileShader(source, kind)
            GL.glAttachShader(self.number, shader)
            GL.glDeleteShader(shader)
        for place, (name, _) in enumerate(fields):
            GL.glBindAttribLocation(self.number, place, name)
        GL.glLinkProgram(self.number)
        if not GL.glGetProgramiv(self.number, GL.GL_LINK_STATUS):
            msg = f"a shader could not be linked: {GL.glGetProgramInfoLog(self.number)!r}"
            raise RuntimeError(msg)
        self._places: dict[str, int] = {}

    def set(self, name: str, *values: float) -> None:
        place = self._place(name)
        (GL.glUniform1f, GL.glUniform2f, GL.glUniform3f)[len(values) - 1](place, *values)

    def set_matrix(self, name: str, matrix: NDArray[np.float64]) -> None:
        GL.glUniformMatrix4fv(self._place(name), 1, True, np.ascontiguousarray(matrix, dtype=np.float32))

    def _place(self, name: str) -> int:
        if name not in self._places:
            self._places[name] = GL.glGetUniformLocation(self.number, name)
        return self._places[name]


class DrawingItem(GLGraphicsItem):
    """Faces and lines of a drawing. Solid faces first, then sheer ones from back to front, then lines.

    Attributes
    ----------
    matrices : tuple of 2 ndarrays, shape (4, 4)
        From the drawing to the eye, and from there to the picture.
    """

    def __init__(self) -> None:
        super().__init__()
        self._faces_of: tuple[Any, ...] | None = None
        self._faces: FaceArrays | None = None
        self._prepared: Prepared | None = None
        self._look: Look | None = None
        self._camera: Camera | None = None
        self.matrices = (np.eye(4), np.eye(4))
        self._ordered_for: Camera | None = None
        vertex, index = QOpenGLBuffer.Type.VertexBuffer, QOpenGLBuffer.Type.IndexBuffer
        self._face_data, self._ball, self._solid, self._sheer = (
            _Buffer(kind) for kind in (vertex, index, index, index)
        )
        self._line_data, self._line_index = _Buffer(vertex), _Buffer(index)
        self._face_program: _Program | None = None
        self._line_program: _Program | None = None

    def set_drawing(self, prepared: Prepared, look: Look, cut: Strokes) -> None:
        """Fill the buffers with another drawing; faces that are still the same are not sent again."""
        faces = prepared.drawing.faces
        same = (
            look is self._look
            and self._faces_of is not None
            and len(faces) == len(self._faces_of)
            and all(a is b for a, b in zip(faces, self._faces_of, strict=True))
        )
        if not same:
            self._faces = face_arrays(prepared, look)
            self._face_data.put(self._faces.data)
            self._ball.put(self._faces.ball)
            self._solid.put(self._faces.solid)
            self._ordered_for = None
        data, index = line_arrays(prepared.drawing.lines, cut, look, prepared.bare)
        self._line_data.put(data)
        self._line_index.put(index)
        self._faces_of, self._prepared, self._look = faces, prepared, look
        self.update()

    def set_camera(self, camera: Camera) -> None:
        """Look from elsewhere."""
        self._camera = camera
        self.update()

    def initializeGL(self) -> None:
        self._face_program = _Program(glsl.FACE_VERTEX, glsl.FACE_FRAGMENT, FACE_FIELDS)
        self._line_program = _Program(glsl.LINE_VERTEX, glsl.LINE_FRAGMENT, LINE_FIELDS)

    def paint(self) -> None:
        if self._prepared is None or self._camera is None or self._faces is None:
            return
        GL.glEnable(GL.GL_DEPTH_TEST)
        GL.glDepthFunc(GL.GL_LEQUAL)
        GL.glDepthMask(True)
        GL.glDisable(GL.GL_BLEND)
        GL.glDisable(GL.GL_CULL_FACE)
        GL.glBlendFuncSeparate(
            GL.GL_SRC_ALPHA, GL.GL_ONE_MINUS_SRC_ALPHA, GL.GL_ONE, GL.GL_ONE_MINUS_SRC_ALPHA
        )
        self._paint_solid()
        GL.glEnable(GL.GL_BLEND)
        GL.glDepthMask(False)
        self._paint_sheer()
        self._paint_lines()
        GL.glDepthMask(True)
        GL.glDepthFunc(GL.GL_LESS)
        GL.glDisable(GL.GL_BLEND)
        GL.glDisable(GL.GL_DEPTH_TEST)

    def _size(self) -> tuple[float, float]:
        view = self.view()
        return float(max(1, view.width())), float(max(1, view.height()))

    def _use(self, program: _Program) -> None:
        view, projection = self.matrices
        GL.glUseProgram(program.number)
        program.set_matrix("u_view", view)
        program.set_matrix("u_projection", projection)

    def _use_faces(self) -> None:
        look, program = self._look, self._face_program
        self._use(program)
        program.set("u_shade", *rgb(look.shade))
        program.set("u_sheen", *rgb(look.sheen))
        program.set("u_shade_alpha", look.shade_alpha)
        program.set("u_sheen_alpha", look.sheen_alpha)
        program.set("u_parallel", 0.0 if self._camera.field > 0 else 1.0)

    def _paint_solid(self) -> None:
        if not (self._ball.count or self._solid.count):
            return
        self._use_faces()
        GL.glEnable(GL.GL_POLYGON_OFFSET_FILL)  # lines on a face stand before it
        GL.glPolygonOffset(1.0, 1.0)
        GL.glEnable(GL.GL_CULL_FACE)  # of the ball, only the near side is seen
        _draw(self._face_data, FACE_TYPE, FACE_FIELDS, self._ball)
        GL.glDisable(GL.GL_CULL_FACE)
        _draw(self._face_data, FACE_TYPE, FACE_FIELDS, self._solid)
        GL.glDisable(GL.GL_POLYGON_OFFSET_FILL)
        GL.glUseProgram(0)

    def _paint_sheer(self) -> None:
        faces = self._faces
        if not len(faces.sheer):
            return
        if self._ordered_for != self._camera:
            away = np.linalg.norm(faces.middles - self._camera.eye, axis=1)
            self._sheer.put(faces.sheer[np.argsort(-away, kind="stable")])
            self._ordered_for = self._camera
        self._use_faces()
        _draw(self._face_data, FACE_TYPE, FACE_FIELDS, self._sheer)
        GL.glUseProgram(0)

    def _paint_lines(self) -> None:
        if not self._line_index.count:
            return
        look, program, view = self._look, self._line_program, self.view()
        dots = view.devicePixelRatioF()
        width, height = self._size()
        self._use(program)
        program.set("u_half", 0.5 * width * dots, 0.5 * height * dots)
        program.set("u_lift", LINE_LIFT * self._camera.radius)
        program.set("u_scale", dots)
        program.set("u_far_alpha", look.far_alpha if self._prepared.bare else 1.0)
        program.set("u_depth", self._camera.distance if self._camera.field > 0 else 0.0)
        if not (self._prepared.has_ball or self._prepared.bare):
            GL.glDepthFunc(GL.GL_GREATER)
            program.set("u_alpha", dimmed_alpha(self._prepared, look))
            _draw(self._line_data, LINE_TYPE, LINE_FIELDS, self._line_index)
            GL.glDepthFunc(GL.GL_LEQUAL)
        program.set("u_alpha", 1.0)
        _draw(self._line_data, LINE_TYPE, LINE_FIELDS, self._line_index)
        GL.glUseProgram(0)


def _draw(data: _Buffer, kind: np.dtype, fields: tuple[tuple[str, str], ...], index: _Buffer) -> None:
    import ctypes

    if not index.count:
        return
    data.bind()
    for place, (_, name) in enumerate(fields):
        field, offset = kind.fields[name][:2]
        width = int(np.prod(field.shape)) if field.shape else 1
        GL.glEnableVertexAttribArray(place)
        GL.glVertexAttribPointer(
            place, width, GL.GL_FLOAT, False, kind.itemsize, ctypes.c_void_p(int(offset))
        )
    data.release()
    index.bind()
    GL.glDrawElements(GL.GL_TRIANGLES, index.count, GL.GL_UNSIGNED_INT, None)
    index.release()
    for place in range(len(fields)):
        GL.glDisableVertexAttribArray(place)
