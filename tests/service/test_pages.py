"""The pages: complete, with nothing from elsewhere, no script, and contrast that WCAG AA asks for."""
import re
from html.parser import HTMLParser
from pathlib import Path

import precontact_service
import pytest
from precontact_service.problem_types import TYPES

STYLE = (Path(precontact_service.__file__).parent / "static" / "style.css").read_text()


class Page(HTMLParser):
    """Tags, attributes and ids of a page; fails on a tag that is not closed where it was opened."""

    VOID = {"meta", "link", "br", "img", "input", "hr"}

    def __init__(self, text):
        super().__init__()
        self.tags, self.open, self.headings = [], [], []
        self.feed(text)
        assert not self.open, self.open

    def handle_starttag(self, tag, attrs):
        self.tags.append((tag, dict(attrs)))
        if tag not in self.VOID:
            self.open.append(tag)
        if re.fullmatch(r"h[1-6]", tag):
            self.headings.append(int(tag[1]))

    def handle_endtag(self, tag):
        assert self.open and self.open.pop() == tag, tag


PATHS = ["/", "/problems/invalid-input", "/problems/missing"]


@pytest.mark.parametrize("path", PATHS)
def test_page_is_whole_and_calls_nobody(client, path):
    page = Page(client.get(path).text)
    tags = [tag for tag, _ in page.tags]
    assert "script" not in tags and "iframe" not in tags and "style" not in tags
    for tag, attributes in page.tags:
        assert not any(name.startswith("on") or name == "style" for name in attributes), (tag, attributes)
        for name in ("href", "src"):
            assert not re.match(r"(https?:)?//", attributes.get(name, "")), attributes
    assert ("html", {"lang": "en"}) in page.tags
    assert any(tag == "meta" and attributes.get("name") == "viewport" for tag, attributes in page.tags)
    assert tags.count("main") == tags.count("h1") == tags.count("title") == 1
    assert page.headings[0] == 1 and all(after - before <= 1 for before, after in zip(page.headings, page.headings[1:]))


@pytest.mark.parametrize("path", PATHS)
def test_every_link_leads_somewhere(client, path):
    page = Page(client.get(path).text)
    ids = [attributes["id"] for _, attributes in page.tags if "id" in attributes]
    assert len(ids) == len(set(ids))
    for _, attributes in page.tags:
        target = attributes.get("href", "")
        if target.startswith("#"):
            assert target[1:] in ids, target
        elif target:
            assert client.get(target).status_code == 200, target
        for reference in ("aria-labelledby", "aria-describedby"):
            assert attributes.get(reference, ids[0]) in ids


def test_every_operation_is_on_the_page_with_a_command(client):
    text = client.get("/").text
    for path, item in client.get("/v1/openapi.json").json["paths"].items():
        for operation in item.values():
            assert f'id="{operation["operationId"]}"' in text
        assert f"curl -s http://127.0.0.1:8080{path.split('{')[0]}" in text


def luminance(colour):
    """Relative luminance (WCAG 2.2)."""
    channels = (int(colour[i:i + 2], 16) / 255 for i in (1, 3, 5))
    red, green, blue = (c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in channels)
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue


@pytest.mark.parametrize("scheme", [0, 1], ids=["light", "dark"])
def test_contrast(scheme):
    colours = dict(re.findall(r"--(\w+): (#[0-9a-f]{6})", re.findall(r":root \{([^}]*)\}", STYLE)[scheme]))
    for ink in ("ink", "quiet", "mark"):
        for paper in ("paper", "well"):
            lighter, darker = sorted((luminance(colours[ink]), luminance(colours[paper])), reverse=True)
            assert (lighter + 0.05) / (darker + 0.05) >= 7, (ink, paper)


def test_every_code_that_the_packages_use_has_a_page():
    root = Path(precontact_service.__file__).parents[2]
    sources = [path.read_text() for folder in ("rules/precontact_rules", "service/precontact_service") for path in (root / folder).glob("*.py")]
    used = {code for text in sources for code in re.findall(r'(?:Problem\([^,\n]+(?:, | if )|_refuse\(|_Fault\(|ProblemError\(|code = )"([a-z][a-z0-9-]+)"', text)}
    assert len(used) > 15
    assert used <= TYPES.keys(), used - TYPES.keys()
