"""The declared layout and the sample that the other tests show must not drift apart."""

import pytest
from result_sample import FAILED, RESULT

from optimiser.report import layout

PARTS = [
    (RESULT, layout.Result),
    (FAILED, layout.Result),
    (RESULT["objective"], layout.ObjectiveValue),
    (RESULT["decisions"]["loop.pressure"], layout.Decision),
    (RESULT["binding"][0], layout.BindingLimit),
    (RESULT["streams"]["purge"], layout.StreamState),
    (RESULT["costs"], layout.Costs),
    (RESULT["costs"]["items"]["feed"], layout.CostItem),
    (RESULT["product"], layout.Product),
    (RESULT["audit"], layout.Audit),
    (RESULT["audit"]["lines"][0], layout.AuditLine),
    (RESULT["starts"][0], layout.Start),
    (RESULT["provenance"], layout.Provenance),
]


@pytest.mark.parametrize(("part", "declared"), PARTS, ids=[declared.__name__ for _, declared in PARTS])
def test_every_key_is_declared(part, declared):
    assert set(part) <= set(declared.__annotations__)


def test_the_sample_leaves_nothing_out():
    assert set(RESULT) == set(layout.Result.__annotations__)
