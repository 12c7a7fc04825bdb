"""The cohesion rule never turns more evidence of cohesion into less risk."""

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

from psdflow.cohesion.indicators import fines_flags, hausner_score, size_score, softening_flags
from psdflow.cohesion.verdict import RISKS, verdict

score = st.floats(-2, 2)


@given(score, score, score, st.booleans(), st.booleans())
def test_more_cohesive_size_never_lowers_the_risk(one, other, flow, caution, strong):
    low, high = sorted((one, other))
    flows = {"hausner_ratio": np.array(flow)}
    less = verdict(size_score=low, flow_scores=flows, caution=caution, strong=strong)
    more = verdict(size_score=high, flow_scores=flows, caution=caution, strong=strong)
    if not (less.conflict or more.conflict):
        assert more.risk >= less.risk
        assert more.probability >= less.probability


@given(score, score)
def test_flags_never_lower_the_risk(size, flow):
    flows = {"hausner_ratio": np.array(flow)}
    plain, caution, strong = (
        verdict(size_score=size, flow_scores=flows, caution=c, strong=s)
        for c, s in ((False, False), (True, False), (True, True))
    )
    assert plain.risk <= caution.risk <= strong.risk
    assert plain.probability <= caution.probability <= strong.probability


@given(st.floats(1, 3), st.floats(1, 3))
def test_higher_hausner_never_scores_lower(one, other):
    low, high = sorted((one, other))
    assert hausner_score(hausner_ratio=low) <= hausner_score(hausner_ratio=high)


@given(st.floats(1e-7, 1e-3), st.floats(1e-7, 1e-3))
def test_finer_never_scores_lower(one, other):
    fine, coarse = sorted((one, other))
    ends = {"finest_ca": 18e-6, "coarsest_ca": 29e-6}
    assert size_score(diameter_sv=fine, **ends) >= size_score(diameter_sv=coarse, **ends)


def test_no_flow_test_is_no_good_news():
    alone = verdict(size_score=0.5, flow_scores={}, caution=False, strong=False)
    good = verdict(size_score=0.5, flow_scores={"hausner_ratio": np.array(-0.5)}, caution=False, strong=False)
    assert alone.score > good.score


def test_measured_pressure_drop_overrides():
    for ratio, risk in ((0.6, "high"), (0.85, "elevated"), (0.97, "low")):
        for size in (-2.0, 2.0):
            found = verdict(size_score=size, flow_scores={}, caution=True, strong=True, pressure_drop_ratio=ratio)
            assert RISKS[int(found.risk)] == risk


def test_flags():
    shares = {"below_10um": np.array([0.05, 0.15, 0.25]), "below_20um": np.zeros(3)}
    caution, strong = fines_flags(shares)
    assert caution.tolist() == [False, True, True]
    assert strong.tolist() == [False, False, True]
    near, over = softening_flags(temperature=np.array([800, 885, 905]), softening_temperature=900)
    assert near.tolist() == [False, True, True]
    assert over.tolist() == [False, False, True]
