import costing.validators
import django.db.models.deletion
import django.db.models.expressions
import structures.validators
from decimal import Decimal
from django.conf import settings
from django.db import migrations, models


class Migration(migrations.Migration):

    initial = True

    dependencies = [
        ('structures', '0003_records'),
        ('structures', '__first__'),
    ]

    operations = [
        migrations.CreateModel(
            name='RateSchedule',
            fields=[
                ('id', models.BigAutoField(auto_created=True, primary_key=True, serialize=False, verbose_name='ID')),
                ('district', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='schedules', to='structures.district')),
                ('code', models.CharField(max_length=120)),
                ('version', models.PositiveIntegerField()),
                ('currency', models.CharField(max_length=3, validators=[structures.validators.validate_currency])),
                ('valid_from', models.DateField(null=True)),
                ('valid_to', models.DateField(null=True)),
                ('contingency_percent', models.DecimalField(decimal_places=4, max_digits=8)),
                ('overhead_percent', models.DecimalField(decimal_places=4, max_digits=8)),
                ('upload', models.OneToOneField(on_delete=django.db.models.deletion.PROTECT, related_name='rate_schedule', to='structures.upload')),
                ('digest', models.CharField(max_length=64)),
                ('findings', models.JSONField(default=list)),
                ('notes', models.JSONField(default=list)),
                ('by', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='+', to=settings.AUTH_USER_MODEL)),
                ('at', models.DateTimeField(auto_now_add=True)),
            ],
            options={
                'ordering': ('district_id', 'code', '-version'),
                'constraints': [models.UniqueConstraint(fields=('district', 'code', 'version'), name='schedule_version_once'), models.CheckConstraint(condition=models.Q(('version__gte', 1)), name='schedule_counts_from_one'), models.CheckConstraint(condition=models.Q(('valid_from__isnull', True), ('valid_to__isnull', True), ('valid_to__gte', models.F('valid_from')), _connector='OR'), name='schedule_ends_after_it_begins'), models.CheckConstraint(condition=models.Q(('contingency_percent__range', (0.0, 15.0)), ('overhead_percent__range', (0.0, 10.0))), name='schedule_percentages_accepted')],
            },
        ),
        migrations.CreateModel(
            name='Rate',
            fields=[
                ('id', models.BigAutoField(auto_created=True, primary_key=True, serialize=False, verbose_name='ID')),
                ('schedule', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='rates', to='costing.rateschedule')),
                ('order', models.PositiveSmallIntegerField()),
                ('item', models.CharField(max_length=40)),
                ('from_m', models.FloatField(null=True)),
                ('unit', models.CharField(max_length=10)),
                ('rate', models.DecimalField(decimal_places=2, max_digits=14, validators=[costing.validators.validate_rate])),
                ('description', models.TextField(blank=True)),
            ],
            options={
                'ordering': ('schedule_id', 'order'),
                'constraints': [models.UniqueConstraint(fields=('schedule', 'item', 'from_m'), name='rate_once_a_lift'), models.UniqueConstraint(condition=models.Q(('from_m__isnull', True)), fields=('schedule', 'item'), name='rate_once_an_item'), models.CheckConstraint(condition=models.Q(('rate__gt', 0)), name='rate_is_above_zero'), models.CheckConstraint(condition=models.Q(('from_m__isnull', True), ('from_m__gte', 0.0), _connector='OR'), name='rate_lift_goes_down')],
            },
        ),
        migrations.CreateModel(
            name='RateComponent',
            fields=[
                ('id', models.BigAutoField(auto_created=True, primary_key=True, serialize=False, verbose_name='ID')),
                ('rate', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='components', to='costing.rate')),
                ('order', models.PositiveSmallIntegerField()),
                ('words', models.CharField(max_length=200)),
                ('kind', models.CharField(choices=[('labour', 'labour'), ('material', 'material'), ('machinery', 'machinery'), ('carriage', 'carriage'), ('water', 'water')], max_length=10)),
                ('quantity', models.DecimalField(decimal_places=6, max_digits=14)),
                ('unit_rate', models.DecimalField(decimal_places=2, max_digits=14)),
            ],
            options={
                'ordering': ('rate_id', 'order'),
                'constraints': [models.UniqueConstraint(fields=('rate', 'order'), name='rate_component_once'), models.CheckConstraint(condition=models.Q(('kind__in', ('labour', 'material', 'machinery', 'carriage', 'water')), ('quantity__gte', 0), ('unit_rate__gte', 0)), name='rate_component_can_be')],
            },
        ),
        migrations.CreateModel(
            name='Estimate',
            fields=[
                ('id', models.BigAutoField(auto_created=True, primary_key=True, serialize=False, verbose_name='ID')),
                ('site', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='estimates', to='structures.site')),
                ('version', models.PositiveIntegerField()),
                ('design', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='estimates', to='structures.design')),
                ('survey', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='estimates', to='structures.survey')),
                ('rock_line', models.ForeignKey(null=True, on_delete=django.db.models.deletion.PROTECT, related_name='estimates', to='structures.rockline')),
                ('wall', models.JSONField(default=dict)),
                ('schedule', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='estimates', to='costing.rateschedule')),
                ('run', models.OneToOneField(on_delete=django.db.models.deletion.PROTECT, related_name='estimate', to='structures.run')),
                ('input_digest', models.CharField(max_length=64)),
                ('method', models.CharField(max_length=40)),
                ('complete', models.BooleanField()),
                ('currency', models.CharField(max_length=3)),
                ('subtotal', models.DecimalField(decimal_places=2, max_digits=15)),
                ('contingency', models.DecimalField(decimal_places=2, max_digits=15)),
                ('overhead', models.DecimalField(decimal_places=2, max_digits=15)),
                ('total', models.DecimalField(decimal_places=2, max_digits=15)),
                ('sanction', models.DecimalField(decimal_places=2, max_digits=15, null=True)),
                ('p10', models.DecimalField(decimal_places=2, max_digits=15, null=True)),
                ('p50', models.DecimalField(decimal_places=2, max_digits=15, null=True)),
                ('p90', models.DecimalField(decimal_places=2, max_digits=15, null=True)),
                ('open_flank_share', models.FloatField(null=True)),
                ('result', models.JSONField()),
                ('asked_by', models.ForeignKey(null=True, on_delete=django.db.models.deletion.PROTECT, related_name='+', to=settings.AUTH_USER_MODEL)),
                ('frozen_at', models.DateTimeField(auto_now_add=True)),
            ],
            options={
                'ordering': ('site_id', '-version'),
                'constraints': [models.UniqueConstraint(fields=('site', 'version'), name='estimate_version_once'), models.CheckConstraint(condition=models.Q(('contingency__gte', 0), ('overhead__gte', 0), ('subtotal__gte', 0)), name='estimate_sums_not_negative'), models.CheckConstraint(condition=models.Q(('total__gt', django.db.models.expressions.CombinedExpression(django.db.models.expressions.CombinedExpression(django.db.models.expressions.CombinedExpression(models.F('subtotal'), '+', models.F('contingency')), '+', models.F('overhead')), '-', models.Value(Decimal('0.005')))), ('total__lt', django.db.models.expressions.CombinedExpression(django.db.models.expressions.CombinedExpression(django.db.models.expressions.CombinedExpression(models.F('subtotal'), '+', models.F('contingency')), '+', models.F('overhead')), '+', models.Value(Decimal('0.005'))))), name='estimate_adds_up'), models.CheckConstraint(condition=models.Q(('sanction__isnull', True), ('sanction__gte', models.F('total')), _connector='OR'), name='estimate_sanction_covers_total'), models.CheckConstraint(condition=models.Q(models.Q(('complete', True), _negated=True), ('sanction__isnull', False), _connector='OR'), name='estimate_complete_has_sanction'), models.CheckConstraint(condition=models.Q(models.Q(('p10__isnull', True), ('p50__isnull', True), ('p90__isnull', True)), models.Q(('p10__isnull', False), ('p10__lte', models.F('p50')), ('p50__isnull', False), ('p50__lte', models.F('p90')), ('p90__isnull', False)), _connector='OR'), name='estimate_percentiles_in_order'), models.CheckConstraint(condition=models.Q(('open_flank_share__isnull', True), ('open_flank_share__range', (0.0, 1.0)), _connector='OR'), name='estimate_open_share_is_a_share')],
            },
        ),
        migrations.CreateModel(
            name='EstimateLine',
            fields=[
                ('id', models.BigAutoField(auto_created=True, primary_key=True, serialize=False, verbose_name='ID')),
                ('estimate', models.ForeignKey(on_delete=django.db.models.deletion.PROTECT, related_name='lines', to='costing.estimate')),
                ('order', models.PositiveSmallIntegerField()),
                ('item', models.CharField(max_length=40)),
                ('from_m', models.FloatField(null=True)),
                ('to_m', models.FloatField(null=True)),
                ('unit', models.CharField(max_length=10)),
                ('quantity', models.DecimalField(decimal_places=2, max_digits=15, null=True)),
                ('rate', models.DecimalField(decimal_places=2, max_digits=14, null=True)),
                ('amount', models.DecimalField(decimal_places=2, max_digits=15, null=True)),
            ],
            options={
                'ordering': ('estimate_id', 'order'),
                'constraints': [models.UniqueConstraint(fields=('estimate', 'order'), name='estimate_line_once'), models.CheckConstraint(condition=models.Q(models.Q(('amount__isnull', False), ('quantity__isnull', False), ('rate__isnull', False)), models.Q(('amount__isnull', True), models.Q(('quantity__isnull', True), ('rate__isnull', True), _connector='OR')), _connector='OR'), name='estimate_line_known_or_not'), models.CheckConstraint(condition=models.Q(('rate__isnull', True), ('rate__gt', 0), _connector='OR'), name='estimate_line_rate_positive'), models.CheckConstraint(condition=models.Q(('from_m__isnull', True), models.Q(('to_m__gt', models.F('from_m')), ('to_m__isnull', False)), _connector='OR'), name='estimate_line_goes_down')],
            },
        ),
    ]
