"""Papers of drawing, check, hearing and season: what is decided before a trench is opened.

Source: the office's practice, "records and fields" (usual ranges), the table of stages and the
rules DW, SG.
"""

from __future__ import annotations

from typing import Final

from structures.life.paper import FOUND, Paper, PaperField
from structures.life.people import DISTRICT, ENGINEER, FIELD

DRAWING_SHEET: Final = Paper(
    "drawing-sheet",
    "drawing sheet",
    "How is the trench dug, kept dry and filled?",
    (ENGINEER,),
    (
        PaperField(
            "side_slope",
            "Sides, across per 1 up",
            "number",
            required=True,
            low=0,
            high=10,
            usual=(1.5, 3.0),
        ),
        PaperField("wet_sand", "The sand is wet", "yes no", required=True),
        PaperField(
            "trench_depth_m",
            "Deepest, to the bottom of the key",
            "number",
            required=True,
            unit="m",
            low=0,
            high=30,
        ),
        PaperField(
            "support_design",
            "Signed design of a licensed engineer",
            help="Number, date and licence; needed for steeper sides or a deep trench.",
        ),
        PaperField("dewatering", "How it is kept dry", "long text", required=True),
        PaperField("water_goes_to", "Where pumped water goes", "long text"),
        PaperField(
            "spill_level_m",
            "Spill level",
            "number",
            required=True,
            unit="m",
            low=-10000,
            high=10000,
        ),
        PaperField("clay_source", "Where the clay comes from", required=True),
        PaperField(
            "clay_proven_m3", "Clay proven", "number", required=True, unit="m3", low=0, high=1e6
        ),
        PaperField(
            "clay_needed_m3",
            "Clay to dig at the borrow",
            "number",
            required=True,
            unit="m3",
            low=0,
            high=1e6,
            help="In place, times bulking, times waste, as the quantities of the drawing give it.",
        ),
        PaperField(
            "clay_distance_km", "Distance of the clay", "number", unit="km", low=0, high=200
        ),
        PaperField(
            "bund_distance_m",
            "Borrow pit from the nearest tank bund",
            "number",
            unit="m",
            low=0,
            high=100000,
        ),
        PaperField("no_bund_near", "There is no tank bund near the pit", "yes no"),
        PaperField(
            "bund_consent",
            "Consent of the bund's owner and of a licensed engineer",
            help="Number and date of both papers.",
        ),
        PaperField("clay_fines_percent", "Fines in the clay", "number", unit="%", low=0, high=100),
        PaperField("clay_test", "Plasticity and jar test", "long text"),
        PaperField("clay_tested_on", "Clay tested on", "date"),
    ),
)
CHECK: Final = Paper(
    "check",
    "check sheet",
    "What did another engineer find?",
    (ENGINEER,),
    (
        PaperField("checked_on", "Checked on", "date", required=True),
        PaperField(
            "looked_at", "What was looked at, and computed again", "long text", required=True
        ),
        PaperField(
            "findings",
            "Findings",
            "rows",
            columns=(
                PaperField("what", "What was found", required=True),
                PaperField("answer", "Answer"),
                PaperField("state", "State", "choice", required=True, choices=("open", "closed")),
            ),
        ),
        PaperField("none_found", "Nothing was found", "yes no"),
    ),
)
HEARING: Final = Paper(
    "hearing",
    "minutes of the hearing",
    "Who was heard, and what do they say?",
    (DISTRICT, ENGINEER),
    (
        PaperField(
            "settlements",
            "Settlements",
            "rows",
            required=True,
            least=1,
            columns=(
                PaperField("settlement", "Settlement", required=True),
                PaperField(
                    "side",
                    "Where it lies",
                    "choice",
                    required=True,
                    choices=("upstream", "downstream"),
                ),
                PaperField("heard_on", "Heard on", "date", required=True),
                PaperField("present", "Present", "whole", required=True, low=0, high=100000),
                PaperField("asked", "What was asked"),
            ),
        ),
        PaperField(
            "objections",
            "Objections",
            "rows",
            columns=(
                PaperField("settlement", "Settlement", required=True),
                PaperField("objection", "Objection", "long text", required=True),
                PaperField("answer", "Answer", "long text"),
            ),
        ),
        PaperField("none_raised", "No objection was raised", "yes no"),
    ),
    photo="the signed minutes",
    signed=True,
    signers="the villages",
)
SEASON: Final = Paper(
    "season",
    "season sheet",
    "Can this trench be closed before the stream comes, and is everything there?",
    (ENGINEER, FIELD),
    (
        PaperField("opens_on", "Planned to open on", "date", required=True),
        PaperField(
            "days_needed", "Days needed", "whole", required=True, unit="days", low=1, high=400
        ),
        PaperField(
            "days_needed_deep",
            "Days needed, rock at the deep limit",
            "whole",
            required=True,
            unit="days",
            low=1,
            high=400,
        ),
        PaperField("reserve_days", "Reserve", "whole", required=True, unit="days", low=0, high=100),
        PaperField("early_flow_on", "Early date of first flow", "date", required=True),
        PaperField("services", "Cables and pipes", "choice", required=True, choices=FOUND),
        PaperField("services_asked", "Asked of whom, and when", required=True),
        PaperField("pumps", "Pumps running and standby", required=True),
        PaperField("spares", "Spares and fuel", required=True),
        PaperField("first_aid", "First aid on site", required=True),
        PaperField("way_out", "Ways out of the trench", required=True),
        PaperField(
            "trained_person", "Trained person on site", required=True, help="Login or role."
        ),
        PaperField("watch_upstream", "Watch upstream and its signal", required=True),
        PaperField(
            "clay_stock_m3",
            "Clay on site or proven",
            "number",
            required=True,
            unit="m3",
            low=0,
            high=1e6,
        ),
        PaperField("clay_tested_on", "Clay tested on", "date"),
        PaperField("permit", "Permit no.", required=True),
        PaperField("permit_given_by", "Permit and order to dig given by", required=True),
    ),
)
