"""The calculation sheet: complete, self-contained, adding up, and safe with hostile names."""

import re
from dataclasses import replace
from decimal import Decimal
from html.parser import HTMLParser
from pathlib import Path

import pytest

from analysis_core import pipeline
from analysis_core.cli import main
from analysis_core.job.reader import load, parse

SAMPLES = Path(__file__).resolve().parents[1] / "sample_models"
MODEL = SAMPLES / "quarry_lane_physical_ifc4.ifc"
JOB = load(SAMPLES / "quarry_lane.yaml")
EMPTY = {"meta", "br", "line", "path", "rect", "circle", "polyline"}

# End tags that HTML allows to leave out, and what ends them (living standard, 13.1.2.4).
OPTIONAL = {"td", "th", "tr", "li", "thead", "tbody"}
CELLS = {"td", "th"}
ENDED_BY = {
    "td": CELLS, "th": CELLS, "tr": CELLS | {"tr"}, "tbody": CELLS | {"tr", "thead"}, "li": {"li"},
}  # fmt: skip


class Reader(HTMLParser):
    """Tags in order, and tables as rows of (class of the row, texts of its cells)."""

    def __init__(self, text):
        super().__init__()
        self.tags, self.open, self.tables, self.captions = [], [], [], []
        self.attributes = []
        self.feed(text)

    def handle_starttag(self, tag, attrs):
        attrs = dict(attrs)
        self.tags.append(tag)
        self.attributes.append((tag, attrs))
        while self.open and self.open[-1] in ENDED_BY.get(tag, ()):
            self.open.pop()
        if tag not in EMPTY:
            self.open.append(tag)
        if tag == "table":
            self.tables.append((attrs.get("class", ""), []))
        if tag == "tr":
            self.tables[-1][1].append((attrs.get("class", ""), []))
        if tag in ("td", "th"):
            self.tables[-1][1][-1][1].append("")

    def handle_startendtag(self, tag, attrs):
        self.tags.append(tag)
        self.attributes.append((tag, dict(attrs)))

    def handle_endtag(self, tag):
        while self.open[-1] != tag and self.open[-1] in OPTIONAL:
            self.open.pop()
        assert self.open.pop() == tag

    def handle_data(self, data):
        if "caption" in self.open:
            self.captions.append(data)
        if {"td", "th"} & set(self.open):
            self.tables[-1][1][-1][1][-1] += data


@pytest.fixture(scope="module")
def outcome():
    return pipeline.run(MODEL, JOB)


@pytest.fixture(scope="module")
def text(outcome):
    return pipeline.sheet(outcome, JOB, date="2026-01-01")


@pytest.fixture(scope="module")
def read(text):
    return Reader(text)


def test_every_line_has_its_drawings_tables_and_verification(outcome, text, read):
    assert read.open == []
    for result in outcome.lines:
        assert f">{result.line.mark}, " in text
    solved = len(outcome.lines)
    assert text.count("Verification: largest unbalance") == solved
    assert sum("Bearings" in c for c in read.captions) == solved
    assert text.count("class=diagram") == 3 * solved
    assert "licensed engineer" in text.lower()


def test_it_needs_no_network_and_no_script(text, read):
    assert not {"script", "link", "img", "iframe", "object", "form"} & set(read.tags)
    assert "http" not in text.replace("http://www.w3.org", "")
    assert "url(" not in text
    assert "@import" not in text


def test_tables_and_drawings_can_be_read_without_seeing_them(text, read):
    assert read.tags.count("caption") == read.tags.count("table")
    assert read.tags.count("svg") == sum(
        1 for tag, attrs in read.attributes if tag == "svg" and attrs.get("role") == "img"
    )
    assert ("html", {"lang": "en"}) in read.attributes
    # A head without scope is that of its column where its row has no data (HTML, 4.9.12.2).
    for row in re.findall(r"<tr[^>]*>(.*?)(?=<tr|<tbody|</table)", text, re.DOTALL):
        heads, cells = row.count("<th"), row.count("<td")
        assert not cells or heads == row.count("<th scope=row>"), row[:200]


def test_every_printed_sum_is_the_sum_of_the_printed_numbers(read):
    seen = 0
    for class_, rows in read.tables:
        if class_ != "distribution":
            continue
        adding = {"held", "known", "balance", "carried"}
        kinds = [kind for kind, _ in rows]
        start = kinds.index("known") if "known" in kinds else kinds.index("held")
        sums = [Decimal(0)] * (len(rows[0][1]) - 1)
        for kind, cells in rows[start:]:
            if kind in adding:
                sums = [s + Decimal(c or "0") for s, c in zip(sums, cells[1:], strict=True)]
        (printed,) = [cells[1:] for kind, cells in rows if kind == "sum"]
        assert [Decimal(c) for c in printed] == sums
        seen += 1
    assert seen > 10


def test_a_release_balances_the_joint_within_the_rounding_of_its_factors(read):
    """What is balanced at a joint is minus its unbalance, as printed, to a unit per column."""
    for class_, rows in read.tables:
        if class_ != "distribution":
            continue
        for kind, cells in rows:
            if kind != "balance":
                continue
            unbalance = Decimal(re.search(r"unbalance (-?[\d.]+)\)", cells[0])[1])
            given = [Decimal(c) for c in cells[1:] if c]
            symmetric = any("across the axis" in c for _, r in rows for c in r)
            if not symmetric:
                assert abs(sum(given) + unbalance) <= Decimal("0.01") * (len(given) + 1)


def test_the_governing_distribution_ends_at_the_governing_moment(outcome, read):
    """The exact row of a state that governs hogging holds the hogging moment of the envelope."""
    first = outcome.lines[0].envelopes["strength"].members[0]
    wanted = f"{first.hogging.value / 1e3:.2f}"
    exact = [
        cells for class_, rows in read.tables if class_ == "distribution"
        for kind, cells in rows if kind == "exact"
    ]  # fmt: skip
    assert any(wanted in cells for cells in exact)


def test_hostile_names_stay_text(outcome):
    nasty = "<script>alert(1)</script>\"'&\u202e"
    names = dict.fromkeys(outcome.model.names, nasty)
    model = replace(outcome.model, names=names, title=nasty)

    text = pipeline.sheet(replace(outcome, model=model, file=nasty), parse(""), date="x")

    read = Reader(text)
    assert "script" not in read.tags
    assert "&lt;script&gt;" in text
    assert "\u202e" not in text


def test_one_storey_or_one_line_can_be_printed(tmp_path, capsys):
    sheet = tmp_path / "roof.html"
    arguments = ["sheet", str(MODEL), "--job", str(SAMPLES / "quarry_lane.yaml"), "-o", str(sheet)]

    assert main([*arguments, "--storey", "Roof"]) == 0
    roof = sheet.read_text(encoding="utf-8")
    assert "ROOF-01, " in roof
    assert "FF-01, First floor" not in roof
    assert main([*arguments, "--storey", "Rof"]) == 2
    assert "the nearest is 'Roof'" in capsys.readouterr().err


def test_units_are_those_of_the_job_file():
    job = load(SAMPLES / "quarry_lane_us.yaml")
    us = pipeline.run(SAMPLES / "quarry_lane_physical_ifc4_inch.ifc", job)

    text = pipeline.sheet(us, job, date="x")

    assert "kip·ft" in text
    assert "kN·m" not in text


FRAME = Path(__file__).resolve().parents[2] / "shared/ifc/structural/S14_rule_groups_ifc4x3.ifc"


def test_symbols_have_their_subscripts_and_numbers_stand_between_signs():
    from analysis_core.checks.working import Step
    from analysis_core.sheet.symbols import formula, numbers, symbols
    from analysis_core.units import display_units

    metric = display_units("metric", {})
    step = Step(
        "M_c,Rd", "{W_pl} {f_y} / {gamma_M0}", 2.0, "moment", "",
        (("W_pl", 628.4e-6, "section modulus"), ("f_y", 355e6, "stress"), ("gamma_M0", 1.0, "")),
    )  # fmt: skip
    assert symbols("M_c,Rd").text == "M<sub>c,Rd</sub>"
    assert symbols("χ_LT, λ_LT").text == "χ<sub>LT</sub>, λ<sub>LT</sub>"
    assert symbols("λ_LT²").text == "λ<sub>LT</sub>²"
    assert symbols("<b>_x").text == "&lt;b&gt;_x"
    assert formula(step).text == "W<sub>pl</sub> f<sub>y</sub> / γ<sub>M0</sub>"
    assert numbers(step, metric).text == "628.4 cm³ · 355.0 MPa / 1"
    squared = Step(
        "x", "π² {E} {L}² / 2", 1.0, "", "", (("E", 1e6, "stress"), ("L", 3.0, "length"))
    )
    assert numbers(squared, metric).text == "π² · 1.0 MPa · (3.000 m)² / 2"


def test_equal_lines_refer_to_the_first_of_them(outcome, text):
    """The joists FF-04 to FF-07 are equal in all that their distribution depends on."""
    section = text[text.index("id=line-FF-05") : text.index("id=line-FF-06")]
    first = text[text.index("id=line-FF-04") : text.index("id=line-FF-05")]
    assert "As for line <a href=#line-FF-04" in section.replace('"', "")
    assert "class=distribution" in first
    assert "class=distribution" not in section
    assert "class=distribution" in text[text.index("id=line-FF-02") : text.index("id=line-FF-03")]


def test_the_points_left_out_of_a_diagram_lie_on_its_lines():
    from analysis_core.sheet.diagrams import thinned

    bent = [(0.0, 0.0), (1.0, 1.0), (2.0, 2.0), (3.0, 2.0), (4.0, 2.0), (5.0, 9.0)]
    assert thinned(bent) == [(0.0, 0.0), (2.0, 2.0), (4.0, 2.0), (5.0, 9.0)]
    curve = [(float(x), x * x / 10.0) for x in range(21)]
    kept = dict(thinned(curve))
    for x, y in curve:
        low = max(k for k in kept if k <= x)
        high = min(k for k in kept if k >= x)
        line = kept[low] if low == high else (
            kept[low] + (kept[high] - kept[low]) * (x - low) / (high - low)
        )  # fmt: skip
        assert line == pytest.approx(y, abs=0.31)


def test_the_summary_names_the_largest_use_of_each_line(outcome, read):
    from analysis_core.checking.members import check_lines

    (rows,) = [r for _, r in read.tables if r[0][1] and r[0][1][0] == "Line"]
    uses = {cells[0]: cells[-2] for _, cells in rows[2:]}
    for mark, found in check_lines(outcome, JOB).items():
        worst = max(each.worst.use for each in found if each.worst)
        assert uses[mark] == f"{worst:.2f}"


def test_assumptions_are_listed_with_who_settled_them(read):
    (rows,) = [r for _, r in read.tables if r[0][1][:2] == ["Subject", "Taken as"]]
    settled = {cells[0]: (cells[1], cells[2]) for _, cells in rows[1:]}
    assert settled["Arrangements of actions"][1] == "job file"
    assert settled["Spans"] == ("between the axes of the bearings", "default")
    materials = {c[0] for _, r in read.tables if r[0][1][:2] == ["Material", "Kind"] for _, c in r}
    assert {"Concrete C30/37", "Steel S355"} <= materials


@pytest.mark.skipif(not FRAME.exists(), reason="the shared models are not here")
def test_a_frame_is_drawn_to_scale_as_it_stands():
    job = parse('materials: [{name: "ASTM A36", elastic_modulus: 29000 ksi}]')
    frame = pipeline.run(FRAME, job)
    text = pipeline.sheet(frame, job, date="x")

    drawing = text[text.index("Elevation, to scale") :]
    drawing = drawing[: drawing.index("</svg>")]
    lines = re.findall(r"<line x1=([\d.]+) y1=([\d.]+) x2=([\d.]+) y2=([\d.]+) "
                       r"class=member />", drawing)  # fmt: skip
    line = frame.lines[0].line
    assert len(lines) == len(line.members)
    scales = []
    for drawn, member in zip(lines, line.members, strict=True):
        x1, y1, x2, y2 = map(float, drawn)
        a, b = line.joints[member.start], line.joints[member.end]
        scales.append(((x2 - x1) ** 2 + (y2 - y1) ** 2) ** 0.5 / member.length)
        assert (y1 - y2) == pytest.approx(scales[-1] * (b.z - a.z), abs=0.15)
    assert max(scales) == pytest.approx(min(scales), rel=2e-3)


def test_a_line_that_failed_says_why_and_the_others_are_there():
    line = next(iter(pipeline.survey(MODEL, JOB).model.lines))
    broken = replace(line, mark="X-01", fault="its section could not be read.")
    survey = pipeline.survey(MODEL, JOB)
    model = replace(survey.model, lines=(*survey.model.lines, broken))
    outcome = pipeline.solve(replace(survey, model=model), JOB)

    text = pipeline.sheet(outcome, JOB, date="x")

    assert "This line was not analysed: its section could not be read." in text
    assert "FF-01, First floor" in text


def test_a_working_that_was_written_down_before_is_referred_to(text, read):
    """Joists FF-04 to FF-07 are of one section, so that their bending is worked out once."""
    places = set(re.findall(r"<div id=(w\d+) class=keep>", text))
    wanted = re.findall(r"Number by number as <a href=#(w\d+)>", text)

    assert wanted
    assert set(wanted) <= places
    section = text[text.index("id=line-FF-05") : text.index("id=line-FF-06")]
    (place,) = re.findall(r"Bending, FF-05.*?Number by number as <a href=#(w\d+)>", section)
    first = text[text.index(f"id={place} ") :][:2000]
    assert first.index("Bending, ") < first.index("<ol")
    # What it comes to stands beside the reference.
    (value,) = re.findall(r"Bending, FF-05.*?</a>: <i>.*?</i> = ([\d.]+) kN·m", section)
    assert f"= {value} kN·m" in first


def test_a_moment_over_a_bearing_has_one_label(text):
    """Both spans beside a bearing have one moment there: its label stands once."""
    for drawing in re.findall(r"<title>Moment envelope.*?</svg>", text, re.DOTALL):
        labels = re.findall(r"<text x=([\d.]+) y=([\d.]+)[^>]*>(-?[\d.]+)<", drawing)
        assert len(labels) == len(set(labels))


def test_the_figures_of_the_checks_stand_with_their_clauses_and_who_settled_them():
    """Values of EN 1993-1-1, 6.1 and EN 1992-1-1, 2.4.2.4 and annex C, from memory."""
    checks = replace(JOB.checks, replace={"gamma_M1": 1.1, "cover": 0.035})
    job = replace(JOB, checks=checks)
    found = Reader(pipeline.sheet(pipeline.run(MODEL, job), job))
    at = next(i for i, c in enumerate(found.captions) if "Figures of the checks" in c)
    rows = {cells[0]: cells[1:] for _, cells in found.tables[at][1]}
    assert rows["γM0"][0] == "1"
    assert rows["γM1"][0] == "1.1"
    assert rows["γM1"][3] == "job file, for 1"
    assert rows["cover"][0] == "35.0 mm"
    assert rows["fyk"][0] == "500.0 MPa"
    assert "6.1(1)" in rows["γM0"][2]
    assert rows["γc"][3] == "recommended, national"
