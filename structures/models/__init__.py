from structures.models.people import User
from structures.models.run import Run, WorkerPulse
