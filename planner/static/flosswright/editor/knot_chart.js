// The chart of a diagonal pattern: the knots as they lie in the band, squares standing on a corner,
// with the way of the strand that ties drawn through each. It knows nothing of sessions.

import { inkOn } from "./grid_chart.js";
import { leftOf, walk } from "./walk.js";

const SVG = "http://www.w3.org/2000/svg";
const EDGE_UNITS = 2.4; // room for the row numbers
const HEAD_UNITS = 3; // room for the strands' letters
const WORD_UNITS = 0.72; // a letter of the written row
const MARGIN_UNITS = 0.6;

// From edge to edge of a square with its centre at 0: straight through, or bent back.
const WAYS = {
  f: "-0.5,-0.5 0.5,0.5",
  b: "0.5,-0.5 -0.5,0.5",
  fb: "-0.5,-0.5 0.22,0 -0.5,0.5",
  bf: "0.5,-0.5 -0.22,0 0.5,0.5",
};

function shape(parent, name, attributes = {}) {
  const made = document.createElementNS(SVG, name);
  for (const [key, value] of Object.entries(attributes)) made.setAttribute(key, value);
  parent.append(made);
  return made;
}

const put = (element, name, value) => {
  if (element.getAttribute(name) !== String(value)) element.setAttribute(name, value);
};

export class KnotChart {
  constructor(box) {
    this.box = box;
    this.unitPx = 22;
    this.svg = shape(box, "svg", { class: "knot-chart", tabindex: 0, role: "application" });
    this.built = "";
  }

  show(state, colours) {
    const wanted = [state.slots.length, state.rows.length].join(" ");
    if (wanted !== this.built) this.build(state);
    this.built = wanted;
    this.fit(state);
    const { tied } = walk(state.slots.length, state.rows);
    this.tied = tied;
    state.slots.forEach((slot, strand) => this.showHead(strand, slot, colours[slot]));
    tied.forEach((row, number) => {
      row.forEach(({ knot, tying }, place) => {
        this.showKnot(number, place, knot, colours[state.slots[tying]]);
      });
      const words = state.rows[number].join(" ") || "no knots";
      if (this.words[number].textContent !== words) this.words[number].textContent = words;
    });
  }

  // The size follows the unit, and the longest written row.
  fit(state) {
    const longest = Math.max(8, ...state.rows.map((row) => row.join(" ").length));
    const width = EDGE_UNITS + state.slots.length + 2 * MARGIN_UNITS + longest * WORD_UNITS;
    const height = HEAD_UNITS + state.rows.length + 1 + 2 * MARGIN_UNITS;
    put(this.svg, "viewBox", `0 0 ${width.toFixed(2)} ${height.toFixed(2)}`);
    put(this.svg, "width", (width * this.unitPx).toFixed(1));
    put(this.svg, "height", (height * this.unitPx).toFixed(1));
  }

  build(state) {
    this.svg.replaceChildren();
    const strands = state.slots.length;
    this.strands = strands;
    const threads = shape(this.svg, "g", { class: "knot-threads", "aria-hidden": "true" });
    const knots = shape(this.svg, "g", { class: "knot-squares", "aria-hidden": "true" });
    const texts = shape(this.svg, "g", { class: "knot-texts", "aria-hidden": "true" });
    this.cursor = shape(this.svg, "g", { class: "knot-cursor", "aria-hidden": "true" });
    this.heads = state.slots.map((_, strand) => this.buildHead(threads, texts, strand));
    this.knots = state.rows.map((words, row) => words.map((_word, place) => this.buildKnot(knots, row, place)));
    this.words = state.rows.map((_, row) => this.buildRowTexts(texts, row, strands));
  }

  buildHead(threads, texts, strand) {
    const x = this.xOf(strand + 0.5);
    const line = shape(threads, "line", {
      x1: x, x2: x, y1: HEAD_UNITS - 1, y2: HEAD_UNITS + MARGIN_UNITS + 0.5 + (strand % 2), "stroke-width": 0.5,
    });
    const edge = shape(threads, "rect", { x: x - 0.44, y: 1, width: 0.88, height: 1.2, rx: 0.12 });
    const letter = shape(texts, "text", { x, y: 1.92, "text-anchor": "middle", class: "head" });
    const number = shape(texts, "text", { x, y: 0.75, "text-anchor": "middle", class: "number" });
    number.textContent = strand + 1;
    return { line, edge, letter };
  }

  buildKnot(parent, row, place) {
    const [x, y] = this.centreOf(row, place);
    const square = shape(parent, "path", { d: `M${x} ${y - 1}l1 1-1 1-1-1z` });
    const way = shape(parent, "polyline", { fill: "none", "stroke-linejoin": "round", "stroke-linecap": "round", transform: `translate(${x} ${y})` });
    return { square, way };
  }

  buildRowTexts(parent, row, strands) {
    const y = this.yOf(row) + 0.25;
    const number = shape(parent, "text", { x: EDGE_UNITS - 0.35, y, "text-anchor": "end", class: "number" });
    number.textContent = row + 1;
    return shape(parent, "text", { x: this.xOf(strands) + 0.5, y, class: "words" });
  }

  showHead(strand, slot, colour) {
    const { line, edge, letter } = this.heads[strand];
    put(line, "stroke", colour);
    put(edge, "fill", colour);
    put(letter, "fill", inkOn(colour));
    if (letter.textContent !== slot) letter.textContent = slot;
  }

  showKnot(row, place, knot, colour) {
    const { square, way } = this.knots[row][place];
    put(square, "fill", colour);
    put(way, "stroke", inkOn(colour));
    put(way, "points", WAYS[knot] ?? "");
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
      (this.knots[row] ?? []).forEach((_, place) => {
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
