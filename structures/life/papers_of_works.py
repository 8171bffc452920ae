"""Papers of the works and after: halt, restart, closing off, restored bed, hand-over, verdict.

Source: the office's practice, the table of stages, "the four verdicts" and the rules VR.
"""

from __future__ import annotations

from typing import Final

from structures.life.paper import YES_NO_UNKNOWN, Paper, PaperField
from structures.life.people import DISTRICT, ENGINEER, FIELD, PROGRAMME
from structures.life.verdict import VERDICTS

CAUSES: Final = ("rock deeper", "water", "safety", "objection", "rains", "other")

HALT: Final = Paper(
    "halt",
    "halt",
    "Why does the work stop, and is the trench safe?",
    (FIELD, ENGINEER, DISTRICT, PROGRAMME),
    (
        PaperField("cause", "Cause", "choice", required=True, choices=CAUSES),
        PaperField("what", "What happened", "long text", required=True),
        PaperField("open", "What is open", "long text", required=True, help="Strips, or nothing."),
        PaperField("made_safe", "How it is made safe", "long text", required=True),
        PaperField("cost_moves", "The cost moves", "choice", required=True, choices=YES_NO_UNKNOWN),
    ),
)
RESTART: Final = Paper(
    "restart",
    "restart",
    "Why may the work go on?",
    (ENGINEER, DISTRICT, PROGRAMME),
    (
        PaperField("answered", "How the cause was answered", "long text", required=True),
        PaperField("changed", "What changes in the work", "long text", required=True),
        PaperField("looked_on", "Trench looked at on", "date", required=True),
    ),
)
CLOSE_OFF: Final = Paper(
    "close-off",
    "closing sheet",
    "Why does it not go on, and in which state is the ground left?",
    (DISTRICT, ENGINEER),
    (
        PaperField("how", "How", "choice", required=True, choices=("set aside", "given up")),
        PaperField("reason", "Reason", "long text", required=True),
        PaperField(
            "spent",
            "Spent so far",
            required=True,
            help="Amount with its currency and the papers it stands in; nothing is an answer.",
        ),
        PaperField("ground_safe", "The ground is made safe", "yes no", required=True),
        PaperField("ground", "How it was left", "long text", required=True),
        PaperField("committee_told_on", "Village committee told on", "date", required=True),
        PaperField("committee_told_by", "Told by", required=True),
    ),
)
RESTORED_BED: Final = Paper(
    "restored-bed",
    "restored bed",
    "Does the bed lie as it lay?",
    (FIELD, ENGINEER),
    (
        PaperField("restored_on", "Restored on", "date", required=True),
        PaperField(
            "bed_level_m",
            "Level of the bed over the wall",
            "number",
            required=True,
            unit="m",
            low=-10000,
            high=10000,
        ),
        PaperField("drained_sand", "Drained sand lies upstream", "yes no", required=True),
        PaperField("markers", "Markers set", "whole", required=True, low=0, high=1000),
        PaperField("remarks", "Remarks", "long text"),
    ),
    photo="the restored bed along the whole wall",
)
HANDOVER: Final = Paper(
    "handover",
    "hand-over sheet",
    "Who looks after it, and who reads which well?",
    (DISTRICT, ENGINEER),
    (
        PaperField("committee", "Committee", required=True),
        PaperField("handed_on", "Handed over on", "date", required=True),
        PaperField(
            "wells",
            "Wells",
            "rows",
            required=True,
            least=1,
            columns=(
                PaperField("well", "Well", required=True),
                PaperField("mark", "Measuring point", required=True),
                PaperField(
                    "role",
                    "Role",
                    "choice",
                    required=True,
                    choices=("upstream", "downstream", "control", "other"),
                ),
                PaperField("reader", "Read by", help="Role or committee, no name."),
            ),
        ),
        PaperField("raw_water", "The raw-water sheet was explained", "yes no", required=True),
        PaperField("remarks", "What the committee says", "long text"),
    ),
    photo="the signed hand-over sheet",
    signed=True,
    signers="the committee",
)
VERDICT: Final = Paper(
    "verdict",
    "verdict paper",
    "Does it hold?",
    (ENGINEER,),
    (
        PaperField("verdict", "Verdict", "choice", required=True, choices=VERDICTS),
        PaperField("water_year", "Water year", required=True, help="As 2024-25."),
        PaperField("head_across_m", "Head across the wall", "number", unit="m", low=-50, high=50),
        PaperField(
            "years_before", "Full water years before", "whole", required=True, low=0, high=100
        ),
        PaperField(
            "years_after", "Full water years after", "whole", required=True, low=0, high=100
        ),
        PaperField(
            "years_needed",
            "Asked for on each side, by the setting",
            "whole",
            required=True,
            low=1,
            high=20,
        ),
        PaperField("pairs", "Paired readings", "whole", low=0, high=100000),
        PaperField(
            "controls",
            "Control wells",
            "rows",
            columns=(PaperField("well", "Well", required=True),),
        ),
        PaperField("rain_before_mm", "Rain before", "number", unit="mm", low=0, high=20000),
        PaperField("rain_after_mm", "Rain after", "number", unit="mm", low=0, high=20000),
        PaperField("rain_allowed_for", "How unlike rain was allowed for", "long text"),
        PaperField(
            "readings_waiting",
            "Readings that wait for a decision on a mark",
            "whole",
            required=True,
            low=0,
            high=1000000,
        ),
        PaperField("not_known", "What is not known", "long text", required=True),
    ),
)
