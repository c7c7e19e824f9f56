"""Alembic's entry: the URL comes from the caller (see app/store/migrate.py) or from PLATEWRIGHT_DATABASE_URL."""

import os

from alembic import context
from sqlmodel import SQLModel

from app.store import tables  # noqa: F401 - registers the tables in SQLModel.metadata
from app.store.engine import make_engine

url = context.config.attributes.get("url") or os.environ.get(
    "PLATEWRIGHT_DATABASE_URL", "sqlite:///.data/meet.db"
)
engine = make_engine(url)
with engine.execution_options(writes=True).connect() as connection:
    context.configure(connection=connection, target_metadata=SQLModel.metadata, render_as_batch=True)
    with context.begin_transaction():
        context.run_migrations()
    connection.commit()
engine.dispose()
