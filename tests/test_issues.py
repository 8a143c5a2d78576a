"""Issues as a BCF file that a general-purpose library reads."""

import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from bcf.v2.bcfxml import BcfXml

from analysis_core import pipeline
from analysis_core.findings import Finding
from analysis_core.job.reader import load
from analysis_core.report.issues import bcf_bytes, camera, issues_of

SAMPLES = Path(__file__).resolve().parents[1] / "sample_models"


@pytest.fixture(scope="module")
def outcome():
    job = load(SAMPLES / "quarry_lane.yaml")
    return pipeline.run(SAMPLES / "quarry_lane_physical_ifc4.ifc", job)


def read(data, tmp_path):
    path = tmp_path / "issues.bcf"
    path.write_bytes(data)
    with BcfXml.load(path) as bcf:
        return {
            handler.topic.title: (handler.topic, [*handler.viewpoints.values()])
            for handler in bcf.topics.values()
        }


def test_every_finding_is_a_topic_with_its_elements_and_a_camera(outcome, tmp_path):
    topics = read(bcf_bytes(outcome, issues_of(outcome)), tmp_path)

    assert len(topics) == len({(f.line, f.slug) for f in outcome.findings})
    finding = next(f for f in outcome.findings if f.slug == "assumed-continuous")
    topic, (view,) = topics[f"{finding.line}: assumed continuous"]
    assert topic.description == finding.message
    selected = [c.ifc_guid for c in view.visualization_info.components.selection.component]
    assert tuple(selected) == finding.elements
    assert view.visualization_info.perspective_camera.field_of_view == 60.0


def test_exporting_again_gives_the_same_topics(outcome):
    issues = issues_of(outcome)
    one, two = (bcf_bytes(outcome, issues, now=None)[:30] for _ in range(2))
    assert one == two


def test_the_camera_sees_every_point():
    points = [(0.0, 0.0, 3.0), (19.2, 0.0, 3.0), (6.0, 11.6, 7.0)]
    eye, direction, up = (np.array(v) for v in camera(points))

    assert np.linalg.norm(direction) == pytest.approx(1.0)
    assert direction @ up == pytest.approx(0.0, abs=1e-12)
    for point in points:
        ray = np.array(point) - eye
        angle = math.acos(ray @ direction / np.linalg.norm(ray))
        assert math.degrees(angle) < 30.0


def test_hostile_names_stay_text(outcome, tmp_path):
    nasty = Finding("warning", "odd", "<Topic Guid='x'/>\x00 & ]]> \ud800", ("no guid",), None)
    topics = read(bcf_bytes(outcome, issues_of(replace(outcome, findings=(nasty,)))), tmp_path)

    assert topics["Odd"][0].description == "<Topic Guid='x'/> & ]]> "


def seen(view, point):
    """Whether a point lies within the cone that the camera of a viewpoint shows."""
    camera_ = view.visualization_info.perspective_camera
    eye, direction = (
        np.array([v.x, v.y, v.z]) for v in (camera_.camera_view_point, camera_.camera_direction)
    )
    ray = np.array(point) - eye
    angle = math.acos(ray @ direction / np.linalg.norm(ray) / np.linalg.norm(direction))
    return math.degrees(angle) < camera_.field_of_view / 2.0


def test_the_camera_shows_the_elements_of_other_lines_and_of_bearings_too(outcome, tmp_path):
    first, last = outcome.model.lines[0], outcome.model.lines[-1]
    bearing = next(j for j in last.joints if j.element)
    elements = (first.members[0].element, last.members[0].element, bearing.element)
    told = Finding("warning", "odd", "Two lines and a column.", elements, first.mark)
    topics = read(bcf_bytes(outcome, issues_of(replace(outcome, findings=(told,)))), tmp_path)

    (view,) = topics[f"{first.mark}: odd"][1]
    for line in (first, last):
        ends = line.members[0].start, line.members[0].end
        assert all(seen(view, line.joints[i].point) for i in ends)
    assert seen(view, bearing.point)


def test_a_finding_of_a_bearing_alone_is_seen_from_near(outcome, tmp_path):
    line = outcome.model.lines[0]
    bearing = next(j for j in line.joints if j.element)
    alone = Finding("warning", "odd", "A column.", (bearing.element,), None)
    topics = read(bcf_bytes(outcome, issues_of(replace(outcome, findings=(alone,)))), tmp_path)

    (view,) = topics["Odd"][1]
    assert seen(view, bearing.point)
    assert not all(seen(view, j.point) for other in outcome.model.lines for j in other.joints)


def test_the_same_words_of_two_elements_are_two_topics(outcome, tmp_path):
    lines = outcome.model.lines[:2]
    twice = tuple(Finding("note", "odd", "As assumed.", (x.members[0].element,)) for x in lines)
    path = tmp_path / "issues.bcf"
    path.write_bytes(bcf_bytes(outcome, issues_of(replace(outcome, findings=twice))))

    with BcfXml.load(path) as bcf:
        assert len(bcf.topics) == 2
