"""Check values of handbook 8 and the schedule of the worked examples."""

import json
from decimal import Decimal
from pathlib import Path

from costing.price.rates import read_rates

HERE = Path(__file__).parent
MONEY = json.loads((HERE.parent / "oracles" / "money.json").read_text(encoding="utf-8"))
RATES = HERE.parents[1] / "fixtures" / "rates"


def example_rates():
    """Rates of handbook 13, every lift with its own."""
    return read_rates("examples.csv", (RATES / "examples.csv").read_bytes())


def as_printed(value, text):
    """Is a decimal the printed one within half a unit of its last digit."""
    wanted = Decimal(text)
    return abs(value - wanted) <= Decimal("0.5").scaleb(wanted.as_tuple().exponent)
