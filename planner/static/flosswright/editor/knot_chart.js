// The chart of a diagonal pattern: the knots as they lie in the band, squares standing on a corner,
// with the way of the strand that ties drawn through each. It knows nothing of sessions.

import { inkOn } from "./grid_chart.js";
import { leftOf, walk } from "./walk.js";

const SVG = "http://www.w3.org/2000/svg";
const EDGE_UNITS = 1.6; // room for the row numbers
const HEAD_UNITS = 3; // room for the strands' letters
const WORD_UNITS = 0.72; // a letter of the written row
const MARGIN_UNITS = 0.6;
const TAIL_UNITS = 1; // the strands hang on below
const THREAD_UNITS = 0.5;
const LEAST_AGAIN_ROWS = 2; // of the next repeat, in faint
const LEAST_ROWS_SHOWN = 12;

// From edge to edge of a square with its centre at 0: straight through, or bent back.
const WAYS = {
  f: "M-0.5-0.5L0.5 0.5",
  b: "M0.5-0.5L-0.5 0.5",
  fb: "M-0.5-0.5C0.35-0.5 0.35 0.5-0.5 0.5",
  bf: "M0.5-0.5C-0.35-0.5-0.35 0.5 0.5 0.5",
};

function shape(parent, name, attributes = {}) {
  const made = document.createElementNS(SVG, name);
  for (const [key, value] of Object.entries(attributes)) made.setAttribute(key, value);
  parent.append(made);
  return made;
}

// Asking an element what it has takes longer than remembering what it was given.
const given = new WeakMap();

function put(element, name, value) {
  const known = given.get(element) ?? {};
  if (known[name] === value) return;
  known[name] = value;
  given.set(element, known);
  element.setAttribute(name, value);
}

export class KnotChart {
  constructor(box) {
    this.box = box;
    this.unitPx = 24;
    this.svg = shape(box, "svg", { class: "knot-chart", tabindex: 0, role: "application" });
    this.built = "";
  }

  show(state, colours) {
    const { slots, rows } = state;
    const wanted = [slots.length, rows.length].join(" ");
    if (wanted !== this.built) this.build(state);
    this.built = wanted;
    this.fit(state);
    const { tied, idle, order } = walk(slots.length, this.shownRows(rows));
    const inks = Object.fromEntries(slots.map((slot) => [slot, inkOn(colours[slot])]));
    const colourOf = (strand) => colours[slots[strand]];
    this.tied = tied.slice(0, rows.length);
    slots.forEach((slot, strand) => this.showHead(strand, slot, colours[slot]));
    tied.forEach((row, number) => row.forEach(({ knot, tying }, place) => {
      this.showKnot(number, place, knot, colourOf(tying), inks[slots[tying]]);
    }));
    idle.forEach((row, number) => row.forEach(({ strand }, at) => put(this.edges[number][at], "fill", colourOf(strand))));
    order.forEach((strand, position) => put(this.tails[position], "fill", colourOf(strand)));
    rows.forEach((words, number) => this.showWords(number, words.join(" ") || "no knots"));
  }

  // The repeat, and how it goes on.
  shownRows(rows) {
    const again = Math.max(LEAST_AGAIN_ROWS, LEAST_ROWS_SHOWN - rows.length);
    return Array.from({ length: rows.length + again }, (_, row) => rows[row % rows.length]);
  }

  showWords(row, words) {
    if (this.words[row].textContent !== words) this.words[row].textContent = words;
  }

  // The size follows the unit, and the longest written row.
  fit(state) {
    const width = this.widthOf(state);
    const height = HEAD_UNITS + this.rowsShown + 1 + TAIL_UNITS + MARGIN_UNITS;
    put(this.svg, "viewBox", `0 0 ${width.toFixed(2)} ${height.toFixed(2)}`);
    put(this.svg, "width", (width * this.unitPx).toFixed(1));
    put(this.svg, "height", (height * this.unitPx).toFixed(1));
  }

  widthOf(state) {
    const longest = Math.max(15, ...state.rows.map((row) => row.join(" ").length));
    return EDGE_UNITS + state.slots.length + 2 * MARGIN_UNITS + longest * WORD_UNITS;
  }

  widthFor(state, unitPx) {
    return this.widthOf(state) * unitPx;
  }

  build(state) {
    this.svg.replaceChildren();
    const strands = state.slots.length;
    this.strands = strands;
    const shown = this.shownRows(state.rows);
    this.rowsShown = shown.length;
    const [threads, knots, texts, cursor] = ["threads", "squares", "texts", "cursor"]
      .map((name) => shape(this.svg, "g", { class: `knot-${name}`, "aria-hidden": "true" }));
    this.cursor = cursor;
    const again = shape(knots, "g", { class: "knot-again" });
    const ofRow = (row, parent) => (row < state.rows.length ? parent : again);
    this.edges = walk(strands, shown).idle.map((row, number) => row.map(({ position }) =>
      this.buildThread(ofRow(number, threads), position, this.yOf(number) - 1, this.yOf(number) + 1)));
    this.tails = state.slots.map((_, position) =>
      this.buildThread(again, position, this.yOf(shown.length - 1), this.yOf(shown.length) + TAIL_UNITS));
    this.heads = state.slots.map((_, strand) => this.buildHead(threads, texts, strand));
    this.knots = shown.map((words, row) => words.map((_word, place) => this.buildKnot(ofRow(row, knots), row, place)));
    this.words = state.rows.map((_, row) => this.buildRowTexts(texts, row, strands));
    const from = shape(texts, "text", { x: this.xOf(strands) + 0.5, y: this.yOf(state.rows.length) + 0.25, class: "again" });
    from.textContent = "and from row 1 again";
  }

  buildThread(parent, position, top, bottom) {
    const x = this.xOf(position + 0.5) - THREAD_UNITS / 2;
    return shape(parent, "rect", { x, y: top, width: THREAD_UNITS, height: bottom - top });
  }

  buildHead(threads, texts, strand) {
    const x = this.xOf(strand + 0.5);
    const thread = this.buildThread(threads, strand, HEAD_UNITS - 1, this.yOf(strand % 2 ? 1 : 0) - 0.5);
    const edge = shape(threads, "rect", { x: x - 0.44, y: 1, width: 0.88, height: 1.2, rx: 0.12 });
    const letter = shape(texts, "text", { x, y: 1.92, "text-anchor": "middle", class: "head" });
    const number = shape(texts, "text", { x, y: 0.75, "text-anchor": "middle", class: "number" });
    number.textContent = strand + 1;
    return { thread, edge, letter };
  }

  buildKnot(parent, row, place) {
    const [x, y] = this.centreOf(row, place);
    const square = shape(parent, "path", { d: `M${x} ${y - 1}l1 1-1 1-1-1z` });
    const way = shape(parent, "path", { class: "way", fill: "none", "stroke-linejoin": "round", "stroke-linecap": "round", transform: `translate(${x} ${y})` });
    return { square, way };
  }

  buildRowTexts(parent, row, strands) {
    const y = this.yOf(row) + 0.25;
    const number = shape(parent, "text", { x: EDGE_UNITS - 0.35, y, "text-anchor": "end", class: "number" });
    number.textContent = row + 1;
    return shape(parent, "text", { x: this.xOf(strands) + 0.5, y, class: "words" });
  }

  showHead(strand, slot, colour) {
    const { thread, edge, letter } = this.heads[strand];
    put(thread, "fill", colour);
    put(edge, "fill", colour);
    put(letter, "fill", inkOn(colour));
    if (letter.textContent !== slot) letter.textContent = slot;
  }

  showKnot(row, place, knot, colour, ink) {
    const { square, way } = this.knots[row][place];
    put(square, "fill", colour);
    put(way, "stroke", ink);
    put(way, "d", WAYS[knot] ?? "");
  }

  xOf(position) {
    return EDGE_UNITS + MARGIN_UNITS + position;
  }

  yOf(row) {
    return HEAD_UNITS + MARGIN_UNITS + row + 1;
  }

  centreOf(row, place) {
    return [this.xOf(leftOf(row, place) + 1), this.yOf(row)];
  }

  // A knot as {row, place}, a strand's head as {strand}, or null beside both.
  at(clientX, clientY) {
    const frame = this.svg.getBoundingClientRect();
    const unit = frame.width / this.svg.viewBox.baseVal.width;
    const [x, y] = [(clientX - frame.left) / unit, (clientY - frame.top) / unit];
    if (y < HEAD_UNITS) {
      const strand = Math.floor(x - this.xOf(0));
      return strand >= 0 && strand < this.strands ? { strand } : null;
    }
    return this.nearestKnot(x, y);
  }

  // A point lies in the square whose centre is nearest when steps aside and down count alike.
  nearestKnot(x, y) {
    const about = Math.round(y - this.yOf(0));
    let best = null;
    for (let row = about - 1; row <= about + 1; row += 1) {
      (this.tied[row] ?? []).forEach((_, place) => {
        const [cx, cy] = this.centreOf(row, place);
        const distance = Math.abs(cx - x) + Math.abs(cy - y);
        if (distance <= 1 && (best === null || distance < best.distance)) best = { row, place, distance };
      });
    }
    return best && { row: best.row, place: best.place };
  }

  showCursor(cursor) {
    this.cursor.replaceChildren();
    const isHead = cursor.strand !== undefined;
    const [x, y] = isHead ? [this.xOf(cursor.strand + 0.5), 1.6] : this.centreOf(cursor.row, cursor.place);
    const outline = isHead ? `M${x - 0.5} ${y - 0.7}h1v1.4h-1z` : `M${x} ${y - 1}l1 1-1 1-1-1z`;
    for (const kind of ["outer", "inner"]) shape(this.cursor, "path", { d: outline, class: kind });
  }

  // Brings the cursor into the scrolled box, never the page.
  reveal(cursor) {
    const [x, y] = cursor.strand !== undefined
      ? [this.xOf(cursor.strand), 0] : this.centreOf(cursor.row, cursor.place);
    const around = 2.5 * this.unitPx;
    this.scroll("scrollLeft", "clientWidth", x * this.unitPx, around);
    this.scroll("scrollTop", "clientHeight", y * this.unitPx, around);
  }

  scroll(side, size, middle, around) {
    if (middle - around < this.box[side]) this.box[side] = middle - around;
    else if (middle + around > this.box[side] + this.box[size]) this.box[side] = middle + around - this.box[size];
  }
}
