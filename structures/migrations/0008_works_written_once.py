from django.db import migrations

from structures.migrations._triggers import kept, lasting, unchanging


class Migration(migrations.Migration):
    dependencies = [("structures", "0007_works")]

    operations = [
        unchanging(
            "structures_entry",
            "structures_photo",
            "structures_paper",
            "structures_question",
            "structures_answer",
            "structures_move",
            "structures_foundlevel",
            "structures_trenchlook",
            "structures_daysheet",
            "structures_incident",
            "structures_claytest",
            "structures_verdict",
            "structures_complaint",
            "structures_complaintanswer",
        ),
        kept("structures_entry", "structures_incident"),
        lasting("structures_strip", "covered_unseen"),
    ]
