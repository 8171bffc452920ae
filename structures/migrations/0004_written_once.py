from django.db import migrations

from structures.migrations._triggers import unchanging


class Migration(migrations.Migration):
    dependencies = [("structures", "0003_records")]

    operations = [
        unchanging(
            "structures_survey",
            "structures_groundpoint",
            "structures_rocktest",
            "structures_probe",
            "structures_sounding",
            "structures_soundingreading",
            "structures_refractionline",
            "structures_refractionpick",
            "structures_rockline",
        )
    ]
