"""Makes sure that Flosswright runs in an environment that has what it needs.

Only the standard library: this runs before anything is installed. Outside a virtual environment a
private one is made in `.venv` beside manage.py; inside one nothing is ever installed.
"""

import hashlib
import importlib.metadata
import importlib.util
import json
import os
import re
import shutil
import subprocess
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import NoReturn

BASE_DIR = Path(__file__).resolve().parent.parent
ENVIRONMENT = BASE_DIR / ".venv"
PYTHON = ENVIRONMENT / ("Scripts/python.exe" if os.name == "nt" else "bin/python")
# All of these lie in .venv, so that deleting that one folder always gives a clean start.
LOCK = ENVIRONMENT / "flosswright.lock"
UNFINISHED = ENVIRONMENT / "flosswright-unfinished"
STAMP = ENVIRONMENT / "flosswright-stamp.json"
PIP_LOG = ENVIRONMENT / "flosswright-install.log"
REQUIREMENTS = "requirements.txt"
TEST_REQUIREMENTS = "requirements-test.txt"

_NO_CONNECTION = re.compile(
    r"connection broken by|Failed to establish|NameResolutionError|Network is unreachable"
    r"|name resolution|getaddrinfo failed|timed out"
)


class CannotRun(Exception):
    """Carries the one sentence that tells what is wrong and what to do."""


def run(argv: Sequence[str]) -> None:
    try:
        files = _requirement_files(argv)
        if not _in_environment():
            _prepare_environment(files)
            _run_again()
        _check_complete(files)
        _run_django(list(argv))
    except CannotRun as refusal:
        print(refusal, file=sys.stderr)
        raise SystemExit(2) from None
    except KeyboardInterrupt:
        print("\nStopped.", file=sys.stderr)
        raise SystemExit(130) from None


def _requirement_files(argv: Sequence[str]) -> list[str]:
    return [REQUIREMENTS, TEST_REQUIREMENTS] if argv[1:2] == ["test"] else [REQUIREMENTS]


def _in_environment() -> bool:
    return sys.prefix != sys.base_prefix or Path(sys.prefix, "conda-meta").is_dir()


def _run_again() -> NoReturn:
    command = [str(PYTHON), *sys.orig_argv[1:]]
    if os.name == "nt":
        # execv on Windows returns to the shell at once, with the new process still writing to it.
        raise SystemExit(subprocess.call(command))
    sys.stdout.flush()
    sys.stderr.flush()
    os.execv(PYTHON, command)


def _run_django(argv: list[str]) -> None:
    os.environ.setdefault("DJANGO_SETTINGS_MODULE", "planner.settings.local")
    if argv[1:2] != ["test"]:
        argv = _take_data_folder(argv)
    from django.core.management import execute_from_command_line
    from environs import EnvError

    try:
        execute_from_command_line(argv)
    except EnvError as error:
        raise CannotRun(str(error)) from error


def _take_data_folder(argv: list[str]) -> list[str]:
    """Settings need the folder before Django reads any command's own arguments."""
    for place, argument in enumerate(argv[2:], start=2):
        name, equals, folder = argument.partition("=")
        if name == "--data":
            rest = place + 1 if equals else place + 2
            folder = folder if equals else "".join(argv[place + 1 : rest])
            if not folder or "\0" in folder:
                raise CannotRun("--data needs the name of a folder, for example --data ~/stall.")
            os.environ["FLOSSWRIGHT_DATA"] = str(Path(folder).expanduser().absolute())
            return [*argv[:place], *argv[rest:]]
    return argv


# What is missing


def _check_complete(files: Sequence[str]) -> None:
    missing = find_missing(files)
    if missing:
        raise CannotRun(
            f"Missing: {', '.join(missing)}. Install with: python -m pip install -r {files[-1]}"
        )


def find_missing(files: Sequence[str]) -> list[str]:
    """The requirements that this very Python does not meet, as they are written in the files."""
    requirements = [line for file in files for line in _requirements(file)]
    return [text for text in dict.fromkeys(requirements) if not _is_met(text)]


def _requirements(file: str) -> list[str]:
    text = (BASE_DIR / file).read_text(encoding="utf-8")
    lines = (re.sub(r"(^|\s)#.*", "", line).strip() for line in text.splitlines())
    return [line for line in lines if line and not line.startswith("-")]


def _is_met(requirement: str) -> bool:
    name = re.split(r"[\s<>=!~;\[]", requirement, maxsplit=1)[0]
    try:
        installed = _numbers(importlib.metadata.version(name))
    except importlib.metadata.PackageNotFoundError:
        return False
    lower = re.search(r">=\s*([\d.]+)", requirement)
    upper = re.search(r"<\s*([\d.]+)", requirement)
    return (lower is None or installed >= _numbers(lower[1])) and (
        upper is None or installed < _numbers(upper[1])
    )


def _numbers(version: str) -> tuple[int, ...]:
    released = re.match(r"\d+(\.\d+)*", version)
    return tuple(map(int, released[0].split("."))) if released else ()


# The private environment


def _prepare_environment(files: Sequence[str]) -> None:
    if _is_ready(files):
        return
    try:
        ENVIRONMENT.mkdir(exist_ok=True)
        with locked(LOCK, "Another start is preparing .venv; waiting for it"):
            if not _is_ready(files):
                _make_ready(files)
    except OSError as error:
        raise CannotRun(
            f"Flosswright cannot write its environment {ENVIRONMENT} ({error.strerror or error}): "
            "move the whole folder to a place where you may write, then run this again."
        ) from error


def _is_ready(files: Sequence[str]) -> bool:
    stamp = _read_stamp()
    return (
        not UNFINISHED.exists()
        and _is_environment()
        and stamp.get("python") == os.path.realpath(PYTHON)
        and all(stamp.get(file) == _fingerprint(file) for file in files)
    )


def _make_ready(files: Sequence[str]) -> None:
    stamp = _read_stamp()
    # A system upgrade changes the Python behind .venv, and with it all that is installed there.
    outdated = stamp.get("python") not in (None, os.path.realpath(PYTHON))
    if UNFINISHED.exists() or outdated or not _is_environment() or not _python_works():
        _build()
        stamp = {}
    for file in files:
        if not _is_complete(file):
            _install(file)
        stamp |= {"python": os.path.realpath(PYTHON), file: _fingerprint(file)}
        _write_stamp(stamp)


def _build() -> None:
    own = {LOCK.name, UNFINISHED.name, PIP_LOG.name}
    contents = [entry for entry in ENVIRONMENT.iterdir() if entry.name not in own]
    if contents and not (UNFINISHED.exists() or Path(ENVIRONMENT, "pyvenv.cfg").exists()):
        raise CannotRun(
            f"{ENVIRONMENT} is in the way: it holds something other than a Python environment. "
            "Move it elsewhere, then run this again."
        )
    _refuse_without_venv()
    _say("making a private Python environment in .venv (only this once)")
    UNFINISHED.touch()
    for entry in contents:
        if entry.is_dir() and not entry.is_symlink():
            shutil.rmtree(entry)
        else:
            entry.unlink()
    made = _captured([sys.executable, "-P", "-m", "venv", str(ENVIRONMENT)])
    if made.returncode:
        if "ensurepip" in made.stdout:
            raise CannotRun(_NO_VENV)
        raise CannotRun(f"Python could not make {ENVIRONMENT}: {_last_line(made.stdout)}")
    UNFINISHED.unlink()


_NO_VENV = (
    "This Python cannot make virtual environments: install the package python3-venv "
    "(Debian, Ubuntu: sudo apt install python3-venv) or a complete Python, then run this again."
)


def _refuse_without_venv() -> None:
    if any(importlib.util.find_spec(module) is None for module in ("venv", "ensurepip")):
        raise CannotRun(_NO_VENV)


def _install(file: str) -> None:
    _say(f"installing what {file} lists; this takes a minute or two")
    UNFINISHED.touch()
    command = [str(PYTHON), "-P", "-m", "pip", "install", "--no-input", "--progress-bar", "off"]
    command += ["--disable-pip-version-check", "--log", str(PIP_LOG), "-r", str(BASE_DIR / file)]
    PIP_LOG.unlink(missing_ok=True)
    process = subprocess.Popen(
        command,
        stdin=subprocess.DEVNULL,
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
        errors="replace",
        env={**os.environ, "PIP_USER": "0"},
    )
    try:
        output = _follow(process)
    except BaseException:
        process.kill()
        raise
    # Only a killed or interrupted pip leaves packages by half; a failing one undoes its work.
    UNFINISHED.unlink()
    if process.returncode:
        raise CannotRun(_reason(file, output))


def _follow(process: "subprocess.Popen[str]") -> str:
    """Tell each of pip's steps in a line."""
    assert process.stdout is not None
    output = []
    with process:
        for line in process.stdout:
            output.append(line)
            if line.startswith("Collecting "):
                _say(f"  fetching {line.split()[1]}")
            elif line.startswith("Installing collected packages:"):
                _say(f"  unpacking {line.count(',') + 1} of them")
    return "".join(output)


def _reason(file: str, output: str) -> str:
    # What went wrong with a connection is told in the log alone where pip may not try again.
    log = PIP_LOG.read_text(encoding="utf-8", errors="replace") if PIP_LOG.exists() else output
    if _NO_CONNECTION.search(log):
        return (
            f"No network: Flosswright could not fetch what {file} lists. Connect to the internet "
            "for this first run, then run this again; later it works without."
        )
    return f"pip could not install {file}: {_last_line(output)} (all it said: {PIP_LOG})"


def _is_environment() -> bool:
    # Without pyvenv.cfg its Python would take itself for the system's, and start all this again.
    return Path(ENVIRONMENT, "pyvenv.cfg").exists() and PYTHON.exists()


def _python_works() -> bool:
    return (
        _captured(
            [str(PYTHON), "-c", "import sys; sys.exit(sys.version_info < (3, 11))"]
        ).returncode
        == 0
    )


def _is_complete(file: str) -> bool:
    """Asks the private Python itself: an environment made by hand is taken as it is."""
    code = "import sys; from planner.bootstrap import find_missing; sys.exit(bool(find_missing(sys.argv[1:])))"
    return _captured([str(PYTHON), "-c", code, file], folder=BASE_DIR).returncode == 0


def _captured(
    command: Sequence[str], folder: Path | None = None
) -> "subprocess.CompletedProcess[str]":
    return subprocess.run(
        command,
        check=False,
        cwd=folder,
        stdin=subprocess.DEVNULL,
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
        errors="replace",
    )


def _fingerprint(file: str) -> str:
    return hashlib.sha256((BASE_DIR / file).read_bytes()).hexdigest()


def _read_stamp() -> dict[str, str]:
    try:
        stamp = json.loads(STAMP.read_text(encoding="utf-8"))
    except (OSError, ValueError):
        return {}
    return stamp if isinstance(stamp, dict) else {}


def _write_stamp(stamp: dict[str, str]) -> None:
    new = STAMP.with_suffix(".new")
    new.write_text(json.dumps(stamp), encoding="utf-8")
    new.replace(STAMP)


@contextmanager
def locked(path: Path, waiting: str) -> Iterator[None]:
    """Hold a lock that the system itself releases when this process ends, however it ends."""
    with path.open("a") as file:
        if not _try_lock(file.fileno()):
            _say(waiting)
            while not _try_lock(file.fileno(), wait=True):
                pass
        yield


if os.name == "nt":

    def _try_lock(descriptor: int, *, wait: bool = False) -> bool:
        import msvcrt

        try:
            # LK_LOCK gives up after ten seconds; the caller asks again.
            msvcrt.locking(descriptor, msvcrt.LK_LOCK if wait else msvcrt.LK_NBLCK, 1)  # type: ignore[attr-defined]
        except OSError:
            return False
        return True

else:

    def _try_lock(descriptor: int, *, wait: bool = False) -> bool:
        import fcntl

        try:
            fcntl.flock(descriptor, fcntl.LOCK_EX | (0 if wait else fcntl.LOCK_NB))
        except BlockingIOError:
            return False
        return True


def _last_line(output: str) -> str:
    lines = [line.strip() for line in output.splitlines() if line.strip()]
    errors = [line for line in lines if line.startswith("ERROR:")]
    return (errors or lines or ["it did not say why"])[-1]


def _say(text: str) -> None:
    print(f"Flosswright: {text} ...", file=sys.stderr, flush=True)
