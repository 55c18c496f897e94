"""The report in a real browser; skipped where there is none."""

from __future__ import annotations

import re
import shutil
import subprocess
from pathlib import Path

import pytest

from tests.report.tender.test_report import driven, hostile_files, staged_files

BROWSER = shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("chrome")
pytestmark = pytest.mark.skipif(BROWSER is None, reason="no chromium is installed")

PROBE = """<!DOCTYPE html><title>wait</title>
<iframe id="f" src="report.html" style="width:{width}px;height:900px;border:0"></iframe>
<script>
document.getElementById("f").onload = event => {{
  const page = event.target.contentDocument;
  const pictures = [...page.images];
  const drawn = pictures.filter(p => p.complete && p.naturalWidth > 0 && p.clientWidth > 0);
  document.title = [page.documentElement.scrollWidth, pictures.length, drawn.length,
    page.querySelectorAll("tbody tr").length].join(" ");
}};
</script>
"""
"""Shows the report in a frame of some width, and says in its title what was laid out."""


def browse(*arguments: str, profile: Path) -> subprocess.CompletedProcess[str]:
    assert BROWSER is not None
    return subprocess.run(
        [
            BROWSER,
            "--headless",
            "--no-sandbox",
            "--disable-gpu",
            f"--user-data-dir={profile}",
            *arguments,
        ],
        capture_output=True,
        text=True,
        timeout=120,
    )


def reports() -> dict[str, bytes]:
    return {
        "staged": staged_files()["report.html"],
        "driven": driven().files()["report.html"],
        "hostile": hostile_files()["report.html"],
    }


@pytest.mark.parametrize("width", [1280, 390])
@pytest.mark.parametrize("which", ["staged", "driven", "hostile"])
def test_nothing_is_wider_than_the_window_and_every_figure_shows(tmp_path, which, width):
    (tmp_path / "report.html").write_bytes(reports()[which])
    (tmp_path / "probe.html").write_text(PROBE.format(width=width))
    done = browse(
        "--allow-file-access-from-files",
        "--enable-logging=stderr",
        "--virtual-time-budget=5000",
        "--dump-dom",
        (tmp_path / "probe.html").as_uri(),
        profile=tmp_path / "profile",
    )
    found = re.search(r"<title>(\d+) (\d+) (\d+) (\d+)</title>", done.stdout)
    assert found, done.stderr
    wide, pictures, drawn, rows = map(int, found.groups())
    assert wide <= width
    assert pictures == drawn > 2
    assert rows > 20
    # What the page may not do, as a request would be, shows on the console.
    assert "CONSOLE" not in done.stderr


def test_it_prints_with_every_figure_whole(tmp_path):
    pypdf = pytest.importorskip("pypdf")
    (tmp_path / "report.html").write_bytes(reports()["driven"])
    target = tmp_path / "print.pdf"
    browse(
        "--no-pdf-header-footer",
        f"--print-to-pdf={target}",
        (tmp_path / "report.html").as_uri(),
        profile=tmp_path / "profile",
    )
    pages = pypdf.PdfReader(target).pages
    assert 4 <= len(pages) <= 16
    text = "".join(page.extract_text() for page in pages)
    assert "station by station" in text
    assert "How to get this report again" in text
