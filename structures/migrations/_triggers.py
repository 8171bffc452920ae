"""Triggers that keep written-once rows as they were, for both databases.

SQLite empties its tables row by row when tests flush them, so there only changes are refused;
PostgreSQL refuses deletion as well.
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
