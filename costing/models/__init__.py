from costing.models.estimate import Estimate, EstimateLine
from costing.models.schedule import Rate, RateComponent, RateSchedule
