"""One interpreted sounding as JSON values and as text: the same words for shell, page and report."""

from __future__ import annotations

from dataclasses import asdict
from textwrap import wrap
from typing import TYPE_CHECKING, Any, Final

from structures.life.cautions import WORDS

if TYPE_CHECKING:
    from structures.ground.sounding import Interpretation, Layer
    from structures.ground.sounding_refusals import Refusal
    from structures.intake.pack import Sounding

WIDTH: Final = 88  # characters a line of text
SPREAD_HEAD: Final = f"{'AB/2 m':>8} {'MN/2 m':>8} {'observed':>10} {'computed':>10}  ohm m"


def sounding_json(read: Interpretation) -> dict[str, Any]:
    """Give one element of `rock.soundings`; a refused sounding has null depths and says why.

    Source: the interface of `appraise --json`.
    """
    return {
        "label": read.label,
        "offset_m": read.offset_m,
        "layers": _layers(read.layers),
        "rock_depth_m": read.rock_depth_m,
        "rock_depth_low_m": read.rock_depth_low_m,
        "rock_depth_high_m": read.rock_depth_high_m,
        "rock_depth_sd_m": read.rock_depth_sd_m,
        "misfit_percent": read.misfit_percent,
        "rock_share": read.rock_share,
        "refusal": refusal_json(read.refusal),
        "notes": list(read.notes),
        "segment_factors": [asdict(one) for one in read.segment_factors],
        "seed": read.seed,
    }


def refusal_json(refusal: Refusal | None) -> dict[str, str] | None:
    """Give why a sounding or refraction line has no depth; None where it has one."""
    return None if refusal is None else {"code": refusal.code, "text": refusal.sentence}


def sounding_whole_json(read: Interpretation, sounding: Sounding) -> dict[str, Any]:
    """Give the element with readings, equivalent models, prior and method beside it.

    Source: the interface of `interpret_sounding --json`; handbook 2.7 (full covariance of the
    logarithms of resistivities, then thicknesses, and the prior printed with the result).
    """
    count = len(sounding.readings)
    computed = [None] * count if read.computed_ohm_m is None else read.computed_ohm_m.tolist()
    return sounding_json(read) | {
        "array": sounding.array,
        "readings": [
            {
                "ab2_m": reading.ab2_m,
                "mn2_m": reading.mn2_m,
                "observed_ohm_m": reading.apparent_resistivity_ohm_m,
                "computed_ohm_m": fitted,
                "sd_percent": 100 * noise if reading.sd_percent is None else reading.sd_percent,
            }
            for reading, fitted, noise in zip(
                sounding.readings, computed, read.noise.tolist(), strict=True
            )
        ],
        "equivalent": [_layers(layers) for layers in read.equivalent],
        "chi_square_per_degree": read.chi_square_per_degree,
        "covariance": None if read.covariance is None else read.covariance.tolist(),
        "prior": None if read.prior is None else asdict(read.prior),
        "prior_in_words": [] if read.prior is None else list(read.prior.sentences()),
        "layer_weight": {str(layers): weight for layers, weight in read.layer_weight},
        "method": read.method,
        "findings": [asdict(finding) for finding in sounding.findings],
    }


def sounding_text(whole: dict[str, Any]) -> str:
    """Give the text of one sounding from its whole JSON values: depth first, then what it rests on."""
    lines = [f"sounding {whole['label']}", *depth_lines(whole)]
    for finding in whole["findings"]:
        words = f"{finding['where']}: {finding['what']} {finding['remedy']}"
        head = f"  {WORDS[finding['level']]:<6}"
        lines += wrap(words, WIDTH, initial_indent=head, subsequent_indent=" " * len(head))
    if whole["layers"]:
        lines += ["", "layers, the fewest that fit", *_layer_lines(whole["layers"])]
    if whole["equivalent"]:
        lines += ["", "other layers that fit within the noise, shallow to deep"]
        lines += [f"  {_model(layers)}" for layers in whole["equivalent"]]
    lines += ["", SPREAD_HEAD]
    lines += [
        f"{reading['ab2_m']:>8g} {reading['mn2_m']:>8g} {reading['observed_ohm_m']:>10.2f} "
        + (f"{reading['computed_ohm_m']:>10.2f}" if reading["computed_ohm_m"] else f"{'-':>10}")
        for reading in whole["readings"]
    ]
    lines += _factor_lines(whole["segment_factors"])
    lines += ["", *wrap(f"{whole['method']} Seed {whole['seed']}.", WIDTH)]
    if whole["prior_in_words"]:
        words = f"Held likely before a look at the curve: {' '.join(whole['prior_in_words'])}"
        lines += ["", *wrap(words, WIDTH)]
    return "\n".join(lines) + "\n"


def depth_lines(sounding: dict[str, Any]) -> list[str]:
    """Say the depth of rock of a sounding or refraction line with its range, or why there is none."""
    misfit = sounding.get("misfit_percent")  # a refraction line has none
    fit = "" if misfit is None else f", misfit {misfit:.1f} %"
    if sounding["refusal"] is not None:
        return wrap(f"no depth of rock{fit}: {sounding['refusal']['text']}", WIDTH - 4)
    first = (
        f"rock at {sounding['rock_depth_m']:.2g} m, 8 times in 10 between "
        f"{sounding['rock_depth_low_m']:.2g} and {sounding['rock_depth_high_m']:.2g} m{fit}"
    )
    return [first, *(line for note in sounding["notes"] for line in wrap(note, WIDTH - 4))]


def _factor_lines(factors: list[dict[str, float]]) -> list[str]:
    """Say by how much the readings of each later MN segment stand above the model (2.6)."""
    return [
        f"factor of the readings with MN/2 {one['mn2_m']:g} m: {one['factor']:.3f}"
        f" (sd {100 * one['log_sd']:.1f} %)"
        for one in factors[1:]
    ]


def _layers(layers: tuple[Layer, ...]) -> list[dict[str, float | None]]:
    return [asdict(layer) for layer in layers]


def _layer_lines(layers: list[dict[str, float | None]]) -> list[str]:
    head = f"{'thickness m':>12} {'resistivity ohm m':>18}"
    rows = [
        f"{_thickness(layer['thickness_m']):>12} {layer['resistivity_ohm_m']:>18.1f}"
        for layer in layers
    ]
    return [head, *rows]


def _thickness(thickness_m: float | None) -> str:
    return "below" if thickness_m is None else f"{thickness_m:.2f}"


def _model(layers: list[dict[str, float | None]]) -> str:
    return ", ".join(
        f"{_thickness(layer['thickness_m'])} of {layer['resistivity_ohm_m']:.0f} ohm m"
        if layer["thickness_m"] is not None
        else f"below {layer['resistivity_ohm_m']:.0f} ohm m"
        for layer in layers
    )
