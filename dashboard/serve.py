"""A book in; its dashboard served to this machine alone, out."""

from __future__ import annotations

import os
import socket
from pathlib import Path

from streamlit.starlette import App

from dashboard.look import theme_options
from fleet.errors import BookError

BOOK_VARIABLE = "WEARBOOK_BOOK"
ADDRESS = "127.0.0.1"
_SCRIPT = Path(__file__).with_name("app.py")


def serve(book: str | Path, port: int = 8501, open_browser: bool = True) -> None:
    """Serve the dashboard of one book until the process is ended.

    Parameters
    ----------
    book : str or Path
        Path of the book, or its database URL.
    port : int
        Port on 127.0.0.1; other machines cannot reach it.
    open_browser : bool
        Whether to open the page in the browser of this machine.

    Raises
    ------
    BookError
        If something else listens on the port.
    """
    _check_free(port)
    os.environ[BOOK_VARIABLE] = str(book)
    App(_SCRIPT).run(config=server_options(port, open_browser))


def server_options(port: int, open_browser: bool) -> dict[str, object]:
    """Everything the server must be told: it listens to this machine alone, phones nobody and shows no code."""
    return {
        "server.address": ADDRESS,
        "server.port": port,
        "server.headless": not open_browser,
        "server.showEmailPrompt": False,
        "server.fileWatcherType": "none",
        "server.allowedHosts": [ADDRESS, "localhost"],
        "server.maxUploadSize": 1,
        "browser.serverAddress": ADDRESS,
        "browser.gatherUsageStats": False,
        "client.toolbarMode": "minimal",
        "client.showErrorDetails": "none",
        "client.showErrorLinks": False,
        **theme_options(),
    }


def _check_free(port: int) -> None:
    with socket.socket() as probe:
        probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        try:
            probe.bind((ADDRESS, port))
        except OSError as problem:
            raise BookError(f"Port {port} is in use; choose another one with --port.") from problem
