from structures.models.device import DeviceToken, SentWrite
from structures.models.inbox import Upload
from structures.models.people import Posting, Role, SignInWord, User
from structures.models.run import Run, WorkerPulse
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
from structures.models.watershed import District, GaugeWeight, Stream, Watershed
