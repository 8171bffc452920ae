from structures.models.clay import ClaySource, ClayTest
from structures.models.device import DeviceToken, SentWrite
from structures.models.inbox import Upload
from structures.models.measurement import MeasurementEntry
from structures.models.move import Move
from structures.models.paper import Answer, Paper, Photo, Question
from structures.models.parcel import Clash, DailyMail, PhoneRecord
from structures.models.people import Posting, Role, SignInWord, User
from structures.models.rain import Gauge, RainDay, RainMonth
from structures.models.readings import ColumnChoice, Reading, Repair, WaterSample
from structures.models.register import Chain, Entry
from structures.models.run import Run, WorkerPulse
from structures.models.season import FirstRun
from structures.models.second_factor import FactorReset, RecoveryCode, SecondFactor
from structures.models.setting import Setting
from structures.models.site import LongProfilePoint, Site
from structures.models.structure import Design, Structure
from structures.models.survey import (
    GroundPoint,
    Probe,
    RefractionLine,
    RefractionPick,
    RockLine,
    RockTest,
    Sounding,
    SoundingReading,
    Survey,
)
from structures.models.upkeep import Job, RestoreTrial
from structures.models.watershed import District, GaugeWeight, Stream, Watershed
from structures.models.wells import Complaint, ComplaintAnswer, MeasuringPoint, Verdict, Well
from structures.models.works import (
    Alarm,
    DaySheet,
    FoundLevel,
    HoldPoint,
    Incident,
    Strip,
    TrenchLook,
)
