"""Short codes that documents print for an entry of the register, fit to be read out and typed.

Base 32 with the alphabet of Crockford, which leaves out I, L, O and U. The last sign checks the
others: a weighted sum over the field of 32 elements, so that every single wrong sign and every
exchange of two signs is noticed. Source: definition of a linear code of distance two with distinct
weights; the field is that of x^5 + x^2 + 1.
"""

from __future__ import annotations

from typing import Final

ALPHABET: Final = "0123456789ABCDEFGHJKMNPQRSTVWXYZ"
READ_AS: Final = str.maketrans({"O": "0", "I": "1", "L": "1"})  # what is mistaken in handwriting
SIGNS: Final = 11  # of 5 bits each, before the check sign: 55 bits (project choice)
GROUP: Final = 4
MODULUS: Final = 0b100101  # x^5 + x^2 + 1, primitive: its powers of x run through all 31 weights
BITS: Final = 5


def short_code(digest: str) -> str:
    """Give the code of a hexadecimal digest: "7K3M-Q2XA-9TBC".

    Raises
    ------
    ValueError
        If the digest is no hexadecimal number, or too short for a code.
    """
    bits = len(digest) * 4
    if bits < SIGNS * BITS:
        raise ValueError(f"a digest of {bits} bits gives no code")
    number = int(digest, 16) >> (bits - SIGNS * BITS)
    values = [number >> BITS * place & 31 for place in reversed(range(SIGNS))]
    signs = "".join(ALPHABET[value] for value in (*values, _weighted(values)))
    return "-".join(signs[at : at + GROUP] for at in range(0, len(signs), GROUP))


def read_code(text: str) -> str | None:
    """Read a code as somebody typed it; None where it cannot be one.

    Small letters, blanks, missing dashes, and O, I, L for 0, 1, 1 are taken as meant.
    """
    signs = "".join(text.split()).replace("-", "").upper().translate(READ_AS)
    if len(signs) != SIGNS + 1 or not set(signs) <= set(ALPHABET):
        return None
    *values, check = (ALPHABET.index(sign) for sign in signs)
    if _weighted(values) != check:
        return None
    return "-".join(signs[at : at + GROUP] for at in range(0, len(signs), GROUP))


def _weighted(values: list[int]) -> int:
    """Sum of values times x, x^2, ... in the field; the check sign itself has the weight 1."""
    total = 0
    for value in reversed(values):  # Horner's rule
        total = _times_x(total ^ value)
    return total


def _times_x(value: int) -> int:
    value <<= 1
    return value ^ MODULUS if value >> BITS else value
