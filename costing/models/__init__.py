from costing.models.bill import Bill, BillLine, LineDecision
from costing.models.contract import Contract, ContractRate
from costing.models.estimate import Estimate, EstimateLine
from costing.models.option import Forecast, OptionPaper
from costing.models.sanction import MoneyLine, Sanction
from costing.models.schedule import Rate, RateComponent, RateSchedule
