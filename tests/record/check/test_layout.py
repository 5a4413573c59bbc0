"""Whether the pages of a record can be made again here, and what can make them where not."""

from __future__ import annotations

import pytest

from calcsheet.record.check.layout import MOST_CHARACTERS, same_engine, same_layout, to_install, too_long


def with_layout(record, **changes):
    return {**record, "layout": {**record["layout"], **changes}}


def test_a_record_made_here_has_our_layout(record, paged_record):
    assert same_layout(record)
    assert not same_engine(record)  # it was made without a PDF
    assert same_layout(paged_record)
    assert same_engine(paged_record)


@pytest.mark.parametrize("change", [{"code": "0" * 64}, {"libraries": {}}, {"libraries": {"matplotlib": "0.1"}}])
def test_other_sources_or_libraries_are_another_layout(record, change):
    assert not same_layout(with_layout(record, **change))


@pytest.mark.parametrize("engine", ["", "WeasyPrint 0.1", "PrintsWell 3", "WeasyPrint"])
def test_other_engines_are_not_ours(record, engine):
    assert not same_engine(with_layout(record, engine=engine))


def test_what_to_install_is_named(record):
    libraries = {**record["layout"]["libraries"], "matplotlib": "0.1"}
    said = to_install(with_layout(record, libraries=libraries, engine="WeasyPrint 0.1"))
    assert said.startswith(f"made by {record['programme']}; install that version with matplotlib 0.1, WeasyPrint 0.1")


def test_long_words_are_not_printed_again(record):
    assert too_long(record) == ""
    for part in (
        {"words": "a" * (MOST_CHARACTERS + 1)},
        {"own": "", "outputs": [{"text/html": "a" * (MOST_CHARACTERS + 1)}]},
    ):
        assert f"at most {MOST_CHARACTERS}" in too_long({**record, "notebook": [part]})
