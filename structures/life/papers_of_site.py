"""Papers of a place before anything is drawn: note, walk-over, permission, underflow.

Source: the office's practice, "records and fields" (usual ranges) and the table of stages.
"""

from __future__ import annotations

from typing import Final

from structures.life.paper import FOUND, YES_NO_UNKNOWN, Paper, PaperField
from structures.life.people import ENGINEER, FIELD

NOTE: Final = Paper(
    "note",
    "note of a place",
    "Why could a wall stand here?",
    (FIELD, ENGINEER),
    (
        PaperField(
            "latitude",
            "Latitude",
            "number",
            required=True,
            unit="deg",
            low=-90,
            high=90,
            rule="PL-01",
            blank_says=(
                "No position for this place.",
                "Stand on the line and take it, or type it from the map sheet and say so.",
            ),
        ),
        PaperField(
            "longitude",
            "Longitude",
            "number",
            required=True,
            unit="deg",
            low=-180,
            high=180,
            rule="PL-01",
            blank_says=(
                "No position for this place.",
                "Stand on the line and take it, or type it from the map sheet and say so.",
            ),
        ),
        PaperField(
            "position_from",
            "How the position was found",
            "choice",
            required=True,
            choices=("taken on the line", "typed from the map sheet"),
        ),
        PaperField("accuracy_m", "Accuracy of the position", "number", unit="m", low=0, high=10000),
        PaperField(
            "spoke_of_it", "Who spoke of it", required=True, help="Role or village, no name."
        ),
        PaperField("seen", "What was seen", "long text", required=True),
        PaperField(
            "near_place",
            "Why it is not the place nearby",
            "long text",
            help="Only where another place lies within 50 m.",
        ),
    ),
    photo="the bed, looking across",
)
WALK_OVER: Final = Paper(
    "walk-over",
    "walk-over sheet",
    "What does the place look like, and who lives from its water?",
    (FIELD, ENGINEER),
    (
        PaperField("walked_on", "Walked on", "date", required=True),
        PaperField(
            "outcrop_left", "Rock seen on the left", "choice", required=True, choices=YES_NO_UNKNOWN
        ),
        PaperField(
            "outcrop_right",
            "Rock seen on the right",
            "choice",
            required=True,
            choices=YES_NO_UNKNOWN,
        ),
        PaperField("bed_material", "Material of the bed", required=True),
        PaperField(
            "bed_width_m",
            "Width of the bed",
            "number",
            required=True,
            unit="m",
            low=0,
            high=5000,
            usual=(5, 300),
        ),
        PaperField(
            "dry_season_flow",
            "Water flows in the dry season",
            "choice",
            required=True,
            choices=YES_NO_UNKNOWN,
        ),
        PaperField(
            "wells",
            "Wells nearby",
            "rows",
            columns=(
                PaperField("well", "Well", required=True, help="As people call it, no owner."),
                PaperField("where", "Where", required=True),
                PaperField("depth_m", "Depth", "number", unit="m", low=0, usual=(1, 60)),
            ),
        ),
        PaperField("no_wells", "No well was found", "yes no"),
        PaperField(
            "downstream",
            "Who uses water below",
            "rows",
            columns=(
                PaperField("settlement", "Settlement or user", required=True),
                PaperField("use", "What the water is used for", required=True),
                PaperField("distance_km", "Distance below", "number", unit="km", low=0, high=200),
            ),
        ),
        PaperField(
            "none_found_within_km",
            "Nobody was found below, within",
            "number",
            unit="km",
            low=0.1,
            high=200,
        ),
        PaperField("remarks", "Remarks", "long text"),
    ),
    photo="both banks",
)
SURVEY_PERMISSION: Final = Paper(
    "survey-permission",
    "survey plan with permission",
    "May we survey here, and what lies in the ground?",
    (ENGINEER,),
    (
        PaperField("plan", "What is surveyed, and how", "long text", required=True),
        PaperField("benchmark", "Benchmark", required=True, help="Its name and where it stands."),
        PaperField(
            "land",
            "Land that is entered",
            "rows",
            required=True,
            least=1,
            columns=(
                PaperField("land", "Land", required=True),
                PaperField(
                    "leave", "Leave to enter", "choice", required=True, choices=("given", "refused")
                ),
                PaperField("asked_on", "Asked on", "date", required=True),
                PaperField("given_by", "Given by", required=True, help="Initials or office only."),
            ),
        ),
        PaperField("services", "Cables and pipes", "choice", required=True, choices=FOUND),
        PaperField("services_asked", "Asked of whom, and when", required=True),
        PaperField("services_where", "Where they run", "long text"),
    ),
)
UNDERFLOW: Final = Paper(
    "underflow",
    "underflow sheet",
    "Is there anything to hold?",
    (ENGINEER,),
    (
        *(
            PaperField(
                f"k_{which}_m_per_day",
                f"K, {which}",
                "number",
                required=True,
                unit="m/day",
                low=0.001,
                high=2000,
                usual=(0.1, 300),
            )
            for which in ("low", "likely", "high")
        ),
        PaperField(
            "k_source",
            "Where K comes from",
            "choice",
            required=True,
            choices=("pumping test", "grain size", "table"),
            rule="UF-02",
            blank_says=("Where does K come from?", "Pumping test, grain size or table?"),
        ),
        PaperField("k_source_words", "Which test, bags or table", "long text", required=True),
        PaperField(
            "wetted_area_m2", "Area A", "number", required=True, unit="m2", low=0.1, high=100000
        ),
        PaperField("only_wetted", "A is below the water table only", "yes no", required=True),
        PaperField("area_source", "Where A comes from", required=True),
        PaperField(
            "gradient",
            "Gradient i",
            "number",
            required=True,
            unit="m/m",
            low=0.00001,
            high=0.2,
            usual=(0.0005, 0.02),
        ),
        PaperField("gradient_source", "Where i comes from", required=True),
        PaperField("use_below_m3_per_day", "Use below", "number", unit="m3/day", low=0, high=1e6),
        PaperField("worth_it", "Why a wall is worth it all the same", "long text"),
        PaperField(
            "shares",
            "What those below keep in a dry year",
            "rows",
            columns=(
                PaperField("settlement", "Settlement", required=True),
                PaperField("keeps", "Keeps in a dry year"),
            ),
        ),
        PaperField("nobody_below", "Nobody uses water below", "yes no"),
    ),
)
