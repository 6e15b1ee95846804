import unicodedata

from hypothesis import given
from hypothesis import strategies as st

from optimiser.report.plain import UNSAFE, plain


def test_escape_sequences_are_shown_and_not_sent():
    assert plain("a\x1b[31mred\x07") == "a\\x1b[31mred\\x07"


def test_marks_that_turn_the_reading_direction_are_shown():
    assert plain("safe\u202eexe") == "safe\\u202eexe"


def test_lines_are_joined_and_letters_kept():
    assert plain("Größe\r\n東京") == "Größe  東京"


@given(st.text())
def test_nothing_unsafe_is_left(text):
    assert not {unicodedata.category(c) for c in plain(text)} & UNSAFE
