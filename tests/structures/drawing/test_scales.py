import pytest
from hypothesis import given
from hypothesis import strategies as st

from structures.drawing.scales import LEAST_WIDTH_MM, Scales, choose_scales, round_step


@pytest.mark.parametrize(
    ("span_m", "rise_m", "scales"),
    [
        (68.0, 10.9, Scales(500.0, 200.0)),  # 136 mm exactly; 54.5 mm high, 1:150 would be 72.7
        (45.0, 7.2, Scales(400.0, 200.0)),  # 1:300 would be 150 mm wide; 1:125 is no half number
        (5.0, 1.0, Scales(40.0, 20.0)),  # 125 mm and 50 mm
        (10.0, 8.0, Scales(150.0, 150.0)),  # the height alone asks for 1:150; true to scale
        (500.0, 1.0, Scales(4000.0, 200.0)),  # 20 times; 1:150 would be 26.7 times
    ],
)
def test_scales_by_hand(span_m, rise_m, scales):
    """Oracle: hand sums with the rule of the docstring on 136 by 56 mm."""
    assert choose_scales(span_m, rise_m, 136.0, 56.0) == scales


@given(span_m=st.floats(2.0, 2000.0), rise_m=st.floats(0.2, 200.0))
def test_every_section_fits_its_paper(span_m, rise_m):
    """Law: it fits, and is flatter than true only where it would be too narrow to read."""
    scales = choose_scales(span_m, rise_m, 136.0, 56.0)
    assert span_m * scales.mm_per_m <= 136.0 + 1e-6
    assert rise_m * scales.rise_mm_per_m <= 56.0 + 1e-6
    if scales.times < 1.0:
        assert span_m * 1000.0 / scales.height < LEAST_WIDTH_MM
        assert span_m * scales.mm_per_m >= LEAST_WIDTH_MM


def test_exaggeration_in_words():
    assert Scales(500.0, 200.0).words == "two and a half times"
    assert Scales(3000.0, 200.0).words == "15 times"


@pytest.mark.parametrize(
    ("least", "step"), [(0.6, 1.0), (1.0, 1.0), (1.2, 2.0), (2.5, 5.0), (0.03, 0.05), (70.0, 100.0)]
)
def test_round_steps(least, step):
    assert round_step(least) == pytest.approx(step)


def test_nothing_to_draw_is_a_wrong_call():
    with pytest.raises(ValueError, match="above zero"):
        choose_scales(0.0, 1.0, 136.0, 56.0)
    with pytest.raises(ValueError, match="at any scale"):
        choose_scales(1e8, 1.0, 136.0, 56.0)
