from django.db import migrations

from structures.migrations._triggers import unchanging


class Migration(migrations.Migration):
    dependencies = [("costing", "0001_schedules_and_estimates")]

    operations = [
        unchanging(
            "costing_rateschedule",
            "costing_rate",
            "costing_ratecomponent",
            "costing_estimate",
            "costing_estimateline",
        )
    ]
