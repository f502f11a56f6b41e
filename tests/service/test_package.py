"""What is installed from this repository has everything that it needs."""
import os
import subprocess
import sys
import zipfile

from precontact_rules import released
from precontact_rules.sealing import field
from serving import ROOT


def test_the_wheel_holds_releases_pages_and_both_packages(wheel, tmp_path):
    names = set(zipfile.ZipFile(wheel).namelist())
    assert {f"precontact_rules/released/{row['version']}.json" for row in released.listing()} | {"precontact_rules/released/index.json"} <= names
    for package in ("rules/precontact_rules", "service/precontact_service"):
        folder = ROOT / package
        sources = {str(path.relative_to(folder.parent)) for path in folder.rglob("*") if path.suffix in (".py", ".html", ".css")}
        assert sources <= names, sources - names
    handheld = {f"precontact_rules/handheld/{path.relative_to(ROOT / 'rules' / 'handheld').as_posix()}" for path in field.page_files().values()}
    assert handheld and handheld <= names, handheld - names
    # Installed, that is without the source tree beside it, the page is found inside the package.
    zipfile.ZipFile(wheel).extractall(tmp_path / "installed")
    listing = "from precontact_rules.sealing import field; print(*field.page_files(), field.HANDHELD)"
    environment = {**os.environ, "PYTHONPATH": str(tmp_path / "installed")}
    said = subprocess.run([sys.executable, "-c", listing], cwd=tmp_path, env=environment, check=True, capture_output=True, text=True).stdout
    assert said.split() == [*field.page_files(), str(tmp_path / "installed" / "precontact_rules" / "handheld")]
    script = next(name for name in names if name.endswith("entry_points.txt"))
    assert "precontact-rules" in zipfile.ZipFile(wheel).read(script).decode()
