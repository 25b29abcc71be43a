"""The demo jobs: good jobs, said to be invented, that name no one and show what they are for."""

from __future__ import annotations

import pytest
from bracket import read

from intrados.compare.demo import demo_names, demo_text, demo_title
from intrados.compare.mistake import JobMistakes

each = pytest.mark.parametrize("name", demo_names())


@each
def test_a_demo_is_a_job_said_to_be_invented(name: str) -> None:
    text = demo_text(name)
    assert text.startswith("# Invented example")
    assert "It is no real part" in text
    job = read(text)
    assert job.title == demo_title(name)
    assert job.title.startswith("Fernhaven Slip: ")


@each
def test_its_loads_balance_or_are_clamped(name: str) -> None:
    for loading in read(demo_text(name)).loadings:
        assert loading.imbalance() is None


@each
def test_it_is_plain_text_of_a_page_s_width(name: str) -> None:
    text = demo_text(name)
    assert text.isascii()
    assert text.endswith("\n")
    assert max(map(len, text.splitlines())) <= 120


def test_they_cover_what_the_program_is_for() -> None:
    jobs = {name: read(demo_text(name)) for name in demo_names()}
    shapes = {section.shape for job in jobs.values() for section in job.sections.values()}
    assert {"trapezoid", "T", "rectangle"} <= shapes
    assert jobs["clamp-frame"].loadings[0].start == jobs["clamp-frame"].loadings[0].end == "free"
    assert {job.unit_set for job in jobs.values()} >= {"mm-N-MPa", "in-kip-ksi"}
    assert len(jobs["recovery-hook"].cases) == 2
    # Curved-beam theory is known to fail where the centroid radius is less than the depth.
    bracket = jobs["short-bracket"]
    radius = bracket.member.radius(1, 0.5)
    assert radius is not None
    assert radius < bracket.sections["lug"].depth


def test_an_unknown_demo_is_one_line_with_the_nearest() -> None:
    with pytest.raises(JobMistakes) as caught:
        demo_text("clamp-fram")
    assert caught.value.lines == ('demo:clamp-fram: no such demo; did you mean "clamp-frame"?',)
