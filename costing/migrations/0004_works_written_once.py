from django.db import migrations

from structures.migrations._triggers import unchanging


class Migration(migrations.Migration):
    dependencies = [("costing", "0003_works"), ("structures", "0008_works_written_once")]

    operations = [
        unchanging(
            "costing_sanction",
            "costing_contract",
            "costing_contractrate",
            "costing_forecast",
            "costing_linedecision",
        )
    ]
