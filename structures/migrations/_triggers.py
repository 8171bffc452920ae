"""Triggers that keep written-once rows as they were, for both databases.

SQLite empties its tables row by row when tests flush them, so there only changes are refused,
except for the register; PostgreSQL refuses deletion as well.
"""

from django.db import migrations

SQLITE = """
CREATE TRIGGER {table}_unchanging BEFORE UPDATE ON {table}
BEGIN SELECT RAISE(ABORT, '{table} is written once'); END
"""
POSTGRES = """
CREATE TRIGGER {table}_unchanging BEFORE UPDATE OR DELETE ON {table}
FOR EACH ROW EXECUTE FUNCTION written_once()
"""
POSTGRES_FUNCTION = """
CREATE OR REPLACE FUNCTION written_once() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN RAISE EXCEPTION '% is written once', TG_TABLE_NAME USING ERRCODE = 'restrict_violation'; END $$
"""
SQLITE_KEPT = """
CREATE TRIGGER {table}_kept BEFORE DELETE ON {table}
BEGIN SELECT RAISE(ABORT, '{table} is kept for good'); END
"""
# A mark that, once set, is never taken off.
SQLITE_LASTING = """
CREATE TRIGGER {table}_{column}_lasts BEFORE UPDATE OF {column} ON {table}
WHEN OLD.{column} AND NOT NEW.{column}
BEGIN SELECT RAISE(ABORT, '{column} of {table} lasts'); END
"""
POSTGRES_LASTING = """
CREATE TRIGGER {table}_{column}_lasts BEFORE UPDATE OF {column} ON {table}
FOR EACH ROW WHEN (OLD.{column} AND NOT NEW.{column}) EXECUTE FUNCTION written_once()
"""


def unchanging(*tables):
    """An operation that puts the trigger on tables and takes it off again."""

    def forwards(apps, schema_editor):
        postgres = schema_editor.connection.vendor == "postgresql"
        if postgres:
            schema_editor.execute(POSTGRES_FUNCTION, None)
        for table in tables:
            schema_editor.execute((POSTGRES if postgres else SQLITE).format(table=table), None)

    def backwards(apps, schema_editor):
        on = " ON {table}" if schema_editor.connection.vendor == "postgresql" else ""
        for table in tables:
            schema_editor.execute(f"DROP TRIGGER {table}_unchanging{on}".format(table=table), None)

    return migrations.RunPython(forwards, backwards)


def kept(*tables):
    """An operation that refuses deletion on SQLite too; tests drop it to empty their tables."""

    def forwards(apps, schema_editor):
        if schema_editor.connection.vendor == "sqlite":
            for table in tables:
                schema_editor.execute(SQLITE_KEPT.format(table=table), None)

    def backwards(apps, schema_editor):
        if schema_editor.connection.vendor == "sqlite":
            for table in tables:
                schema_editor.execute(f"DROP TRIGGER {table}_kept", None)

    return migrations.RunPython(forwards, backwards)


def lasting(table, column):
    """An operation that keeps a mark of a table once it is set."""

    def forwards(apps, schema_editor):
        postgres = schema_editor.connection.vendor == "postgresql"
        if postgres:
            schema_editor.execute(POSTGRES_FUNCTION, None)
        made = (POSTGRES_LASTING if postgres else SQLITE_LASTING).format(table=table, column=column)
        schema_editor.execute(made, None)

    def backwards(apps, schema_editor):
        on = f" ON {table}" if schema_editor.connection.vendor == "postgresql" else ""
        schema_editor.execute(f"DROP TRIGGER {table}_{column}_lasts{on}", None)

    return migrations.RunPython(forwards, backwards)
