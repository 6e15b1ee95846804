"""Files as plain data that know where all stands; what is dangerous or broken is refused with its place."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimiser.inputs import InputError
from optimiser.inputs.yaml_reader import DEEPEST, LARGEST, parse_document, read_document

TEXT = """\
title: A case   # with a remark
feed:
  streams: {gas: {pressure: 25 bar}}
reactor:
  - bed: first
    volume: 3.50 m3
  - cool: second
flags: [true, ~, 1e3, 007, 'x: y', "8", 0x10, no]
"""


def told(text):
    with pytest.raises(InputError) as caught:
        parse_document(text, "case.yaml")
    return [(p.line, p.column, p.path, p.read, p.wanted) for p in caught.value.errors]


def test_data_are_plain():
    data = parse_document(TEXT, "case.yaml").data
    assert data["feed"] == {"streams": {"gas": {"pressure": "25 bar"}}}
    assert data["reactor"] == [{"bed": "first", "volume": "3.50 m3"}, {"cool": "second"}]
    assert data["flags"] == [True, None, 1000.0, 7, "x: y", "8", "0x10", "no"]


@pytest.mark.parametrize(
    ("path", "place"),
    [
        (("title",), (1, 8)),
        (("feed", "streams", "gas", "pressure"), (3, 29)),
        (("reactor", 0, "volume"), (6, 13)),
        (("reactor", 1), (7, 5)),
        (("reactor", 1, "sink"), (7, 5)),
        (("feed", "product_rate"), (3, 3)),
        (("nowhere",), (1, 1)),
    ],
)
def test_every_value_knows_its_place(path, place):
    assert parse_document(TEXT, "case.yaml").location(path) == place


def test_texts_are_kept_as_written():
    document = parse_document(TEXT, "case.yaml")
    assert document.text(("flags", 2)) == "1e3"
    assert document.text(("flags", 5)) == "8"
    assert document.dotted(("reactor", 0, "volume")) == "reactor.first.volume"


@pytest.mark.parametrize(
    ("text", "line", "column", "read", "wanted"),
    [
        ("a: 1\nb: 2\na: 3\n", 3, 1, "a", "it stands in line 1 too"),
        ("a: &x 1\nb: 2\n", 1, 4, "&x", "anchors are not understood"),
        (
            "a: !!python/object/apply:os.system [ls]\n",
            1,
            4,
            "tag:yaml.org,2002:python",
            "tags are not understood",
        ),
        ("a: !secret x\n", 1, 4, "!secret", "tags are not understood"),
        ("? [a, b]\n: 1\n", 1, 3, "", "a name before the colon"),
        ("a: 1\n---\nb: 2\n", 2, 1, "---", "one YAML document"),
        ("a: [1, 2\n", 2, 1, "", "readable YAML"),
        ("a: 1\n  b: 2\n", 2, 4, "b: 2", "readable YAML"),
        ("a:\n\tb: 2\n", 2, 1, "b: 2", "spaces, not tabs"),
        ("a: > 10 K\n", 1, 6, "a: > 10 K", "begins with > in quotes"),
        ("a: %x\n", 1, 4, "a: %x", "begins with this sign in quotes"),
        ("a: 'x\n", 2, 1, "", "readable YAML"),
    ],
)
def test_what_is_refused(text, line, column, read, wanted):
    first = told(text)[0]
    assert first[:2] == (line, column)
    assert read in first[3]
    assert wanted in first[4]


def test_an_alias_is_refused_beside_its_anchor():
    assert [t[3] for t in told("a: &x [1]\nb: *x\n")] == ["&x", "*x"]


def test_an_anchor_that_holds_itself_is_refused():
    assert "&x" in [t[3] for t in told("a: &x [*x]\n")]


def test_a_heap_of_aliases_does_not_grow():
    lines = ["a0: &a0 [x, x]"] + [f"a{k}: &a{k} [*a{k - 1}, *a{k - 1}]" for k in range(1, 200)]
    assert len(told("\n".join(lines))) == 200 + 2 * 199


@pytest.mark.parametrize("depth", [DEEPEST + 5, 5000])
def test_deep_nesting_is_refused(depth):
    assert "levels within one another" in told("a: " + "[" * depth + "]" * depth)[0][4]


def test_greater_or_equal_moves_no_column():
    document = parse_document("a: >= 10 K\nb:\n  - >= 5 K\n'c d': '>= 1'\n", "case.yaml")
    assert document.data == {"a": ">= 10 K", "b": [">= 5 K"], "c d": ">= 1"}
    assert document.location(("a",)) == (1, 4)
    assert document.location(("b", 0)) == (3, 5)


def test_the_sign_that_stands_for_greater_may_itself_be_written():
    assert parse_document('a: "\ue000"\nb: ">="\n', "case.yaml").data == {"a": "\ue000", "b": ">="}


def test_folded_and_literal_texts_stay_what_they_are():
    text = "a: >\n  one\n  two\nb: |\n  key: >= 3\n  x\n"
    assert parse_document(text, "case.yaml").data == {"a": "one two\n", "b": "key: >= 3\nx\n"}


def refused(path):
    with pytest.raises(InputError) as caught:
        read_document(path)
    return caught.value.errors[0]


def test_files_that_cannot_be_read(tmp_path):
    assert "can be read" in refused(tmp_path / "none.yaml").wanted
    assert "not a folder" in refused(tmp_path).wanted
    large = tmp_path / "large.yaml"
    large.write_bytes(b"#" * (LARGEST + 1))
    assert "at most 2 MB" in refused(large).wanted


def test_text_that_is_not_utf8(tmp_path):
    path = tmp_path / "latin.yaml"
    path.write_bytes("a: 1\nb: Prüfung\n".encode("latin-1"))
    problem = refused(path)
    assert (problem.line, problem.column) == (2, 6)
    assert "UTF-8" in problem.wanted


def test_text_with_a_byte_order_mark(tmp_path):
    path = tmp_path / "windows.yaml"
    path.write_bytes(b"\xef\xbb\xbfa: 1\r\nb: 2\r\n")
    document = read_document(path, "mine")
    assert document.data == {"a": 1, "b": 2}
    assert document.location(("b",)) == (2, 4)
    assert (document.file, document.path) == ("mine", path)


def said(text):
    """What is wanted in place of a text; nothing where it can be read."""
    try:
        parse_document(text, "case.yaml")
    except InputError as problem:
        return [p.wanted for p in problem.errors]
    return []


@given(st.text(max_size=200))
def test_any_text_is_read_or_refused_with_words(text):
    assert all(said(text))


@given(st.text("ab:-[]{}>=&*!#'\"|?, \n\t%@", max_size=60))
def test_any_heap_of_signs_is_read_or_refused_with_words(text):
    assert all(said(text))
