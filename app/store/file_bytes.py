"""Uploaded bytes as they came: one file per SHA-256, written aside, then moved into place."""

from __future__ import annotations

import hashlib
import os
import re
import secrets
import shutil
import time
from collections.abc import Collection, Iterable, Iterator
from contextlib import contextmanager, suppress
from pathlib import Path

from app.store.errors import DamagedFileError, StoreError, sentence_for

_ASIDE = "incoming-"
_ASIDE_SECONDS = 3600.0  # a younger one may belong to a writer that is still at it
_FINGERPRINT = re.compile(r"[0-9a-f]{64}")


class FileBytes:
    """The folder of uploaded bytes.

    Which bytes are still needed is known to the database; whoever moves bytes into place or
    sweeps holds its write lock, so the two never cross.

    Parameters
    ----------
    folder : Path
        Made with rights for its owner alone when it is not there.
    """

    def __init__(self, folder: Path) -> None:
        self._folder = folder
        with _plain_errors():
            folder.mkdir(mode=0o700, exist_ok=True)
            folder.chmod(0o700)

    def path(self, fingerprint: str) -> Path:
        """Return where the bytes with this SHA-256 (64 hexadecimal digits) are."""
        return self._folder / fingerprint

    def read(self, fingerprint: str) -> bytes:
        """Return the bytes with this SHA-256.

        Raises
        ------
        DamagedFileError
            When they are gone or no longer have this SHA-256.
        """
        try:
            data = self.path(fingerprint).read_bytes()
        except FileNotFoundError as error:
            raise DamagedFileError(
                "The uploaded file is missing from the data folder: upload it again."
            ) from error
        except OSError as error:
            raise StoreError(sentence_for(error)) from error
        if hashlib.sha256(data).hexdigest() != fingerprint:
            raise DamagedFileError(
                "The uploaded file was altered in the data folder, so no figures are made from it: "
                "upload it again."
            )
        return data

    @contextmanager
    def set_aside(self, data: bytes) -> Iterator[Path]:
        """Write the bytes safely beside their place; gone at the end unless moved there.

        Raises
        ------
        StoreError
            When the disk is full or may not be written to.
        """
        aside = self._aside()
        try:
            with _plain_errors():
                _write(aside, data)
            yield aside
        finally:
            self.release([aside])

    def move_into_place(self, aside: Path, fingerprint: str) -> None:
        """Give bytes set aside their name; under the database's write lock."""
        with _plain_errors():
            aside.replace(self.path(fingerprint))
            _make_lasting(self._folder)

    def hold(self, fingerprints: Iterable[str]) -> dict[str, Path]:
        """Give bytes a second name that stays until released; under the write lock.

        Returns
        -------
        dict of str to Path
            By fingerprint; bytes that are missing are left out.
        """
        held: dict[str, Path] = {}
        with _plain_errors():
            for fingerprint in fingerprints:
                with suppress(FileNotFoundError):
                    held[fingerprint] = _second_name(self.path(fingerprint), self._aside())
        return held

    def release(self, held: Iterable[Path]) -> None:
        """Remove the second names."""
        for path in held:
            with suppress(OSError):
                path.unlink(missing_ok=True)

    def discard(self, fingerprints: Iterable[str]) -> None:
        """Remove bytes that nobody needs any more; under the write lock."""
        with _plain_errors():
            for fingerprint in fingerprints:
                self.path(fingerprint).unlink(missing_ok=True)

    def sweep(self, needed: Collection[str]) -> None:
        """Remove what killed writers left behind; under the write lock.

        Parameters
        ----------
        needed : collection of str
            Fingerprints to keep.
        """
        oldest = time.time() - _ASIDE_SECONDS
        with _plain_errors():
            for path in list(self._folder.iterdir()):
                if path.name.startswith(_ASIDE):
                    _remove_if_older(path, oldest)
                elif _FINGERPRINT.fullmatch(path.name) and path.name not in needed:
                    path.unlink(missing_ok=True)

    def _aside(self) -> Path:
        return self._folder / f"{_ASIDE}{secrets.token_hex(8)}"


def fingerprint_of(data: bytes) -> str:
    """Return the SHA-256 of the bytes, 64 hexadecimal digits."""
    return hashlib.sha256(data).hexdigest()


def create_private(path: Path) -> int:
    """Create a file that its owner alone may read; return its open handle for writing."""
    return os.open(path, os.O_WRONLY | os.O_CREAT | os.O_EXCL | getattr(os, "O_BINARY", 0), 0o600)


def _write(path: Path, data: bytes) -> None:
    with os.fdopen(create_private(path), "wb") as stream:
        stream.write(data)
        stream.flush()
        os.fsync(stream.fileno())


def _second_name(path: Path, name: Path) -> Path:
    try:
        name.hardlink_to(path)
        os.utime(name)  # young, so that no sweep takes it for a leftover
    except FileNotFoundError:
        raise
    except OSError:  # a file system without second names
        shutil.copyfile(path, name)
        name.chmod(0o600)
    return name


def _make_lasting(folder: Path) -> None:
    if os.name == "nt":  # a folder cannot be opened there, and needs no sync
        return
    handle = os.open(folder, os.O_RDONLY)
    try:
        os.fsync(handle)
    finally:
        os.close(handle)


def _remove_if_older(path: Path, oldest: float) -> None:
    with suppress(FileNotFoundError):
        if path.stat().st_mtime < oldest:
            path.unlink()


@contextmanager
def _plain_errors() -> Iterator[None]:
    try:
        yield
    except OSError as error:
        raise StoreError(sentence_for(error)) from error
