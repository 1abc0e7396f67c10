"""What must be there before Qt is started: Qt itself, its system libraries, a screen.

Qt ends the whole process when its platform plugin cannot be loaded, and names the wrong library; so everything is tried
here first. This module loads without PySide6.
"""

import ctypes
import os
import sys
from collections.abc import Mapping

BASE_PACKAGES = ("libglib2.0-0", "libgl1", "libegl1", "libxkbcommon0", "libdbus-1-3", "libfontconfig1")
"""Debian packages that PySide6 needs to be imported at all; measured on bare Debian 12 and 13."""

_XCB_LIBRARIES = {
    "libxcb-cursor.so.0": "libxcb-cursor0",
    "libxkbcommon-x11.so.0": "libxkbcommon-x11-0",
    "libxcb-icccm.so.4": "libxcb-icccm4",
    "libxcb-keysyms.so.1": "libxcb-keysyms1",
    "libxcb-shape.so.0": "libxcb-shape0",
}
_WITHOUT_SCREEN = ("offscreen", "minimal")
_NEED_DISPLAY = ("", "xcb", "wayland", "wayland-egl")


def has_screen() -> bool:
    """Whether a window could be seen: false on Linux without a display, and where Qt is told to draw nowhere."""
    if _platform() in _WITHOUT_SCREEN:
        return False
    if not sys.platform.startswith("linux"):
        return True
    if _platform() not in _NEED_DISPLAY:
        return True  # drawn straight to the machine's own screen, or to a viewer
    return bool(os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY"))


def check_platform() -> str | None:
    """Why the window cannot be opened, with what to install; None when it can."""
    try:
        import PySide6.QtWidgets  # noqa: F401
    except ImportError as error:
        return explain_import(error, sys.platform)
    if _platform() in _WITHOUT_SCREEN:
        return None
    if not has_screen():
        return (
            "There is no screen to open the window on: neither DISPLAY nor WAYLAND_DISPLAY is set. Start the program"
            " in a desktop session, or use its commands, which need no screen: clinicalc --help."
        )
    missing = missing_packages(_XCB_LIBRARIES) if _uses_xcb() else ()
    if missing:
        return f"The window needs system libraries that are missing. Install them with: {_apt(missing)}"
    _listen_to_qt()
    return None


def _platform() -> str:
    return os.environ.get("QT_QPA_PLATFORM", "").partition(":")[0].partition(";")[0].strip().lower()


def _uses_xcb() -> bool:
    if not sys.platform.startswith("linux"):
        return False
    return _platform() == "xcb" or (not _platform() and not os.environ.get("WAYLAND_DISPLAY"))


def missing_packages(libraries: Mapping[str, str]) -> tuple[str, ...]:
    """The packages of those libraries (package by library name) that this system cannot load."""
    missing = []
    for library, package in libraries.items():
        try:
            ctypes.CDLL(library)
        except OSError:
            missing.append(package)
    return tuple(missing)


def explain_import(error: ImportError, system: str) -> str:
    """Why PySide6 could not be imported on this system (as `sys.platform` names it), with what to install."""
    if isinstance(error, ModuleNotFoundError):
        return "The window needs PySide6, which is not installed. Install clinicalc again with its dependencies."
    if not system.startswith("linux"):
        return f"The window cannot be opened: {error}. Install clinicalc again with its dependencies."
    packages = (*BASE_PACKAGES, *(() if _platform() in _WITHOUT_SCREEN else missing_packages(_XCB_LIBRARIES)))
    return f"The window needs system libraries that are missing ({error}). Install them with: {_apt(packages)}"


def _apt(packages: tuple[str, ...]) -> str:
    return f"sudo apt-get install {' '.join(packages)}"


def _listen_to_qt() -> None:
    """Say in words what Qt says last before it ends the process; everything else goes to the error stream."""
    from PySide6.QtCore import QMessageLogContext, QtMsgType, qInstallMessageHandler

    def tell(kind: QtMsgType, context: QMessageLogContext, message: str) -> None:
        if "platform plugin" in message.lower():
            packages = (*BASE_PACKAGES, *_XCB_LIBRARIES.values())
            message = f"The window cannot be opened ({message.strip()}). Try: {_apt(packages)}"
        sys.stderr.write(f"clinicalc: {message}\n")

    qInstallMessageHandler(tell)
