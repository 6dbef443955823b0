"""What a marched case yields is its own: not its companions', nor their number's."""

import numpy as np
import pytest

from planner.rotor.march import march
from planner.rotor.march_case import Histories, MarchSettings, Turbulence, make_march_cases
from tests.rotor.marching import AIR, history, marched, model_of, same_bits, taken

COUNT = 6
RANDOM = np.random.default_rng(4)
ROUGH = Turbulence(0.2, RANDOM.normal(size=(2, 20, 3)))


def courses():
    """Two histories of different length, the second with cyclic pitch."""
    both = history([[0.0, 6.0, 12.0], [9.0, 9.0, 2.0]], 1.0, 0.05)
    cyclic = both.collective_rad * np.array([[0.0], [0.4]])
    end = np.array([1.0, 0.7])
    return Histories(
        both.step_s, both.speed_rad_s, both.collective_rad, cyclic, -0.5 * cyclic, end
    )


def some_cases(**changes):
    return make_march_cases(
        **{
            "history": [0, 1, 0, 1, 0, 1],
            "azimuth_rad": RANDOM.uniform(0.0, 6.0, COUNT),
            "wind_m_s": [0.0, 12.0, 8.0, 5.0, 10.0, 3.0],
            "gust_m_s": [0.0, 0.0, 6.0, 4.0, 0.0, 0.0],
            "gust_start_s": 0.4,
            "upflow": [0.0, 0.0, 0.0, 0.1, 0.0, 0.0],
            "series": [-1, 0, -1, -1, 1, -1],
            "load_factor": [1.0, 1.0, 0.9, 1.1, 1.0, 1.0],
            **AIR,
            **changes,
        }
    )


@pytest.mark.parametrize(
    ("kind", "single"),
    [("articulated", False), ("articulated", True), ("teetering", True), ("hingeless", False)],
)
def test_cases_permuted_added_and_removed_keep_their_bits(make_rotor, kind, single):
    settings = MarchSettings(12, 0.025, 4, lead_in_turns=0.3, lead_in_s=0.2, single=single)
    model, cases = model_of(make_rotor(kind), settings), some_cases()
    whole = march(model, courses(), cases, ROUGH)
    assert whole.converged.all()
    for where in ([2], [5, 3, 0, 4, 1, 2], [1, 4], [3]):
        part = march(model, courses(), taken(cases, where), ROUGH)
        assert same_bits(whole, part, where) == []


def test_a_case_that_fails_is_marked_and_leaves_the_others_alone(make_rotor):
    model = model_of(make_rotor(), MarchSettings(12, 0.025, 4, lead_in_turns=0.3, lead_in_s=0.2))
    cases = some_cases(air_density_kg_m3=[1.2, 1.2, 1e9, 1.2, 1.2, 1.2])
    result = march(model, courses(), cases, ROUGH)
    assert result.converged.tolist() == [True, True, False, True, True, True]
    where = [0, 1, 3, 4, 5]
    alone = march(model, courses(), taken(cases, where), ROUGH)
    assert same_bits(result, alone, where) == []


def test_progress_tells_shares_up_to_one(make_rotor):
    told: list[float] = []
    march(
        model_of(make_rotor("hingeless")),
        history(0.0, 0.1),
        some_cases(history=0),
        ROUGH,
        told.append,
    )
    assert told[-1] == 1.0
    assert told == sorted(told)


def test_nothing_counts_before_the_history_begins_or_after_it_ends(make_rotor):
    """A gust that is over before the begin, or begins at the end, leaves no trace."""
    model = model_of(make_rotor(), MarchSettings(24, 0.02, 4, lead_in_s=1.0))
    calm = marched(model, history(0.0, 0.5))
    late = marched(model, history(0.0, 0.5), gust_m_s=30.0, gust_start_s=0.6)
    assert same_bits(calm, late, [0]) == []


def test_cases_refuse_what_cannot_be_marched():
    with pytest.raises(ValueError, match=r"march cases: wind_m_s: expected 1 finite values"):
        make_march_cases(history=0, wind_m_s=np.nan, **AIR)
    with pytest.raises(ValueError, match=r"gust_length_s: expected above 0 s, found 0 s"):
        make_march_cases(history=0, wind_m_s=1.0, gust_length_s=0.0, **AIR)
    with pytest.raises(ValueError, match=r"missing or unknown: \['gale_m_s', 'wind_m_s'\]"):
        make_march_cases(history=0, gale_m_s=1.0, **AIR)
