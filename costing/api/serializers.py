"""Rates and estimates as the API tells them; money is text with its two decimals."""

from __future__ import annotations

from rest_framework import serializers

from costing.queries.estimates import stale_reasons
from structures.api.serializers import FindingSerializer
from structures.life.stages import STAGES
from structures.queries.settings import counted_in


def _money(**more):
    return serializers.DecimalField(max_digits=15, decimal_places=2, **more)


class RateSerializer(serializers.Serializer):
    item = serializers.CharField()
    from_m = serializers.FloatField(allow_null=True, help_text="depth at which the lift begins")
    unit = serializers.CharField()
    rate = _money()
    description = serializers.CharField()


class RateScheduleSerializer(serializers.Serializer):
    id = serializers.IntegerField()
    code = serializers.CharField()
    version = serializers.IntegerField()
    district = serializers.CharField(source="district.code")
    currency = serializers.CharField()
    valid_from = serializers.DateField(allow_null=True)
    valid_to = serializers.DateField(allow_null=True)
    contingency_percent = serializers.DecimalField(max_digits=8, decimal_places=4)
    overhead_percent = serializers.DecimalField(max_digits=8, decimal_places=4)
    rate_count = serializers.IntegerField()
    digest = serializers.CharField()
    upload = serializers.IntegerField(source="upload_id")
    by = serializers.CharField(source="by.username")
    at = serializers.DateTimeField()


class RateScheduleWholeSerializer(RateScheduleSerializer):
    rates = RateSerializer(many=True)
    findings = FindingSerializer(many=True)


class RateChangeSerializer(serializers.Serializer):
    """One item that differs from the schedule before; null where it is not there."""

    item = serializers.CharField()
    from_m = serializers.FloatField(allow_null=True)
    kind = serializers.ChoiceField(["added", "changed", "removed"])
    before = serializers.DecimalField(max_digits=18, decimal_places=4, allow_null=True)
    after = serializers.DecimalField(max_digits=18, decimal_places=4, allow_null=True)


class SchedulePreviewSerializer(serializers.Serializer):
    """A schedule as it would be kept, and what it changes."""

    preview = serializers.BooleanField(default=True)
    code = serializers.CharField(source="schedule.schedule_id")
    follows = serializers.IntegerField(source="newest.version", default=None, allow_null=True)
    digest = serializers.CharField()
    changes = RateChangeSerializer(many=True)
    findings = FindingSerializer(source="schedule.findings", many=True)


class EstimateLineSerializer(serializers.Serializer):
    item = serializers.CharField()
    from_m = serializers.FloatField(allow_null=True)
    to_m = serializers.FloatField(allow_null=True)
    unit = serializers.CharField()
    quantity = _money(allow_null=True)
    rate = _money(allow_null=True)
    amount = _money(allow_null=True)


class EstimateSerializer(serializers.Serializer):
    id = serializers.IntegerField()
    site = serializers.CharField(source="site.code")
    version = serializers.IntegerField()
    survey = serializers.IntegerField(source="survey_id")
    rate_schedule = serializers.IntegerField(source="schedule_id")
    rock_line = serializers.IntegerField(source="rock_line.version", default=None, allow_null=True)
    design = serializers.IntegerField(source="design_id")
    run = serializers.UUIDField(source="run_id")
    method = serializers.CharField()
    input_digest = serializers.CharField()
    complete = serializers.BooleanField()
    currency = serializers.CharField()
    subtotal = _money()
    contingency = _money()
    overhead = _money()
    total = _money()
    sanction = _money(allow_null=True)
    total_p10 = _money(source="p10", allow_null=True)
    total_p50 = _money(source="p50", allow_null=True)
    total_p90 = _money(source="p90", allow_null=True)
    open_flank_share = serializers.FloatField(allow_null=True)
    stale = serializers.SerializerMethodField(help_text="why it is out of date; empty: it is not")
    asked_by = serializers.CharField(source="asked_by.username", default=None, allow_null=True)
    frozen_at = serializers.DateTimeField()

    def get_stale(self, estimate) -> list[str]:
        # A page of a list is judged by what counts in its districts, each asked once.
        district = estimate.site.watershed.district
        asked = self.context.setdefault("counted", {})
        if district.pk not in asked:
            asked[district.pk] = counted_in(district)
        return list(stale_reasons(estimate, asked[district.pk]))


class EstimateWholeSerializer(EstimateSerializer):
    lines = EstimateLineSerializer(many=True)
    wall = serializers.DictField(help_text="settings of the wall that differ from the defaults")
    result = serializers.DictField(help_text="the keys of `appraise --json`")


class EstimateRequestSerializer(serializers.Serializer):
    """What to price; what is left out is the newest there is."""

    survey = serializers.IntegerField(required=False, allow_null=True)
    rate_schedule = serializers.IntegerField(required=False, allow_null=True)
    wall = serializers.DictField(
        required=False, help_text="settings of the wall, before those of survey and district"
    )
    id = serializers.UUIDField(
        required=False, help_text="the write's own name, see Idempotency-Key"
    )


class MissingLineSerializer(serializers.Serializer):
    """One thing that is missing for the next stage, and who can supply it."""

    name = serializers.CharField()
    what = serializers.CharField()
    who = serializers.CharField()


class MissingSerializer(serializers.Serializer):
    """Where a structure stands and what it waits for; nothing of it is a sum of money."""

    site = serializers.CharField()
    stage = serializers.ChoiceField(list(STAGES))
    since = serializers.DateField()
    next_stage = serializers.ChoiceField(list(STAGES), allow_null=True)
    may_go_on = serializers.BooleanField(help_text="whether your role makes the next move")
    missing = MissingLineSerializer(many=True)


class BillLineSerializer(serializers.Serializer):
    line = serializers.IntegerField(source="order")
    entry = serializers.CharField(source="entry.code")
    item = serializers.CharField(source="entry.item")
    from_m = serializers.FloatField(source="entry.from_m", allow_null=True)
    to_m = serializers.FloatField(source="entry.to_m", allow_null=True)
    unit = serializers.CharField(source="entry.unit")
    quantity = _money()
    rate = _money()
    amount = _money()
    state = serializers.CharField(help_text="open, paid, held or refused")
    why = serializers.CharField()
    findings = FindingSerializer(many=True)


class BillSerializer(serializers.Serializer):
    id = serializers.IntegerField()
    site = serializers.CharField(source="structure.site.code")
    number = serializers.CharField()
    kind = serializers.CharField(help_text="running or final")
    state = serializers.CharField(help_text="draft, handed in or decided")
    billed_on = serializers.DateField()
    currency = serializers.CharField()
    claimed = _money(help_text="sum of the lines as billed")
    held = _money(source="held_sum", allow_null=True, help_text="of held lines; null: none is")
    payable = _money(allow_null=True, help_text="null until it is decided")
    account = serializers.JSONField(allow_null=True, help_text="the amount payable step by step")
    contract = serializers.CharField(source="contract.number", default=None, allow_null=True)
    made_by = serializers.CharField(source="made_by.username")
    decided_by = serializers.CharField(source="decided_by.username", default=None, allow_null=True)
    paid_on = serializers.DateField(allow_null=True)


class BillWholeSerializer(BillSerializer):
    lines = BillLineSerializer(many=True)


class BillLineGivenSerializer(serializers.Serializer):
    line = serializers.IntegerField(min_value=1)
    entry = serializers.CharField(max_length=60)
    quantity = _money()
    rate = _money()
    amount = _money(required=False, allow_null=True)


class BillGivenSerializer(serializers.Serializer):
    """A draft; without lines it takes every accepted entry that no bill has."""

    site = serializers.CharField()
    number = serializers.CharField(max_length=60)
    kind = serializers.ChoiceField(["running", "final"], default="running")
    billed_on = serializers.DateField()
    lines = BillLineGivenSerializer(many=True, required=False)
    total = _money(required=False, allow_null=True)
    id = serializers.UUIDField(
        required=False, help_text="the write's own name, see Idempotency-Key"
    )
