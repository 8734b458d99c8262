"""The project's own virtual environment, for scripts/demo and scripts/test: standard library only, any Python 3.

Finds a Python 3.11 or newer, makes .venv (never touching one without our mark), installs the project into it, and marks
it ready only then, with the digest of pyproject.toml; when that changes, .venv is made anew.
"""

from __future__ import print_function

import hashlib
import os
import shutil
import subprocess
import sys

ROOT = os.path.dirname(os.path.dirname(os.path.abspath(__file__)))
VENV = os.path.join(ROOT, ".venv")
OWNER = "stackdb-environment"
LEAST = (3, 11)
VERSIONS = ("3.14", "3.13", "3.12", "3.11")


class Stop(Exception):
    """A reason to stop, with the line to type."""


def say(text):
    """One line of progress."""
    print(text)
    sys.stdout.flush()


def version_of(python):
    """(major, minor) of an interpreter, or None if it does not run."""
    code = "import sys; print('%d %d' % sys.version_info[:2])"
    try:
        out = subprocess.check_output([python, "-c", code], stderr=subprocess.STDOUT)
    except (OSError, subprocess.CalledProcessError):
        return None
    try:
        return tuple(int(x) for x in out.decode("ascii", "replace").split())
    except ValueError:
        return None


def find_python():
    """An interpreter of 3.11 or newer: this one, else one on the PATH."""
    if sys.version_info[:2] >= LEAST:
        return sys.executable
    for version in VERSIONS:
        found = shutil.which("python" + version)
        if found and (version_of(found) or (0, 0)) >= LEAST:
            return found
    raise Stop(
        "Python 3.11 or newer is needed. On Debian or Ubuntu type: sudo apt-get install python3.11 python3.11-venv"
    )


def digest():
    """What .venv depends on."""
    total = hashlib.sha256()
    with open(os.path.join(ROOT, "pyproject.toml"), "rb") as handle:
        total.update(handle.read())
    return total.hexdigest()


def mark_path(venv):
    """Where our mark lies."""
    return os.path.join(venv, OWNER)


def read_mark(venv):
    """The mark's text: '' when it is ours but unfinished, None when the folder is not ours."""
    try:
        with open(mark_path(venv)) as handle:
            return handle.read().strip()
    except (IOError, OSError):
        return None


def write_mark(venv, text):
    """Claim a folder, or say that it is ready."""
    with open(mark_path(venv), "w") as handle:
        handle.write(text)


def venv_python(venv):
    """The interpreter inside."""
    name = os.path.join("Scripts", "python.exe") if os.name == "nt" else os.path.join("bin", "python")
    return os.path.join(venv, name)


def clean(venv):
    """Take away an environment of ours; one without our mark is never touched."""
    if not os.path.exists(venv):
        return
    if read_mark(venv) is None:
        raise Stop("%s is not ours: it was not made by these scripts. Move it away, then run this again." % venv)
    shutil.rmtree(venv)


def run(command):
    """Run a command and return whether it succeeded, its output shown only when it did not."""
    process = subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, cwd=ROOT)
    out = process.communicate()[0].decode("utf-8", "replace")
    return process.returncode == 0, out


def _has_pip(python):
    return run([python, "-m", "pip", "--version"])[0]


def create(python, venv):
    """Make the environment: with pip, else without and the machine's pip, else after installing what is missing."""
    os.makedirs(venv)
    write_mark(venv, "")
    if run([python, "-m", "venv", venv])[0] and _has_pip(venv_python(venv)):
        return [venv_python(venv), "-m", "pip"]
    made = run([python, "-m", "venv", "--without-pip", venv])[0]
    if made and _has_pip(python):
        # pip of the machine can install into another interpreter since version 22.3
        outside = [python, "-m", "pip", "--python", venv_python(venv)]
        if run(outside + ["--version"])[0]:
            return outside
    if hasattr(os, "geteuid") and os.geteuid() == 0 and shutil.which("apt-get"):
        say("installing python3-venv")
        run(["apt-get", "update"])
        if run(["apt-get", "install", "-y", "python3-venv"])[0]:
            if run([python, "-m", "venv", "--clear", venv])[0] and _has_pip(venv_python(venv)):
                write_mark(venv, "")
                return [venv_python(venv), "-m", "pip"]
    raise Stop("pip cannot be had for %s. Type: sudo apt-get install python3-venv python3-pip" % python)


def install(pip, extras):
    """Install the project, editable, with its extras."""
    ok, out = run(pip + ["install", "--disable-pip-version-check", "-q", "-e", ROOT + extras])
    if not ok:
        raise Stop("the installation failed:\n" + out)


def ready(extras=""):
    """The interpreter of an environment in which the project and its extras are installed."""
    wanted = digest() + extras
    mark = read_mark(VENV) if os.path.exists(VENV) else None
    has = mark.split("[")[0] if mark else None
    if has == digest() and (extras in mark) and os.path.exists(venv_python(VENV)):
        return venv_python(VENV)
    clean(VENV)
    python = find_python()
    say("making .venv with %s" % python)
    pip = create(python, VENV)
    say("installing stackdb" + extras)
    install(pip, extras)
    write_mark(VENV, wanted)
    return venv_python(VENV)
