"""The walk through the schedule, where a ramp's time is still to be found."""

import math
from dataclasses import replace

from planner.model.canonical import plain
from planner.model.plan import ABORT_CAUSES, segments


def test_causes_of_an_abort_are_told_apart():
    assert len(set(ABORT_CAUSES)) == len(ABORT_CAUSES) == 4


def test_the_drives_own_run_up_is_handed_to_its_ramp_alone(sample):
    plan = sample("hingeless-model")
    first, *rest = plan.blocks[0].steps
    block = replace(
        plan.blocks[0], steps=(replace(first, own_run_up=True, ramp_time_s=math.nan), *rest)
    )
    plan = replace(plan, blocks=(block, *plan.blocks[1:]))
    walk = segments(plan)
    assert [segment.id for segment in walk if segment.own_run_up] == ["1.1r"]
    assert [segment.id for segment in walk if math.isnan(segment.duration_s)] == ["1.1r"]
    assert plain(walk[0])["duration_s"] is None


def test_ramps_keep_time_and_repeats_and_the_stop_its_own_time(sample):
    plan = sample("hingeless-model")
    walk = {segment.id: segment for segment in segments(plan)}
    block = plan.blocks[1]
    assert (walk["2.2r"].duration_s, walk["2.2r"].times) == (block.steps[1].ramp_time_s, 3)
    assert (walk["2.1b"].duration_s, walk["2.1b"].times) == (block.steps[0].ramp_time_s, 2)
    assert (walk["stop"].kind, walk["stop"].duration_s) == ("stop", plan.shutdown.time_s)
    assert (walk["stop"].times, walk["stop"].to_rad_s) == (1, 0.0)
