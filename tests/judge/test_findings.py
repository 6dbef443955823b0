import math

import pytest

from planner.model.results import Status, Verdict


def test_worst_row_fills_the_finding(bench):
    bench.put("thrust", bench.rows("thrust", segment="1.2h"), high=18_000.0)
    bench.put("thrust", bench.rows("thrust", segment="1.4h"), high=19_000.0)
    finding = bench.finding("stand-thrust")
    assert (finding.segment, finding.where, finding.verdict) == ("1.4h", "1.4h", Verdict.CAUTION)
    assert (finding.value, finding.low, finding.high) == (10_000.0, 10_000.0, 19_000.0)
    assert (finding.limit, finding.caution) == (20_000.0, 16_000.0)
    assert finding.margin == pytest.approx(1_000.0)
    assert finding.reason == "19000 N against caution level at most 16000 N"
    assert (finding.tested, finding.not_assessed) == (4, 0)
    assert finding.segment_verdicts["1.2h"] == "CAUTION"
    assert finding.segment_verdicts["1.3h"] == "GO"


def test_no_go_outranks_not_assessed_outranks_small_margin(bench):
    bench.put("thrust", bench.rows("thrust", segment="1.2h"), high=19_999.0)
    bench.flag("thrust", bench.rows("thrust", segment="1.3h"), Status.NOT_COMPUTED)
    assert bench.finding("stand-thrust").segment == "1.3h"
    bench.put("thrust", bench.rows("thrust", segment="1.4h"), high=20_001.0)
    finding = bench.finding("stand-thrust")
    assert (finding.segment, finding.verdict) == ("1.4h", Verdict.NO_GO)
    assert finding.reason == "20001 N against limit at most 20000 N"
    assert finding.not_assessed == 1


def test_smallest_margin_is_shown_where_all_is_well(bench):
    rows = bench.rows("harmonic_spacing", segment="1.4h", mode="lag 1", harmonic="2")
    bench.put("harmonic_spacing", rows, low=0.2)
    finding = bench.finding("lag-low-spacing")
    assert (finding.verdict, finding.where) == (Verdict.GO, "1.4h, lag 1, 2 per rev")
    assert finding.reason == ""


def test_band_is_named(bench):
    bench.put("band_rate", bench.rows("band_rate"), low=0.01)
    finding = bench.finding("keep-out-rate")
    assert finding.where == "1.2r, band lag"
    assert finding.reason == "1 % against limit at least 2 %"


def test_finding_without_numbers_says_nan_not_zero(bench):
    del bench.predictions["thrust"]
    finding = bench.finding("stand-thrust")
    assert (finding.verdict, finding.reason) == (Verdict.NOT_ASSESSED, "thrust was not predicted")
    assert all(
        math.isnan(number)
        for number in (finding.value, finding.low, finding.high, finding.limit, finding.margin)
    )


def test_findings_keep_the_order_of_the_book(bench):
    order = [r.id for r in bench.plan.rule_book.rules if r.kind == "predicted"]
    found = [f.rule for f in bench.judge().findings]
    assert found == [*order, "wind cap: mean", "wind cap: gust"]


def test_verdict_is_the_same_for_rows_in_any_order(bench):
    first = bench.judge()
    for quantity, old in list(bench.predictions.items()):
        turned = list(range(len(old.labels)))[::-1]
        bench.drop(quantity, [])
        bench.predictions[quantity] = type(old)(
            quantity=old.quantity,
            study=old.study,
            labels=tuple(old.labels[i] for i in turned),
            status=tuple(old.status[i] for i in turned),
            reasons=tuple(old.reasons[i] for i in turned),
            value=old.value[turned],
            low=old.low[turned],
            high=old.high[turned],
            speed_rad_s=old.speed_rad_s[turned],
            hand=old.hand[turned],
        )
    second = bench.judge()
    assert second.verdict is first.verdict
    assert second.coverage == first.coverage
    assert second.segment_verdicts == first.segment_verdicts
