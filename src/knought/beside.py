"""Files that a study names: in the study file's own folder, and nowhere else unless allowed."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path, PureWindowsPath

from knought.errors import InputError, Problem
from knought.files import is_device_name

__all__ = ["Beside", "shown_name"]


@dataclass(frozen=True)
class Beside:
    """Finds what a study file names.

    Parameters
    ----------
    study
        The study file.
    allow_outside
        Whether a file may lie outside its folder, or be reached by an absolute path or a link that
        leads out of it. A study file that came from someone else then reads whatever it names.
    """

    study: Path
    allow_outside: bool = False

    def find(self, file: str, key: str) -> Path:
        """Return where a file is.

        Parameters
        ----------
        file
            The path, as the study file gives it.
        key
            The key that gives it, for the message.

        Raises
        ------
        InputError
            If it is no path on every system, is no ordinary file, or lies outside the folder.
        """
        if not file.strip() or "\0" in file:
            raise self._refusal(file, key, "is no path", "name the file by its relative path")
        folder = self.study.parent.resolve()
        # A path of Windows is one here too: the same study must not read more on another system.
        foreign = PureWindowsPath(file)
        outside = bool(foreign.drive or foreign.root) or any(map(is_device_name, foreign.parts))
        try:
            target = (folder / file).resolve()
            special = target.exists() and not target.is_file()
        except (OSError, RuntimeError) as error:
            raise self._refusal(file, key, "cannot be reached", "check the path") from error
        if not self.allow_outside and (outside or not target.is_relative_to(folder)):
            raise self._refusal(
                file,
                key,
                "the file lies outside the folder of the study file",
                "put it beside the study file and name it by its relative path; or, if you trust "
                "the study file, allow it (--allow-outside)",
            )
        if special:
            raise self._refusal(file, key, "is no ordinary file", "name a file with a table")
        return target

    def _refusal(self, file: str, key: str, what: str, remedy: str) -> InputError:
        return InputError(Problem(what, remedy, read=file, file=self.study.name, column=key))


def shown_name(file: str) -> str:
    """Return how a record names a file: as the study does, without folders of a machine."""
    path = PureWindowsPath(file)
    return path.name if path.drive or path.root or ".." in path.parts else file
