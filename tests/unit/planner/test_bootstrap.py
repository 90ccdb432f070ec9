"""The first run on a bare Python: real processes, real environments, real pip.

A copy of manage.py and bootstrap.py stands in a folder of its own with one small requirement, and
with a stand-in for Django that tells how it was called.
"""

import ast
import json
import os
import shutil
import signal
import socket
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[3]
BARE_PYTHON = sys._base_executable
NO_SERVER = "http://127.0.0.1:9/simple"  # port 9, "discard" (RFC 863): nothing listens there

STAND_IN_FOR_DJANGO = """
import json, os, sys
def execute_from_command_line(argv):
    import tinyfloss
    print(json.dumps({"argv": argv[1:], "prefix": sys.prefix, "data": os.environ.get("FLOSSWRIGHT_DATA")}))
"""


@pytest.fixture
def wheels(tmp_path: Path) -> Path:
    folder = tmp_path / "wheels"
    folder.mkdir()
    add_wheel(folder, "1.0")
    return folder


def add_wheel(folder: Path, version: str) -> None:
    info = f"tinyfloss-{version}.dist-info"
    with zipfile.ZipFile(folder / f"tinyfloss-{version}-py3-none-any.whl", "w") as wheel:
        wheel.writestr("tinyfloss.py", "")
        wheel.writestr(
            f"{info}/METADATA", f"Metadata-Version: 2.1\nName: tinyfloss\nVersion: {version}\n"
        )
        wheel.writestr(
            f"{info}/WHEEL", "Wheel-Version: 1.0\nRoot-Is-Purelib: true\nTag: py3-none-any\n"
        )
        wheel.writestr(f"{info}/RECORD", f"tinyfloss.py,,\n{info}/METADATA,,\n{info}/WHEEL,,\n")


@pytest.fixture
def copy(tmp_path: Path) -> Path:
    folder = tmp_path / "a folder with spaces"
    (folder / "planner").mkdir(parents=True)
    shutil.copy(ROOT / "manage.py", folder)
    shutil.copy(ROOT / "planner" / "bootstrap.py", folder / "planner")
    (folder / "planner" / "__init__.py").touch()
    (folder / "requirements.txt").write_text("# why\ntinyfloss>=1.0,<3   # the one requirement\n")
    (folder / "requirements-test.txt").write_text("-r requirements.txt\nfloss-tester>=2  # more\n")
    (folder / "django" / "core").mkdir(parents=True)
    (folder / "django" / "__init__.py").touch()
    (folder / "django" / "core" / "__init__.py").touch()
    (folder / "django" / "core" / "management.py").write_text(STAND_IN_FOR_DJANGO)
    (folder / "environs.py").write_text("class EnvError(Exception): pass\n")
    return folder


def environment(**changes: str) -> dict[str, str]:
    hidden = ("PIP_", "PYTHON", "VIRTUAL_ENV", "DJANGO_", "FLOSSWRIGHT_", "CONDA_")
    kept = {key: value for key, value in os.environ.items() if not key.startswith(hidden)}
    return {**kept, "PIP_RETRIES": "0", "PIP_CONFIG_FILE": os.devnull, **changes}


def offline(wheels: Path) -> dict[str, str]:
    return environment(PIP_NO_INDEX="1", PIP_FIND_LINKS=str(wheels))


def run(folder: Path, *words: str, python: str = BARE_PYTHON, env: dict[str, str]):
    return subprocess.run(
        [python, str(folder / "manage.py"), *words],
        check=False,
        env=env,
        capture_output=True,
        text=True,
        timeout=120,
        stdin=subprocess.DEVNULL,
    )


def assert_refused(result, *parts: str) -> None:
    """Exit status 2, and below the lines of progress one sentence that holds these parts."""
    *progress, sentence = result.stderr.strip().splitlines()
    assert result.returncode == 2, result.stderr
    assert "Traceback" not in result.stderr
    assert all(line.startswith("Flosswright: ") for line in progress), result.stderr
    for part in parts:
        assert part in sentence
    assert result.stdout == ""


def test_first_run_installs_and_passes_everything_on(copy, wheels):
    first = run(copy, "sample", "--port", "90", env=offline(wheels))
    told = json.loads(first.stdout)
    assert told["argv"] == ["sample", "--port", "90"]
    assert Path(told["prefix"]) == copy / ".venv"
    assert first.stderr.splitlines() == [
        "Flosswright: making a private Python environment in .venv (only this once) ...",
        "Flosswright: installing what requirements.txt lists; this takes a minute or two ...",
        "Flosswright:   unpacking 1 of them ...",
    ]
    # Later runs need neither a network nor a folder that can be written.
    again = run(copy, "sample", env=environment(PIP_INDEX_URL=NO_SERVER))
    assert (again.returncode, again.stderr) == (0, "")

    # A changed list is installed into the same environment.
    add_wheel(wheels, "2.5")
    (copy / "requirements.txt").write_text("tinyfloss>=2,<3\n")
    changed = run(copy, "sample", env=offline(wheels))
    assert changed.returncode == 0
    assert "making" not in changed.stderr
    assert list((copy / ".venv").rglob("tinyfloss-2.5.dist-info"))

    # A system upgrade puts another Python behind it: then it is made anew.
    stamp = copy / ".venv" / "flosswright-stamp.json"
    stamp.write_text(json.dumps({**json.loads(stamp.read_text()), "python": "/usr/bin/python3.9"}))
    upgraded = run(copy, "sample", env=offline(wheels))
    assert upgraded.returncode == 0
    assert "making a private Python environment" in upgraded.stderr


def test_no_network_is_said_and_next_run_recovers(copy, wheels):
    alone = run(copy, "sample", env=environment(PIP_INDEX_URL=NO_SERVER))
    assert_refused(alone, "No network", "requirements.txt", "Connect to the internet")
    recovered = run(copy, "sample", env=offline(wheels))
    assert recovered.returncode == 0
    assert "making" not in recovered.stderr


def test_package_not_to_be_had_names_pips_reason(copy, tmp_path):
    empty = tmp_path / "empty"
    empty.mkdir()
    assert_refused(
        run(copy, "sample", env=offline(empty)), "pip could not install", "No matching distribution"
    )


@pytest.mark.skipif(os.name == "nt", reason="process groups are POSIX")
@pytest.mark.parametrize("end", [signal.SIGINT, signal.SIGKILL])
def test_first_run_interrupted_is_made_anew(copy, wheels, end):
    with socket.create_server(("127.0.0.1", 0)) as silent:
        address = f"http://127.0.0.1:{silent.getsockname()[1]}/simple"
        process = subprocess.Popen(
            [BARE_PYTHON, str(copy / "manage.py"), "sample"],
            env=environment(PIP_INDEX_URL=address),
            stderr=subprocess.PIPE,
            text=True,
            start_new_session=True,
        )
        silent.settimeout(60)
        connection, _ = silent.accept()  # pip asks, and waits for an answer
        os.killpg(process.pid, end)
        _, said = process.communicate(timeout=30)
        connection.close()
    assert "Traceback" not in said
    if end == signal.SIGINT:
        assert (process.returncode, said.splitlines()[-1]) == (130, "Stopped.")
    next_run = run(copy, "sample", env=offline(wheels))
    assert next_run.returncode == 0
    assert "making a private Python environment" in next_run.stderr


def test_two_first_runs_at_once_share_one_environment(copy, wheels):
    runs = [
        subprocess.Popen(
            [BARE_PYTHON, str(copy / "manage.py"), "sample"],
            env=offline(wheels),
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
            text=True,
        )
        for _ in range(2)
    ]
    outcomes = [process.communicate(timeout=120) for process in runs]
    assert [process.returncode for process in runs] == [0, 0], outcomes
    said = "".join(stderr for _, stderr in outcomes)
    assert said.count("making a private Python environment") == 1
    assert said.count("waiting for it") == 1


def test_environment_made_by_hand_is_taken_as_it_is(copy, wheels):
    subprocess.run([BARE_PYTHON, "-m", "venv", copy / ".venv"], check=True)
    pip = [copy / ".venv" / "bin" / "python", "-m", "pip", "install", "-q", "tinyfloss"]
    subprocess.run(pip, check=True, env=offline(wheels))
    adopted = run(copy, "sample", env=environment(PIP_INDEX_URL=NO_SERVER))
    assert (adopted.returncode, adopted.stderr) == (0, "")
    assert (copy / ".venv" / "flosswright-stamp.json").exists()


def test_foreign_folder_in_the_way_is_kept(copy):
    (copy / ".venv").mkdir()
    (copy / ".venv" / "letters.txt").write_text("dear")
    assert_refused(run(copy, "sample", env=environment()), ".venv is in the way", "Move it")
    assert (copy / ".venv" / "letters.txt").read_text() == "dear"


def test_file_in_the_way_is_said(copy):
    (copy / ".venv").touch()
    assert_refused(run(copy, "sample", env=environment()), "cannot write", "(File exists)")


def read_only_command(folder: Path) -> list[str]:
    """Root may write wherever the modes forbid it, so for root the folder is mounted read-only."""
    if os.geteuid():
        folder.chmod(0o555)
        return []
    mount = 'mount --bind "$0" "$0" && mount -o remount,ro,bind "$0" && exec "$@"'
    return ["unshare", "-m", "sh", "-c", mount, str(folder)]


def can_mount() -> bool:
    if os.name == "nt" or (os.geteuid() == 0 and not shutil.which("unshare")):
        return False
    return os.geteuid() != 0 or subprocess.call(["unshare", "-m", "true"]) == 0


@pytest.mark.skipif(not can_mount(), reason="root, and not allowed to mount")
def test_read_only_folder_is_said(copy):
    result = subprocess.run(
        [*read_only_command(copy), BARE_PYTHON, str(copy / "manage.py"), "start"],
        check=False,
        env=environment(),
        capture_output=True,
        text=True,
    )
    assert_refused(result, "cannot write", "move the whole folder")
    copy.chmod(0o755)


@pytest.mark.parametrize("module", ["ensurepip", "venv"])
def test_python_without_venv_package_names_it(copy, module):
    code = f"import sys, runpy; sys.modules[{module!r}] = None; sys.argv = ['manage.py', 'start']; "
    code += "sys.path.insert(0, '.'); runpy.run_path('manage.py', run_name='__main__')"
    result = subprocess.run(
        [BARE_PYTHON, "-c", code],
        check=False,
        cwd=copy,
        env=environment(),
        capture_output=True,
        text=True,
    )
    assert_refused(result, "python3-venv")


@pytest.mark.parametrize("version", [(2, 7, 18), (3, 8, 18), (3, 10, 13)])
def test_old_python_is_told_its_version(copy, version):
    code = f"import sys, runpy; sys.version_info = {version}; runpy.run_path('manage.py')"
    result = subprocess.run(
        [BARE_PYTHON, "-c", code], check=False, cwd=copy, capture_output=True, text=True
    )
    told = f"Flosswright needs Python 3.11 or newer; this is {version[0]}.{version[1]}.\n"
    assert (result.returncode, result.stderr) == (2, told)


def test_manage_can_be_read_by_an_old_python():
    source = (ROOT / "manage.py").read_text(encoding="ascii")
    ast.parse(source, feature_version=(3, 4))
    assert "f'" not in source
    assert 'f"' not in source


needs_environment = pytest.mark.skipif(
    sys.prefix == sys.base_prefix, reason="the tests themselves run outside of an environment"
)


@needs_environment
def test_active_environment_is_never_installed_into(copy):
    result = run(copy, "start", python=sys.executable, env=environment())
    assert_refused(result, "Missing: tinyfloss>=1.0,<3. Install with: ", "-r requirements.txt")
    assert not (copy / ".venv").exists()


@needs_environment
def test_active_environment_for_tests_names_the_test_requirements(copy):
    result = run(copy, "test", python=sys.executable, env=environment())
    assert_refused(result, "tinyfloss>=1.0,<3, floss-tester>=2", "-r requirements-test.txt")


@needs_environment
@pytest.mark.parametrize("requirement", ["Django<2", "django>=99", "Django>=5,<5.0.9"])
def test_version_out_of_range_counts_as_missing(copy, requirement):
    (copy / "requirements.txt").write_text(f"{requirement}  # why\nhypothesis>=6\n")
    result = run(copy, "start", python=sys.executable, env=environment())
    assert_refused(result, f"Missing: {requirement}. ")


@needs_environment
@pytest.mark.parametrize(
    ("words", "data"),
    [
        (["--data", "stall"], "stall"),
        (["--data=stall"], "stall"),
        (["--port", "90", "--data", "stall"], "stall"),
        ([], None),
    ],
)
def test_data_folder_is_taken_out_for_the_settings(copy, words, data):
    (copy / "requirements.txt").write_text("")
    (copy / "tinyfloss.py").touch()
    result = run(copy, "start", *words, python=sys.executable, env=environment())
    told = json.loads(result.stdout)
    assert told["data"] == (None if data is None else str(Path.cwd() / data))
    assert "--data" not in " ".join(told["argv"])
    assert told["argv"] == ["start", *(["--port", "90"] if "--port" in words else [])]


@needs_environment
@pytest.mark.parametrize("words", [["--data"], ["--data="]])
def test_data_without_a_folder_is_said(copy, words):
    (copy / "requirements.txt").write_text("")
    result = run(copy, "start", *words, python=sys.executable, env=environment())
    assert_refused(result, "--data needs the name of a folder")


def test_every_requirement_says_why():
    for file in ("requirements.txt", "requirements-test.txt", "requirements-server.txt"):
        for line in (ROOT / file).read_text().splitlines():
            assert "#" in line or line.startswith("-r "), f"{file}: {line}"
