"""`manage.py start` as a maker runs it: a process of its own, a real port, a real database."""

import http.cookiejar
import os
import re
import shutil
import signal
import socket
import sqlite3
import stat
import subprocess
import sys
import time
import urllib.error
import urllib.request
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[3]
ADDRESS = re.compile(r"http://127\.0\.0\.1:(\d+)/enter/\S+/")
HIDDEN = ("DJANGO_", "FLOSSWRIGHT_", "DATABASE_URL", "BROWSER")


def environment(**changes: str) -> dict[str, str]:
    kept = {key: value for key, value in os.environ.items() if not key.startswith(HIDDEN)}
    return {**kept, **changes}


def command(*words: str) -> list[str]:
    return [sys.executable, str(ROOT / "manage.py"), "start", *words]


class Workshop:
    """A running `start`, and a browser of sorts to visit it."""

    def __init__(self, *words: str, **changes: str) -> None:
        self.process = subprocess.Popen(
            command(*words),
            env=environment(**changes),
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
            text=True,
        )
        assert self.process.stdout is not None
        self.printed = self.process.stdout.readline()
        found = ADDRESS.search(self.printed)
        assert found, self.printed + self.close()
        self.address, self.port = found[0], int(found[1])
        self.browser = urllib.request.build_opener(
            urllib.request.HTTPCookieProcessor(http.cookiejar.CookieJar())
        )

    def get(self, path: str) -> tuple[int, str]:
        address = path if path.startswith("http") else f"http://127.0.0.1:{self.port}{path}"
        try:
            with self.browser.open(address, timeout=30) as answer:
                return answer.status, answer.read().decode()
        except urllib.error.HTTPError as error:
            return error.code, error.read().decode()

    def close(self, by: int = signal.SIGINT) -> str:
        """What it said on standard error; the rest of standard output is added to `printed`."""
        self.process.send_signal(by)
        out, said = self.process.communicate(timeout=30)
        self.printed += out
        return said


@pytest.fixture
def start() -> Iterator[type[Workshop]]:
    running: list[Workshop] = []

    def run(*words: str, **changes: str) -> Workshop:
        running.append(Workshop(*words, **changes))
        return running[-1]

    yield run
    for workshop in running:
        if workshop.process.poll() is None:
            workshop.process.kill()
            workshop.process.communicate()


def refusal(*words: str, prefix: tuple[str, ...] = (), **changes: str) -> str:
    result = subprocess.run(
        [*prefix, *command("--no-browser", *words)],
        check=False,
        env=environment(**changes),
        capture_output=True,
        text=True,
        timeout=60,
    )
    assert result.returncode == 2, result.stderr
    assert result.stdout == ""
    assert len(result.stderr.strip().splitlines()) == 1, result.stderr
    return result.stderr


def test_start_to_first_page_and_back(start, tmp_path):
    folder = tmp_path / "new" / "stall"
    workshop = start("--data", str(folder), "--no-browser")
    assert workshop.get("/healthz") == (200, "ok\n")
    assert "Who is at the bench?" in workshop.get("/")[1]
    status, page = workshop.get(workshop.address)
    assert status == 200
    assert "Open the sample workshop" in page
    assert "Start my own" in page
    # DEBUG is off: an unknown address gets our page, not a list of addresses.
    status, page = workshop.get("/nothing/")
    assert status == 404
    assert "There is nothing at this address" in page
    for file in set(re.findall(r'(?:href|src)="(/static/[^"]+)"', page)):
        assert workshop.get(file)[0] == 200, file

    assert stat.S_IMODE(folder.stat().st_mode) == 0o700
    assert stat.S_IMODE((folder / "secret-key").stat().st_mode) == 0o600
    key = (folder / "secret-key").read_text()

    said = workshop.close()
    assert workshop.process.returncode == 0
    assert workshop.printed.count("http") == 1
    assert "The workshop is closed." in said
    assert "Traceback" not in said
    assert "/enter/" not in said

    # The next start keeps the key, so that whoever was signed in still is; its link is a new one.
    again = start("--data", str(folder), "--no-browser", "--port", str(workshop.port))
    assert again.address != workshop.address
    again.browser = workshop.browser
    assert "Open the sample workshop" in again.get("/")[1]
    assert (folder / "secret-key").read_text() == key
    again.close(signal.SIGTERM)
    assert again.process.returncode == 0


def test_port_taken_moves_to_the_next_and_says_so(start, tmp_path):
    with socket.create_server(("127.0.0.1", 0)) as taken:
        port = taken.getsockname()[1]
        workshop = start("--data", str(tmp_path), "--no-browser", "--port", str(port))
        assert workshop.port > port
        assert workshop.get("/healthz")[0] == 200
        assert f"Port {port} is taken; using {workshop.port}." in workshop.close()


def test_two_starts_at_once_open_the_same_new_workshop(tmp_path):
    processes = [
        subprocess.Popen(
            command("--data", str(tmp_path / "stall"), "--no-browser"),
            env=environment(),
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
            text=True,
        )
        for _ in range(2)
    ]
    try:
        lines = [process.stdout.readline() for process in processes]
        ports = {ADDRESS.search(line)[1] for line in lines}
        assert len(ports) == 2
    finally:
        for process in processes:
            process.send_signal(signal.SIGINT)
        said = [process.communicate(timeout=30)[1] for process in processes]
    assert [process.returncode for process in processes] == [0, 0], said


@pytest.mark.skipif(os.name == "nt", reason="the stand-in for a browser is a shell script")
def test_browser_is_opened_at_the_address(start, tmp_path):
    script, opened = tmp_path / "browser", tmp_path / "opened"
    script.write_text(f'#!/bin/sh\nprintf %s "$1" >"{opened}.new"\nmv "{opened}.new" "{opened}"\n')
    script.chmod(0o755)
    workshop = start("--data", str(tmp_path / "stall"), BROWSER=f"{script} %s")
    deadline = time.monotonic() + 20
    while not opened.exists() and time.monotonic() < deadline:
        time.sleep(0.05)
    assert opened.read_text() == workshop.address


def test_browser_that_fails_stops_nothing(start, tmp_path):
    workshop = start("--data", str(tmp_path / "stall"), BROWSER="/nonexistent/browser %s")
    assert workshop.get("/healthz")[0] == 200
    assert "Traceback" not in workshop.close()


# Refusals: one sentence each


@pytest.mark.parametrize("port", ["0", "65536", "-1", "eighty", "8765.5", "９０", "9" * 5000, ""])
def test_port_out_of_range_is_said(tmp_path, port):
    result = subprocess.run(
        command("--no-browser", f"--port={port}", "--data", str(tmp_path)),
        check=False,
        env=environment(),
        capture_output=True,
        text=True,
    )
    assert result.returncode == 2
    assert "not a port from 1 to 65535" in result.stderr.splitlines()[-1]


def test_data_that_is_a_file_is_said(tmp_path):
    (tmp_path / "stall").write_text("not a folder")
    assert "is not a folder" in refusal("--data", str(tmp_path / "stall"))
    assert "is not a folder" in refusal("--data", str(tmp_path / "stall" / "below"))


def test_data_given_twice_is_said(tmp_path):
    assert "--data once" in refusal("--data", str(tmp_path), "--data", str(tmp_path))


def read_only(folder: Path) -> tuple[str, ...]:
    """Root may write wherever the modes forbid it, so for root the folder is mounted read-only."""
    if os.geteuid():
        folder.chmod(0o555)
        return ()
    mount = 'mount --bind "$0" "$0" && mount -o remount,ro,bind "$0" && exec "$@"'
    return ("unshare", "-m", "sh", "-c", mount, str(folder))


def can_mount() -> bool:
    if os.name == "nt" or (os.geteuid() == 0 and not shutil.which("unshare")):
        return False
    return os.geteuid() != 0 or subprocess.call(["unshare", "-m", "true"]) == 0


@pytest.mark.skipif(not can_mount(), reason="root, and not allowed to mount")
def test_data_that_cannot_be_written_is_said(start, tmp_path):
    folder = tmp_path / "stall"
    folder.mkdir()
    told = refusal("--data", str(folder / "new"), prefix=read_only(folder))
    assert "cannot write in" in told
    folder.chmod(0o755)
    start("--data", str(folder), "--no-browser").close()
    assert "cannot write" in refusal("--data", str(folder), prefix=read_only(folder))
    folder.chmod(0o755)


def test_database_that_is_none_is_said_and_kept(tmp_path):
    database = tmp_path / "workshop.sqlite3"
    database.write_text("Dear diary, today I knotted a bracelet. " * 200)
    before = database.read_bytes()
    assert "cannot be opened (file is not a database)" in refusal("--data", str(tmp_path))
    assert database.read_bytes() == before


def test_database_damaged_is_said(start, tmp_path):
    start("--data", str(tmp_path), "--no-browser").close()
    database = tmp_path / "workshop.sqlite3"
    with database.open("r+b") as file:
        file.seek(4096 * 3)
        file.write(b"\xa5" * 4096 * 30)
    assert "cannot be opened" in refusal("--data", str(tmp_path))


def test_database_of_a_newer_version_is_said(start, tmp_path):
    start("--data", str(tmp_path), "--no-browser").close()
    with sqlite3.connect(tmp_path / "workshop.sqlite3") as database:
        database.execute(
            "INSERT INTO django_migrations (app, name, applied) "
            "VALUES ('planner', '9999_from_the_future', '2040-01-01')"
        )
    database.close()
    assert "newer Flosswright" in refusal("--data", str(tmp_path))


def test_key_damaged_is_said(tmp_path):
    (tmp_path / "secret-key").write_text("short")
    assert "delete that file" in refusal("--data", str(tmp_path))
    (tmp_path / "secret-key").write_bytes(b"\xff\xfe" * 40)
    assert "delete that file" in refusal("--data", str(tmp_path))


def test_foreign_host_name_is_refused(start, tmp_path):
    workshop = start("--data", str(tmp_path), "--no-browser")
    request = urllib.request.Request(
        f"http://127.0.0.1:{workshop.port}/sign-in/", headers={"Host": "rebound.example"}
    )
    with pytest.raises(urllib.error.HTTPError) as refused:
        urllib.request.urlopen(request, timeout=30)
    assert refused.value.code == 400
    refused.value.close()
