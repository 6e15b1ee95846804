import json
import math

from result_sample import result

from optimiser.report.as_json import as_json


def test_a_result_survives_the_way_there_and_back():
    assert json.loads(as_json(result())) == result()


def test_text_beyond_ascii_fits_every_encoding():
    assert as_json({"title": "Größe"}).isascii()


def test_a_number_that_json_cannot_hold_is_null_and_named():
    bad = result(recycle_ratio={"value": math.nan, "unit": "-"})
    bad["starts"][0]["objective"] = math.inf
    read = json.loads(as_json(bad))
    assert read["recycle_ratio"]["value"] is None
    assert read["starts"][0]["objective"] is None
    assert read["warnings"][-1] == "No finite number came out for recycle_ratio.value, starts[0].objective."
    assert read["warnings"][:-1] == result()["warnings"]
