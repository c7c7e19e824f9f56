"""Bring a database up to the tables of this version."""

from __future__ import annotations

from pathlib import Path

from alembic import command
from alembic.config import Config

PROJECT = Path(__file__).resolve().parents[2]


def config(url: str) -> Config:
    """Alembic's settings, from ``pyproject.toml``, for one database."""
    made = Config(toml_file=PROJECT / "pyproject.toml")
    made.attributes["url"] = url
    return made


def upgrade(url: str) -> None:
    """Run what migrations are missing."""
    command.upgrade(config(url), "head")
