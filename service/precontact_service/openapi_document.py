"""Write the OpenAPI document and its examples, or check that what is there is what the service is.

    python -m precontact_service.openapi_document openapi            write
    python -m precontact_service.openapi_document openapi --check    list what differs, and fail if anything does
"""
import argparse
import json
import sys
from pathlib import Path

from precontact_rules.sealing import KeyRing

from . import create_app
from .seals import Seals


def files(app):
    """{relative path: text} of everything that belongs in the folder."""
    document, apart = app.extensions["precontact-document"]()
    texts = {"openapi.json": json.dumps(document, indent=1, ensure_ascii=False) + "\n"}
    for name, content in apart.items():
        texts[f"examples/{name}.json"] = json.dumps(json.loads(content), indent=1, ensure_ascii=False) + "\n"
    return texts


def differing(folder, texts):
    """Relative paths that are missing, stale or superfluous."""
    there = {str(path.relative_to(folder)): path.read_text() for path in folder.rglob("*.json")} if folder.exists() else {}
    return sorted(name for name in there.keys() | texts.keys() if there.get(name) != texts.get(name))


def write(folder, texts):
    """Make the folder hold exactly these texts."""
    for name in differing(folder, texts):
        path = folder / name
        if name in texts:
            path.parent.mkdir(parents=True, exist_ok=True)
            path.write_text(texts[name])
        else:
            path.unlink()


def main(arguments=None):
    """Entry point; returns the exit status."""
    parser = argparse.ArgumentParser(prog="precontact_service.openapi_document", description=__doc__.splitlines()[0])
    parser.add_argument("folder", type=Path)
    parser.add_argument("--check", action="store_true", help="write nothing")
    given = parser.parse_args(arguments)
    texts = files(create_app(access_log=False, seals=Seals(KeyRing.example())))
    changed = differing(given.folder, texts)
    if given.check and changed:
        print("Not what the service is:", *changed, sep="\n  ")
        print("Run: python -m precontact_service.openapi_document", given.folder)
        return 1
    if not given.check:
        write(given.folder, texts)
    print(f"{len(texts)} files, {len(changed)} {'differ' if given.check else 'written'}.")
    return 0


if __name__ == "__main__":
    sys.exit(main())
