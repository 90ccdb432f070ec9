// The chart of a grid pattern: cells to look at and to point at. It knows nothing of sessions.
// A column is 2.5 thread diameters wide and a row 2 high, as in the drawn band.

const SVG = "http://www.w3.org/2000/svg";
const ROW_TO_COLUMN = 0.8;
export const EDGE_PX = 34; // room for the numbers at the left, and of the rows below
const STRANDS_PX = 26; // room for the base strands' ends and the column numbers
const LEAST_LETTER_PX = 16;
const LEAST_NUMBER_PX = 14;

function shape(parent, name, attributes = {}, text = null) {
  const made = document.createElementNS(SVG, name);
  for (const [key, value] of Object.entries(attributes)) made.setAttribute(key, value);
  if (text !== null) made.textContent = text;
  parent.append(made);
  return made;
}

// Black or white, whichever reads better on a colour (relative luminance as in WCAG 2.2).
export function inkOn(colour) {
  const [red, green, blue] = [1, 3, 5].map((at) => {
    const value = parseInt(colour.slice(at, at + 2), 16) / 255;
    return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
  });
  return 0.2126 * red + 0.7152 * green + 0.0722 * blue > 0.179 ? "#000000" : "#ffffff";
}

export class GridChart {
  constructor(box) {
    this.box = box;
    this.columnPx = 28;
    this.isLying = false;
    this.svg = shape(box, "svg", { class: "grid-chart", tabindex: 0, role: "application" });
    // Over the cells, for hands: browsers heed touch-action on it, but not on parts of a drawing,
    // and the numbers beside the cells stay free to scroll by.
    this.surface = box.appendChild(Object.assign(document.createElement("div"),
      { className: "grid-surface" }));
    this.built = "";
  }

  get rowPx() {
    return this.columnPx * ROW_TO_COLUMN;
  }

  // Draws only what differs from what is drawn already.
  show(state, colours) {
    const rows = state.rows.length;
    const columns = state.rows[0].length;
    const wanted = [rows, columns, this.columnPx, this.isLying].join(" ");
    if (wanted !== this.built) this.build(rows, columns);
    this.built = wanted;
    this.colourStrands(colours[state.background]);
    state.rows.forEach((slots, row) => slots.forEach((slot, column) => {
      this.showCell(row, column, slot, colours[slot], slot !== state.background);
    }));
  }

  build(rows, columns) {
    this.rows = rows;
    this.columns = columns;
    const start = this.isLying ? EDGE_PX : STRANDS_PX;
    const [along, across] = [rows * this.rowPx + start + STRANDS_PX, columns * this.columnPx + EDGE_PX];
    const [width, height] = this.isLying ? [along, across] : [across, along];
    this.svg.setAttribute("width", width);
    this.svg.setAttribute("height", height);
    this.svg.setAttribute("viewBox", `0 0 ${width} ${height}`);
    this.placeSurface();
    this.svg.replaceChildren();
    this.strands = shape(this.svg, "g", { class: "grid-strands" });
    const numbers = shape(this.svg, "g", { class: "grid-numbers", "aria-hidden": "true" });
    const cells = shape(this.svg, "g", { class: "grid-cells", "aria-hidden": "true" });
    this.letters = shape(this.svg, "g", { class: "grid-letters", "aria-hidden": "true" });
    this.preview = shape(this.svg, "g", { class: "grid-preview", "aria-hidden": "true" });
    this.cursor = shape(this.svg, "g", { class: "grid-cursor", "aria-hidden": "true" });
    this.buildStrands(columns);
    this.buildNumbers(numbers);
    this.cells = Array.from({ length: rows }, (_, row) => Array.from({ length: columns },
      (__, column) => this.buildCell(cells, row, column)));
  }

  placeSurface() {
    const first = this.boxOf(0, this.isLying ? this.columns - 1 : 0);
    const [down, right] = [this.rows * this.rowPx, this.columns * this.columnPx];
    const [width, height] = this.isLying ? [down, right] : [right, down];
    for (const [side, px] of Object.entries({ left: first.x, top: first.y, width, height })) {
      this.surface.style[side] = `${px}px`;
    }
  }

  buildCell(parent, row, column) {
    return { rect: shape(parent, "rect", this.boxOf(row, column)), slot: null, colour: null,
      isMarked: null, letter: null };
  }

  buildStrands(columns) {
    for (let column = 0; column < columns; column += 1) {
      const first = this.boxOf(0, column);
      const last = this.boxOf(this.rows - 1, column);
      const middle = this.isLying ? first.y + first.height / 2 : first.x + first.width / 2;
      const [start, end] = this.isLying ? [first.x - 12, last.x + last.width + 12]
        : [first.y - 12, last.y + last.height + 12];
      const line = this.isLying ? { x1: start, x2: end, y1: middle, y2: middle }
        : { x1: middle, x2: middle, y1: start, y2: end };
      for (const [kind, width] of [["edge", 0.4], ["thread", 0.28]]) {
        shape(this.strands, "line", { ...line, class: kind, "stroke-width": this.columnPx * width });
      }
    }
  }

  colourStrands(colour) {
    for (const thread of this.strands.querySelectorAll(".thread")) {
      thread.setAttribute("stroke", colour);
    }
  }

  buildNumbers(parent) {
    const every = (size, least) => [1, 2, 5, 10].find((step) => size * step >= least) ?? 10;
    const rowStep = every(this.rowPx, this.isLying ? 20 : LEAST_NUMBER_PX);
    const columnStep = every(this.columnPx, this.isLying ? LEAST_NUMBER_PX : 18);
    for (let row = 0; row < this.rows; row += 1) {
      if ((row + 1) % rowStep === 0 || row === 0) this.numberRow(parent, row);
    }
    for (let column = 0; column < this.columns; column += 1) {
      if ((column + 1) % columnStep === 0 || column === 0) this.numberColumn(parent, column);
    }
  }

  numberRow(parent, row) {
    const { x, y, width, height } = this.boxOf(row, 0);
    const place = this.isLying
      ? { x: x + width / 2, y: y + height + 16, "text-anchor": "middle" }
      : { x: x - 7, y: y + height / 2 + 4, "text-anchor": "end" };
    shape(parent, "text", place, row + 1);
  }

  numberColumn(parent, column) {
    const { x, y, width, height } = this.boxOf(0, column);
    const place = this.isLying
      ? { x: x - 13, y: y + height / 2 + 4, "text-anchor": "end" }
      : { x: x + width / 2, y: y - 14, "text-anchor": "middle" };
    shape(parent, "text", place, column + 1);
  }

  // Where a cell stands: the band hangs from its start, or lies with its start at the left and
  // column 1 lowest.
  boxOf(row, column) {
    if (this.isLying) {
      return { x: EDGE_PX + row * this.rowPx, y: (this.columns - 1 - column) * this.columnPx + 2,
        width: this.rowPx, height: this.columnPx };
    }
    return { x: EDGE_PX + column * this.columnPx - 2, y: STRANDS_PX + row * this.rowPx,
      width: this.columnPx, height: this.rowPx };
  }

  cellAt(clientX, clientY) {
    const frame = this.svg.getBoundingClientRect();
    const [x, y] = [clientX - frame.left, clientY - frame.top];
    if (this.isLying) {
      return [Math.floor((x - EDGE_PX) / this.rowPx),
        this.columns - 1 - Math.floor((y - 2) / this.columnPx)];
    }
    return [Math.floor((y - STRANDS_PX) / this.rowPx),
      Math.floor((x - EDGE_PX + 2) / this.columnPx)];
  }

  has([row, column]) {
    return row >= 0 && column >= 0 && row < this.rows && column < this.columns;
  }

  showCell(row, column, slot, colour, isMarked) {
    const cell = this.cells[row][column];
    if (cell.slot === slot && cell.colour === colour && cell.isMarked === isMarked) return;
    Object.assign(cell, { slot, colour, isMarked });
    cell.rect.setAttribute("fill", colour);
    cell.rect.setAttribute("stroke", inkOn(colour));
    cell.rect.dataset.slot = slot;
    cell.letter?.remove();
    cell.letter = null;
    if (!isMarked || this.rowPx < LEAST_LETTER_PX) return;
    const { x, y, width, height } = this.boxOf(row, column);
    cell.letter = shape(this.letters, "text", { x: x + width / 2, y: y + height / 2 + 4,
      "text-anchor": "middle", fill: inkOn(colour) }, slot);
  }

  showCursor([row, column]) {
    this.cursor.replaceChildren();
    const at = this.boxOf(row, column);
    shape(this.cursor, "rect", { ...at, class: "outer" });
    shape(this.cursor, "rect", { ...at, class: "inner" });
  }

  showPreview(cells, colour) {
    this.preview.replaceChildren();
    for (const [row, column] of cells) {
      if (this.has([row, column])) shape(this.preview, "rect", { ...this.boxOf(row, column),
        fill: colour, stroke: inkOn(colour) });
    }
  }

  // Brings a cell into the scrolled box, never the page.
  reveal([row, column]) {
    const { x, y, width, height } = this.boxOf(row, column);
    const box = this.box;
    const margin = this.columnPx;
    if (x - margin < box.scrollLeft) box.scrollLeft = x - EDGE_PX;
    else if (x + width + margin > box.scrollLeft + box.clientWidth) {
      box.scrollLeft = x + width + margin - box.clientWidth;
    }
    if (y - margin < box.scrollTop) box.scrollTop = y - STRANDS_PX;
    else if (y + height + margin > box.scrollTop + box.clientHeight) {
      box.scrollTop = y + height + margin - box.clientHeight;
    }
  }
}
