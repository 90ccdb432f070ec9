"""From a key to the strand table: how quickly the editor follows; prints milliseconds, asserts nothing.

Starts the sample workshop as a maker would, draws 24 strands by 60 rows in Chromium, and presses
keys. A time runs from the key's own time stamp to the frame after the one that shows the answer.

Run with the project's own Python: tests/benchmarks/benchmark_editor.py [STRANDS] [ROWS]
"""

import re
import statistics
import subprocess
import sys
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from playwright.sync_api import Page, sync_playwright

ROOT = Path(__file__).parents[2]
sys.path.insert(0, str(ROOT))

from planner.management.commands.test import find_chromium  # noqa: E402

PORT = 8890
ADDRESS = f"http://127.0.0.1:{PORT}"
PRESSES = 40
SAVE = """async (state) => {
  const token = JSON.parse(document.body.getAttribute("hx-headers"))["x-csrftoken"];
  const response = await fetch("/patterns/new/draw/", {
    method: "POST", headers: { "X-CSRFToken": token }, body: JSON.stringify({ state }),
  });
  return (await response.json()).edit_url;
}"""
WATCH = """() => {
  window.times = { board: [], table: [] };
  let pressed = 0;
  const afterFrame = (name) => requestAnimationFrame(() => setTimeout(() =>
    window.times[name].push(performance.now() - pressed)));
  document.addEventListener("keydown", (event) => {
    if (event.key !== " ") return;
    pressed = event.timeStamp;
    afterFrame("board");
  }, true);
  new MutationObserver(() => afterFrame("table"))
    .observe(document.querySelector("[data-preview]"), { childList: true });
}"""


@contextmanager
def open_workshop() -> Iterator[str]:
    """The address that signs in, while the sample workshop is open."""
    with tempfile.TemporaryDirectory() as folder:
        options = ["--data", folder]
        manage = [sys.executable, str(ROOT / "manage.py")]
        subprocess.run([*manage, "sample", *options], check=True, stdout=subprocess.DEVNULL)
        start = [*manage, "start", *options, "--port", str(PORT), "--no-browser"]
        server = subprocess.Popen(start, stdout=subprocess.PIPE, text=True)
        try:
            assert server.stdout is not None
            yield next(iter(re.findall(r"http\S+/enter/\S+", server.stdout.readline())))
        finally:
            server.terminate()
            server.wait()


def drawn_state(strands: int, rows: int) -> dict[str, object]:
    """Diamonds of all slots: forward on the left half, backward on the right, turned half-way."""
    words = ("f", "b")
    return {
        "technique": "diagonal",
        "name": "Measured",
        "finish": "exact",
        "slots": ["ABCDEFGH"[strand * 8 // strands] for strand in range(strands)],
        "rows": [
            [
                words[(place < strands // 4) == (row < rows // 2)]
                for place in range((strands - row % 2) // 2)
            ]
            for row in range(rows)
        ],
    }


def measure(page: Page, strands: int, rows: int) -> dict[str, list[float]]:
    page.goto(f"{ADDRESS}/patterns/new/draw/")
    page.goto(ADDRESS + page.evaluate(SAVE, drawn_state(strands, rows)))
    page.locator("[data-preview] .answer").wait_for()
    page.locator("[data-chart] svg").focus()
    page.evaluate(WATCH)
    for number in range(PRESSES):
        change_a_knot(page)
        page.wait_for_function("(count) => window.times.table.length > count", arg=number)
    return page.evaluate("window.times")


def change_a_knot(page: Page) -> None:
    """Each time another one, so that nothing has been drawn before."""
    page.keyboard.press("ArrowRight")
    page.keyboard.press("ArrowDown")
    page.keyboard.press(" ")


def type_quickly(page: Page) -> float:
    """Twenty keys without waiting: from the last one to a table that stays."""
    page.evaluate("() => { window.times = { board: [], table: [] }; }")
    for _ in range(20):
        change_a_knot(page)
    page.wait_for_timeout(2_000)
    return page.evaluate("window.times.table.at(-1)")


def report(name: str, times: list[float]) -> None:
    ordered = sorted(times)
    print(
        f"{name:42} median {statistics.median(ordered):6.1f} ms   "
        f"nine in ten under {ordered[len(ordered) * 9 // 10]:6.1f} ms   most {ordered[-1]:6.1f} ms"
    )


def main() -> None:
    strands, rows = (int(word) for word in (sys.argv[1:3] if len(sys.argv) > 2 else ("24", "60")))
    with open_workshop() as address, sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=find_chromium(), args=["--no-sandbox"])
        page = browser.new_page(viewport={"width": 1280, "height": 900})
        page.goto(address)
        times = measure(page, strands, rows)
        print(f"{strands} strands, {rows} rows, {PRESSES} keys one after the other")
        report("key to knot on the board", times["board"])
        report("key to strand table on the screen", times["table"])
        print(f"{'last of 20 quick keys to the table':42} {type_quickly(page):13.1f} ms")
        browser.close()


if __name__ == "__main__":
    main()
