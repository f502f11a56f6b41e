"""Makes the Python environment of a lock file, once: in .cache of the repository, named by the lock's digest. Standard library only."""
import fcntl
import hashlib
import os
import shutil
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
CACHE = ROOT / ".cache"
LEAST_PYTHON = (3, 11)


class Unable(Exception):
    """What stands in the way, in words for the person who ran the command."""


def environment(name, lock):
    """Path of a Python that has exactly what `lock` names; made if it is not there yet."""
    if sys.version_info < LEAST_PYTHON:
        raise Unable(f"Python {'.'.join(map(str, LEAST_PYTHON))} or later is needed; this is {sys.version.split()[0]}.")
    key = hashlib.sha256(lock.read_bytes() + sys.version.encode() + os.fsencode(sys.base_prefix)).hexdigest()[:12]
    folder = CACHE / f"{name}-{key}"
    python = folder / "bin" / "python"
    CACHE.mkdir(exist_ok=True)
    with open(CACHE / f"{name}.lock", "w") as guard:
        fcntl.flock(guard, fcntl.LOCK_EX)               # two commands at once make it once
        if not (folder / "complete").exists():
            print(f"Making the Python environment in {folder.relative_to(ROOT)} (once; a minute or so) ...", file=sys.stderr, flush=True)
            shutil.rmtree(folder, ignore_errors=True)
            _make(folder)
            _install(python, lock)
            (folder / "complete").touch()
            _drop_older(name, folder)
    return python


def _make(folder):
    command = [sys.executable, "-m", "venv", str(folder)]
    made = subprocess.run(command, capture_output=True, text=True)
    if made.returncode and installed_by_apt(["python3-venv"]):
        # Debian keeps what a new environment's pip comes from in a package of its own.
        shutil.rmtree(folder, ignore_errors=True)
        made = subprocess.run(command, capture_output=True, text=True)
    if made.returncode:
        shutil.rmtree(folder, ignore_errors=True)
        raise Unable("Python cannot make an environment here. On Debian: apt-get install python3-venv\n" + (made.stdout + made.stderr).strip())


def _install(python, lock):
    # --require-hashes: only the very files that the lock names. --only-binary: nothing is compiled here.
    command = [str(python), "-m", "pip", "install", "--quiet", "--quiet", "--disable-pip-version-check", "--no-input",
               "--require-hashes", "--only-binary", ":all:", "-r", str(lock)]
    if subprocess.run(command).returncode:
        raise Unable(f"Not everything that {lock.relative_to(ROOT)} names could be installed; pip's message is above.")


def _drop_older(name, current):
    for folder in CACHE.glob(f"{name}-*"):
        if folder != current and folder.is_dir():
            shutil.rmtree(folder, ignore_errors=True)


def installed_by_apt(packages):
    """Install Debian packages where this process may; False where it may not or apt fails."""
    if not shutil.which("apt-get") or os.geteuid():
        return False
    quiet = {"env": {**os.environ, "DEBIAN_FRONTEND": "noninteractive"}, "stdout": subprocess.DEVNULL}
    print(f"Installing {', '.join(packages)} with apt-get ...", file=sys.stderr, flush=True)
    subprocess.run(["apt-get", "update", "-qq"], **quiet)
    return not subprocess.run(["apt-get", "install", "-y", "-qq", "--no-install-recommends", *packages], **quiet).returncode


def python_path():
    """PYTHONPATH that makes both packages of the repository importable, as they are now."""
    return os.pathsep.join([str(ROOT / "rules"), str(ROOT / "service")])
