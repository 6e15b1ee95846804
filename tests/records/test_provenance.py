import hashlib
import json

from result_sample import RESULT

from optimiser.records.folders import open_named
from optimiser.records.provenance import provenance_text


def test_every_finished_file_is_named_with_its_hash(tmp_path):
    folder = open_named(tmp_path / "out")
    folder.write("case.yaml", "title: x\n")
    folder.write("run.log", "not over yet")
    text = provenance_text(RESULT["provenance"], folder, command=["setpoise", "solve", "x"], sets=["a=1"])
    record = json.loads(text)
    assert record["files"] == {"case.yaml": hashlib.sha256(b"title: x\n").hexdigest()}
    assert record["command"] == ["setpoise", "solve", "x"]
    assert record["sets"] == ["a=1"]
    assert RESULT["provenance"].items() <= record.items()
