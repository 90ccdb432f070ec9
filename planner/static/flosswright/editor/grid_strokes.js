// Fingers, pens and the mouse on a chart: one drag is one stroke from cell to cell. Two fingers
// scroll instead, so that painting and scrolling never fight; so does one where `isHand` says so.

export class Strokes {
  // actions: isHand(), begin(cell), move(cells), end(), cancel()
  constructor(chart, actions) {
    this.chart = chart;
    this.actions = actions;
    this.fingers = new Map();
    this.last = null;
    const { surface } = chart;
    surface.addEventListener("pointerdown", (event) => this.down(event));
    surface.addEventListener("pointermove", (event) => this.moved(event));
    surface.addEventListener("pointerup", (event) => this.lifted(event));
    surface.addEventListener("pointercancel", (event) => this.lost(event));
  }

  down(event) {
    if (event.button !== 0) return;
    if (this.actions.isHand() && event.pointerType === "touch") return; // the browser scrolls
    event.preventDefault(); // the chart keeps the focus
    this.chart.surface.setPointerCapture(event.pointerId);
    this.fingers.set(event.pointerId, event);
    const cell = this.chart.cellAt(event.clientX, event.clientY);
    if (this.fingers.size > 1) this.drop();
    else if (!this.actions.isHand() && this.chart.has(cell)) {
      this.last = cell;
      this.actions.begin(cell);
    }
  }

  moved(event) {
    const before = this.fingers.get(event.pointerId);
    if (!before) return;
    this.fingers.set(event.pointerId, event);
    if (this.last) this.paintTo(this.chart.cellAt(event.clientX, event.clientY));
    else this.scroll(before, event);
  }

  paintTo(cell) {
    const [row, column] = cell;
    if (row === this.last[0] && column === this.last[1]) return;
    this.actions.move(cellsBetween(this.last, cell));
    this.last = cell;
  }

  scroll(before, after) {
    const share = 1 / this.fingers.size;
    const { box } = this.chart;
    const down = (before.clientY - after.clientY) * share;
    const top = box.scrollTop;
    box.scrollLeft += (before.clientX - after.clientX) * share;
    box.scrollTop += down;
    if (box.scrollTop === top) window.scrollBy({ top: down, behavior: "instant" });
  }

  lifted(event) {
    if (!this.fingers.delete(event.pointerId) || !this.last) return;
    this.last = null;
    this.actions.end();
  }

  lost(event) {
    if (this.fingers.delete(event.pointerId)) this.drop();
  }

  drop() {
    if (!this.last) return;
    this.last = null;
    this.actions.cancel();
  }
}

// The cells from one to another without a gap, the first left out: a quick hand skips cells.
export function cellsBetween([row, column], [toRow, toColumn]) {
  const count = Math.max(Math.abs(toRow - row), Math.abs(toColumn - column));
  return Array.from({ length: count }, (_, number) => {
    const share = (number + 1) / count;
    return [Math.round(row + (toRow - row) * share), Math.round(column + (toColumn - column) * share)];
  });
}
