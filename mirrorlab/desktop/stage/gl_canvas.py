"""A surface out of sight that OpenGL draws on, read back as an image."""

from __future__ import annotations

from OpenGL import GL
from PySide6.QtCore import QObject, QSize
from PySide6.QtGui import QImage, QOffscreenSurface, QOpenGLContext
from PySide6.QtOpenGL import QOpenGLFramebufferObject, QOpenGLFramebufferObjectFormat

from mirrorlab.desktop.stage.gl_setup import surface_format


class Canvas:
    """A context with a framebuffer of its own.

    An OpenGL widget would make Qt put the whole window together with OpenGL at every paint. Where OpenGL runs on
    the processor that takes longer than the picture itself; and such a widget makes its window flash when it
    comes into it, and loses its context when it goes to another.

    Parameters
    ----------
    samples : int
        A pixel; 0 for one.
    parent : QObject
        The context goes when it does, and takes along what lies on the card.
    """

    def __init__(self, samples: int, parent: QObject) -> None:
        self._samples = samples
        self.context = QOpenGLContext(parent)
        self.context.setFormat(surface_format())
        self._surface = QOffscreenSurface(None, parent)
        self._frame: QOpenGLFramebufferObject | None = None
        if self.context.create():
            self._surface.setFormat(self.context.format())
            self._surface.create()

    def make_current(self) -> bool:
        """Make the context current; whether it could be."""
        return self._surface.isValid() and self.context.makeCurrent(self._surface)

    def done_current(self) -> None:
        """Let the context go."""
        self.context.doneCurrent()

    def lead(self, size: QSize) -> None:
        """Lead what OpenGL draws to a framebuffer of `size` pixels; the context must be current."""
        if self._frame is None or self._frame.size() != size:
            wanted = QOpenGLFramebufferObjectFormat()
            wanted.setAttachment(QOpenGLFramebufferObject.Attachment.CombinedDepthStencil)
            wanted.setSamples(self._samples)
            self._frame = None  # the old one goes before the new one comes
            self._frame = QOpenGLFramebufferObject(size, wanted)
        self._frame.bind()
        GL.glViewport(0, 0, size.width(), size.height())

    def image(self) -> QImage:
        """What was drawn, its first row at the top; the context must be current."""
        assert self._frame is not None
        return self._frame.toImage()
