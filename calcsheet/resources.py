"""Where templates and the demonstration job lie: in the installed package, or beside it in a checkout."""

from __future__ import annotations

from pathlib import Path

_PACKAGE = Path(__file__).parent
TEMPLATES = "templates"
DEMO = "example_notebooks/alder-quay"


def folder(name: str) -> Path:
    """Path of a folder that is shipped with the package.

    Parameters
    ----------
    name : str
        Its path in the repository, such as "templates".

    Raises
    ------
    FileNotFoundError
        The installation lacks it.
    """
    for root in (_PACKAGE / "shipped", _PACKAGE.parent):
        if (root / name).is_dir():
            return root / name
    raise FileNotFoundError(f"{name} is missing from this installation of calcsheet; install it again")


def templates() -> tuple[str, ...]:
    """Names of the notebook templates."""
    return tuple(sorted(path.name for path in folder(TEMPLATES).iterdir() if (path / "job.toml").is_file()))
