from datetime import UTC, datetime

import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimiser.records.names import LONGEST_SLUG, run_name, slug

WHEN = datetime(2026, 3, 1, 14, 25, 30, tzinfo=UTC)


def test_a_name_says_when_and_what():
    assert run_name("Ammonia: 1000 t/d", WHEN) == "20260301T142530Z-ammonia-1000-t-d"


@pytest.mark.parametrize(
    ("title", "text"), [("", "case"), ("東京", "case"), ("Größe", "groe"), ("../../etc", "etc")]
)
def test_titles_of_every_kind_give_a_name(title, text):
    assert slug(title) == text


@given(st.text())
def test_a_slug_is_safe_on_every_file_system(title):
    text = slug(title)
    assert 0 < len(text) <= LONGEST_SLUG
    assert set(text) <= set("abcdefghijklmnopqrstuvwxyz0123456789-")
    assert not text.startswith("-")
