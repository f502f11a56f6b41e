"""What the handheld runtime reads, quotes and writes: the same as Python, shown by Node's own runner on files that Python writes."""
import os
import subprocess

import pytest

from . import words_side
from .conftest import HERE

EVERY_CODE = {"bad-characters", "missing", "not-applicable", "not-finite", "not-uncertain", "out-of-range", "too-few-items", "too-long",
              "too-many-items", "two-spreads", "unknown-choice", "unknown-field", "unknown-id", "wrong-type"}


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    return tmp_path_factory.mktemp("words")


def run(folder):
    """Node's own runner on words.test.js."""
    command, surroundings = ["node", "--test", HERE / "words.test.js"], {**os.environ, "WORDS": str(folder)}
    return subprocess.run(command, env=surroundings, capture_output=True, text=True, timeout=300)


def test_words(released_set, folder):
    (folder / "bundle.json").write_bytes(released_set.bytes)
    found = words_side.write(released_set.data, folder)
    done = run(folder)
    assert done.returncode == 0, done.stdout[-8000:]
    print(f"\n{found['valid']} of {words_side.BODIES * len(released_set.check_names)} bodies were valid")
    assert found["valid"] >= 1000 and found["codes"] == EVERY_CODE
