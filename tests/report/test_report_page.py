"""The page: self-contained, escaped, complete, the same every time."""

from __future__ import annotations

import re
from dataclasses import replace
from html.parser import HTMLParser

import pytest

from assess.report import render, write_report
from assess.report.words import FIXED_CAUTIONS
from assess.results import grouped

VIEWS = ["example", "single_span", "bare", "long_names", "nasty"]
VOID = {"meta", "link", "br", "img", "input", "hr"}


class Page(HTMLParser):
    """Tags with their attributes, the text shown, and whether every tag is closed in order."""

    def __init__(self, html: str) -> None:
        super().__init__(convert_charrefs=True)
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.words: list[str] = []
        self.open: list[str] = []
        self.feed(html)
        self.close()

    def handle_starttag(self, tag, attrs):
        self.tags.append((tag, dict(attrs)))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag, attrs):
        self.tags.append((tag, dict(attrs)))

    def handle_endtag(self, tag):
        assert self.open.pop() == tag

    def handle_data(self, data):
        if "style" not in self.open:
            self.words.append(data)

    @property
    def text(self) -> str:
        return " ".join(" ".join(self.words).split())


@pytest.fixture(params=VIEWS)
def html(request, page_of) -> str:
    return page_of(request.param)


def test_the_page_refers_to_nothing_outside_itself(html):
    page = Page(html)
    assert not {"script", "link", "img", "iframe", "object", "embed", "foreignobject"} & {
        t for t, _ in page.tags
    }
    for _, attributes in page.tags:
        for name, value in attributes.items():
            assert not name.startswith("on")
            if name in ("src", "href", "xlink:href"):
                assert (value or "").startswith("#")
            if name != "xmlns" and not name.startswith(("aria-", "title")):
                assert "http" not in (value or "")
    outside = re.sub(r'xmlns(:\w+)?="[^"]*"', "", html)
    assert not re.search(r"https?:|@import|@font-face|url\((?!#)", outside)


def test_every_tag_is_closed_in_order(html):
    assert Page(html).open == []


def test_every_drawing_has_a_role_and_is_told_in_words(html):
    page = Page(html)
    ids = {a["id"] for _, a in page.tags if "id" in a}
    drawings = [a for t, a in page.tags if t == "svg"]
    assert drawings
    for drawing in drawings:
        assert drawing["role"] == "img"
        assert set((drawing["aria-labelledby"] or "").split()) <= ids
    assert html.count("<svg") == len(re.findall(r"<svg[^>]*>\s*<title id=", html))


def test_ids_are_unique_and_every_reference_finds_its_id(html):
    page = Page(html)
    ids = [a["id"] for _, a in page.tags if "id" in a]
    assert len(ids) == len(set(ids))
    wanted = {v[1:] for _, a in page.tags for n, v in a.items() if n == "href" and v}
    wanted |= set(re.findall(r"url\(#([^)]+)\)", html))
    assert wanted <= set(ids)


def test_no_word_promises_more_than_the_report_can_hold(html):
    assert not re.search(r"\b(un)?safe(ly|ty)?\b", html, re.IGNORECASE)
    assert not re.search(r"\bok\b", Page(html).text, re.IGNORECASE)


def test_text_in_drawings_is_at_least_nine_points(html):
    sizes = [float(s) for s in re.findall(r"font-size: ([\d.]+)px", html)]
    assert sizes
    assert min(sizes) >= 9.0


def test_no_value_is_left_blank_or_told_by_a_dash(html):
    text = Page(html).text
    assert not re.search(r"\b(None|nan|inf)\b", text)
    assert not re.search(r"<td[^>]*>\s*(-|—|–)?\s*</td>", html)


def test_the_fixed_cautions_close_the_list_of_every_page(html):
    text = Page(html).text
    places = [text.index(c) for c in FIXED_CAUTIONS]
    assert places == sorted(places)
    assert places[-1] > text.index("The readings and how well they fit")


def test_the_fixed_cautions_say_what_must_never_be_left_out():
    told = " ".join(FIXED_CAUTIONS)
    for words in (
        "never replace",
        "Local codes",
        "licensed engineer must review",
        "closure needs no calculation",
        "Deflection proves stiffness, not strength",
    ):
        assert words in told


def test_sections_stand_in_the_order_of_the_job(page_of):
    heads = re.findall(r"<h2[^>]*>([^<]+)</h2>", page_of("example"))
    assert heads == [
        "What to do first",
        "The bridge",
        "Moments",
        "Utilisations",
        "The pads over the years",
        "The readings and how well they fit",
        "Cautions",
        "Provenance",
    ]


def test_verdict_number_and_cautions_stand_before_the_bridge(view_of, page_of):
    view, text = view_of("example"), Page(page_of("example")).text
    end = text.index("The bridge")
    for words in (*view.verdicts.values(), *view.verdict_cautions["north"], "Next visit by 14 May 2026"):
        assert text.index(words) < end
    assert text.index("utilisation 0.926 (0.879 to 0.981)") < end


def test_every_caution_of_every_result_is_printed(view_of, page_of):
    view = view_of("example")
    end = Page(page_of("example")).text.rindex("Cautions")
    tail = Page(page_of("example")).text[end:]
    for group in (view.cautions, view.calibration.cautions, view.assessment.cautions, view.trend.cautions):
        for caution in group:
            assert caution in tail


def test_digests_versions_options_and_seed_are_printed(view_of, page_of):
    view, text = view_of("example"), Page(page_of("example")).text
    for told in (
        view.bridge_digest,
        view.assessment.input_digest,
        view.calibration.input_digest,
        view.assessment.version,
        str(view.assessment.seed),
        view.factors,
        view.live[0],
        *view.options.keys(),
        *view.options.values(),
    ):
        assert told in text


def test_markup_and_mathematics_in_names_stay_text(page_of):
    html = page_of("nasty")
    assert "<script" not in html
    text = Page(html).text
    assert "<script>alert(1)</script> $x$" in text
    assert "$x$" in html


def test_control_characters_in_names_do_not_break_a_drawing(view_of):
    view = view_of("single_span")
    girder = view.girders[0]
    states = [replace(s, state="T\x00\x1b1 --") for s in girder.states]
    page = render(replace(view, zero="bank\x07", girders=[replace(girder, states=states)]))
    assert "<svg" in page


def test_the_same_view_gives_the_same_bytes(view_of, page_of):
    assert render(view_of("example")) == page_of("example")


def test_what_is_missing_is_said_with_its_reason(page_of):
    text = Page(page_of("bare")).text
    for words in (
        "What to do not determined",
        "Next visit not determined: no trend was drawn up",
        "not determined: no calibration is kept",
        "not determined: no capacity given here",
        "capacity not given",
        "not determined: the bridge file does not say",
        "unknown",
    ):
        assert words in text


def test_uplift_and_suspects_are_named_in_words(page_of):
    text = Page(page_of("example")).text
    assert "uplift when live load lifts: least −32.5 kN" in text
    assert "suspect: past 3.29" in text
    assert "told by the assumption, not by the readings (31 % from readings)" in text


def test_wide_things_stand_in_boxes_that_can_be_focused(html):
    boxes = [a for _, a in Page(html).tags if (a.get("class") or "").split()[:1] == ["box"]]
    assert len(boxes) >= html.count("<table")
    for box in boxes:
        assert box["tabindex"] == "0"
        assert box["aria-label"]


def test_a_report_is_written_whole(tmp_path, view_of, page_of):
    path = tmp_path / "bridge.html"
    path.write_text("old")
    write_report(view_of("example"), path)
    assert path.read_text(encoding="utf-8") == page_of("example")
    assert list(tmp_path.iterdir()) == [path]


def test_a_report_that_cannot_be_put_in_place_leaves_nothing_behind(tmp_path, view_of):
    path = tmp_path / "taken"
    path.mkdir()
    (path / "kept").write_text("kept")
    with pytest.raises(OSError):
        write_report(view_of("single_span"), path)
    assert [p.name for p in tmp_path.iterdir()] == ["taken"]
    with pytest.raises(OSError):
        write_report(view_of("single_span"), tmp_path / "missing" / "a.html")


def test_the_seats_stand_among_the_years_with_level_and_rate(page_of):
    page = page_of("example")
    assert "down 3.2 mm (sd 0.3 mm)" in page
    assert "0.410 (0.280 to 0.540) mm a year" in page


def test_what_is_said_alike_of_several_girders_is_said_once():
    told = ["north: a", "south: a", "b", "north: c"]
    assert grouped(told, ["north", "south"]) == ["north and south: a", "b", "north: c"]
