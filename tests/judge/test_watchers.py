"""The shipped example keeps its own advice: at most four channels to a watcher."""

from __future__ import annotations

from collections import defaultdict

MOST_CHANNELS = 4
"""Society of Flight Test Engineers handbook, chapters 18 and 21 (read)."""


def test_no_watcher_of_the_example_book_has_more_than_four_channels(sample):
    channels = defaultdict(set)
    for rule in sample("articulated-run-up").rule_book.rules:
        if rule.channel:
            channels[rule.watcher].add(rule.channel)
    assert channels
    assert all(len(watched) <= MOST_CHANNELS for watched in channels.values())


def test_watchers_and_acceptors_are_roles_of_the_sample_plans(sample):
    plan = sample("articulated-run-up")
    roles = {role.role for role in plan.roles} | {"rotor dynamics engineer"}
    for rule in plan.rule_book.rules:
        assert not rule.watcher or rule.watcher in roles
        assert not rule.caution_acceptor or rule.caution_acceptor in roles
