"""A small calculator for the few formula shapes of our workbooks, in decimals.

Source: what spreadsheets say of ROUND (half away from zero), SUM, COUNT, CEILING and IF.
"""

from __future__ import annotations

import re
from decimal import ROUND_CEILING, ROUND_HALF_UP, Decimal

from openpyxl.utils import range_boundaries

TOKEN = re.compile(r'"[^"]*"|[A-Z]+\d+:[A-Z]+\d+|[A-Z]+\d+|[A-Z]+|\d+\.?\d*|[()*/=,]')


def calculate(sheet, address):
    """Value of a cell, its formula worked out from the cells it names."""
    value = sheet[address].value
    if isinstance(value, str) and value.startswith("=") and sheet[address].data_type == "f":
        return Formula(sheet, TOKEN.findall(value[1:])).whole()
    return Decimal(str(value)) if isinstance(value, int | float) else value


class Formula:
    def __init__(self, sheet, tokens):
        self.sheet, self.tokens = sheet, tokens

    def whole(self):
        value = self.comparison()
        assert not self.tokens
        return value

    def comparison(self):
        left = self.product()
        if self.tokens[:1] == ["="]:
            self.tokens.pop(0)
            return left == self.product()
        return left

    def product(self):
        value = self.term()
        while self.tokens[:1] in (["*"], ["/"]):
            sign, other = self.tokens.pop(0), self.term()
            if not (isinstance(value, Decimal) and isinstance(other, Decimal)):
                value = None  # a spreadsheet's #VALUE!
            else:
                value = value * other if sign == "*" else value / other
        return value

    def term(self):
        token = self.tokens.pop(0)
        if token.startswith('"'):
            return token[1:-1]
        if ":" in token:
            left, top, right, bottom = range_boundaries(token)
            rows = range(top, bottom + 1)
            cells = (self.sheet.cell(r, c) for r in rows for c in range(left, right + 1))
            return [calculate(self.sheet, cell.coordinate) for cell in cells]
        if token[0].isdigit():
            return Decimal(token)
        if self.tokens[:1] == ["("]:
            return FUNCTIONS[token](*self.arguments())
        return calculate(self.sheet, token)

    def arguments(self):
        found = []
        while self.tokens.pop(0) != ")":
            found.append(self.comparison())
        return found


def numbers(values):
    return [value for value in values if isinstance(value, Decimal)]


FUNCTIONS = {
    "SUM": lambda values: sum(numbers(values), start=Decimal(0)),
    "COUNT": lambda values: Decimal(len(numbers(values))),
    "ROUND": lambda value, places: (
        None if value is None else value.quantize(Decimal(1).scaleb(-int(places)), ROUND_HALF_UP)
    ),
    "CEILING": lambda value, step: (value / step).to_integral_value(ROUND_CEILING) * step,
    "IF": lambda condition, yes, no: yes if condition else no,
}
