"""Opening the SQLite file: is it a catalog, which version, who may write, and errors in words.

Imports nothing but the standard library, so that showing one motor starts fast.
"""

import os
import sqlite3
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from ...schema.errors import MotorfolioError

APPLICATION_ID = 0x4D746F66  # "Mtof": tells a catalog from any other SQLite file
VERSION = 4
"""The layout of tables that this program writes; kept in the file as ``user_version``."""

BUSY_SECONDS = 60.0
CACHE_KIBIBYTES = 64 * 1024
"""Large enough that an import of some ten thousand motors locks readers out only to commit."""


class CatalogError(MotorfolioError):
    """The catalog can't be opened, read or written."""


@contextmanager
def in_words(path: Path) -> Iterator[None]:
    """Turn SQLite's errors into one sentence about this catalog."""
    try:
        yield
    except sqlite3.Error as error:
        raise CatalogError(_sentence(path, error)) from error


def _sentence(path: Path, error: sqlite3.Error) -> str:
    code = (getattr(error, "sqlite_errorcode", None) or 0) & 0xFF
    if code in (sqlite3.SQLITE_BUSY, sqlite3.SQLITE_LOCKED):
        return (
            f"The catalog {path} is being written by another program and stayed locked for "
            f"{BUSY_SECONDS:.0f} s; nothing was changed, try again when that is done."
        )
    if code in (sqlite3.SQLITE_READONLY, sqlite3.SQLITE_PERM):
        return (
            f"The catalog {path} can't be written (read-only file or folder); nothing was changed."
        )
    if code == sqlite3.SQLITE_FULL:
        return f"The disk is full: nothing was changed in {path}; make room and try again."
    if code in (sqlite3.SQLITE_NOTADB, sqlite3.SQLITE_CORRUPT):
        return (
            f"{path} is not a readable catalog ({error}); name another file with --catalog or "
            "restore it from a copy."
        )
    if code == sqlite3.SQLITE_CANTOPEN:
        return f"The catalog {path} can't be opened; look at its path and permissions."
    if code == sqlite3.SQLITE_IOERR:
        return f"Reading or writing {path} failed ({error}); nothing was changed."
    return f"The catalog {path} can't be used: {error}."


def connect(path: Path, *, create: bool = False, write: bool = False) -> sqlite3.Connection:
    """A connection to an existing catalog, or to a new, still empty file if ``create``.

    Readers get a connection that can't change anything. Raises CatalogError when there is no
    file, when it is no catalog, or when a newer program wrote it; a foreign file is not touched.
    """
    if path.is_dir():
        raise CatalogError(f"{path} is a folder; name the catalog's file with --catalog.")
    if not create and (not path.exists() or path.stat().st_size == 0):
        raise CatalogError(
            f"There is no catalog {path}; read a table into it first: motorfolio import FILE."
        )
    if create and not path.parent.is_dir():
        raise CatalogError(f"The folder of the catalog {path} does not exist; make it first.")
    with in_words(path):
        connection = _open(path, create=create, write=write)
    try:
        with in_words(path):
            _identify(connection, path)
            if write:
                connection.execute(f"PRAGMA cache_size = -{CACHE_KIBIBYTES}")
            else:
                connection.execute("PRAGMA query_only = 1")
    except BaseException:
        connection.close()
        raise
    return connection


def _open(path: Path, *, create: bool, write: bool) -> sqlite3.Connection:
    # a reader too opens for writing where it may: a journal that a killed writer left behind can
    # be rolled back only by someone who may write
    writable = os.access(path, os.W_OK) or (create and not path.exists())
    if write and not writable:
        raise CatalogError(
            f"The catalog {path} can't be written (read-only file); nothing was changed."
        )
    mode = "rwc" if create else "rw" if writable else "ro"
    return sqlite3.connect(
        f"{path.absolute().as_uri()}?mode={mode}",
        uri=True,
        timeout=BUSY_SECONDS,
        isolation_level=None,
    )


def _identify(connection: sqlite3.Connection, path: Path) -> None:
    application = connection.execute("PRAGMA application_id").fetchone()[0]
    version = connection.execute("PRAGMA user_version").fetchone()[0]
    if application == APPLICATION_ID:
        if version > VERSION:
            raise CatalogError(
                f"The catalog {path} was written by a newer motorfolio (layout {version}, this "
                f"program knows {VERSION}); update motorfolio to use it."
            )
        return
    tables = connection.execute("SELECT count(*) FROM sqlite_master").fetchone()[0]
    if application != 0 or version != 0 or tables:
        raise CatalogError(
            f"{path} is an SQLite file of another program, not a catalog; name another file with "
            "--catalog."
        )


def layout_version(connection: sqlite3.Connection) -> int:
    """The layout that the file has (0: still empty)."""
    return connection.execute("PRAGMA user_version").fetchone()[0]
