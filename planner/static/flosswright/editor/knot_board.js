// The board of a diagonal pattern: the chart, what a hand or a key does to it, and its tools.

import * as steps from "./diagonal_steps.js";
import { KnotChart } from "./knot_chart.js";
import { StepRefused } from "./step_refused.js";
import { neutralColours } from "./tones.js";
import { leftOf } from "./walk.js";

const CYCLE = { f: "b", b: "fb", fb: "bf", bf: "f" };
const NAMES = {
  f: "forward", b: "backward", fb: "forward-backward", bf: "backward-forward",
};
const UNITS_PX = [10, 13, 17, 24, 30, 38];
const LEAST_UNIT_PX = 24;
const TAP_PX = 8; // a finger that moves farther scrolls

const pairWords = (row) => `rows ${steps.pairOf(row) + 1} and ${steps.pairOf(row) + 2}`;

const twoWords = (left) => `places ${left + 1} and ${left + 2}`;

export class KnotBoard {
  // element: templates/patterns/_editor_diagonal.html; colours: "#rrggbb" by slot; names: the shade
  // of each slot in words, where there is one.
  constructor(session, element, { colours, names = {} }) {
    Object.assign(this, { session, element, colours, names });
    this.cursor = { row: 0, place: 0 };
    this.chart = new KnotChart(this.find("[data-chart]"));
    this.chart.svg.setAttribute("aria-label", "Chart of the pattern, knot by knot");
    this.chart.svg.setAttribute("aria-describedby", this.find("[data-keys]").id);
    this.fitSize();
    this.listen();
    this.render();
  }

  find(selector) {
    return this.element.querySelector(selector);
  }

  get state() {
    return this.session.state;
  }

  get brush() {
    return this.find("[name=knot-brush]:checked").value;
  }

  get fillKnot() {
    return this.brush === "next" ? "f" : this.brush;
  }

  listen() {
    const { svg } = this.chart;
    svg.addEventListener("pointerdown", (event) => { this.down = [event.clientX, event.clientY]; });
    svg.addEventListener("click", (event) => this.clicked(event));
    svg.addEventListener("keydown", (event) => this.pressed(event));
    svg.addEventListener("focus", () => this.sayCursor());
    this.find("[data-slot]").addEventListener("change", (event) => {
      this.setSlot(this.strandHere(), event.target.value);
    });
    this.element.addEventListener("change", () => this.showPlace());
    this.element.addEventListener("click", (event) => {
      const button = event.target.closest("[data-view]");
      if (button) this.changeView(button.dataset.view);
    });
  }

  // As large as the box allows, and never too small for a finger.
  fitSize() {
    const fitting = UNITS_PX.filter((unit) => unit >= LEAST_UNIT_PX && this.chart.widthFor(this.state, unit) <= this.chart.box.clientWidth);
    this.chart.unitPx = fitting.at(-1) ?? LEAST_UNIT_PX;
  }

  changeView(name) {
    const at = UNITS_PX.indexOf(this.chart.unitPx) + (name === "larger" ? 1 : -1);
    this.chart.unitPx = UNITS_PX[Math.min(Math.max(at, 0), UNITS_PX.length - 1)];
    this.render();
    this.chart.reveal(this.cursor);
  }

  render() {
    this.keepCursorInside();
    this.chart.show(this.state, { ...neutralColours(this.state.slots), ...this.colours });
    this.showCursor();
  }

  showCursor() {
    this.chart.showCursor(this.cursor);
    this.showPlace();
  }

  // The tools name what they are about.
  showPlace() {
    const strand = this.strandHere();
    const row = this.cursor.row ?? 0;
    this.find("[data-strand]").textContent = strand + 1;
    this.find("[data-slot]").value = this.state.slots[strand];
    this.find("[data-count=strands]").textContent = this.state.slots.length;
    this.find("[data-count=rows]").textContent = this.state.rows.length;
    this.find("[data-row]").textContent = row + 1;
    this.find("[data-fill]").textContent = this.fillKnot;
    for (const words of this.element.querySelectorAll("[data-pair]")) words.textContent = pairWords(row);
    for (const words of this.element.querySelectorAll("[data-two]")) words.textContent = twoWords(this.leftHere());
  }

  keepCursorInside() {
    const { rows, slots } = this.state;
    if (this.cursor.strand !== undefined) {
      this.cursor = { strand: Math.min(this.cursor.strand, slots.length - 1) };
      return;
    }
    const row = Math.min(this.cursor.row, rows.length - 1);
    const place = Math.min(this.cursor.place, rows[row].length - 1);
    this.cursor = place < 0 ? { row: 0, place: 0 } : { row, place };
  }

  // The strand of a head, or the one that ties the knot.
  strandHere() {
    return this.cursor.strand ?? this.chart.tied?.[this.cursor.row]?.[this.cursor.place]?.tying ?? 0;
  }

  // The left one of the two positions that the knot is tied on.
  leftHere() {
    const { strand, row, place } = this.cursor;
    return strand === undefined ? leftOf(row, place) : Math.min(strand, this.state.slots.length - 2);
  }

  do(step, label) {
    try {
      this.session.do(step(this.state), label);
      this.say(label);
      return true;
    } catch (error) {
      if (!(error instanceof StepRefused)) throw error;
      this.say(error.message);
      return false;
    }
  }

  say(words) {
    this.find("[data-said]").textContent = words;
  }

  sayCursor() {
    const { strand, row, place } = this.cursor;
    if (strand !== undefined) {
      this.say(`Strand ${strand + 1}: ${this.slotWords(this.state.slots[strand])}`);
      return;
    }
    const { knot, tying, base } = this.chart.tied[row][place];
    this.say(`Row ${row + 1}, knot ${place + 1}: ${NAMES[knot]}, strand ${tying + 1}` +
      ` (${this.slotWords(this.state.slots[tying])}) ties on strand ${base + 1}`);
  }

  slotWords(slot) {
    return this.names[slot] ? `${slot}, ${this.names[slot]}` : slot;
  }

  moveTo(cursor) {
    this.cursor = cursor;
    this.showCursor();
    this.chart.reveal(cursor);
    this.sayCursor();
  }

  clicked(event) {
    const moved = Math.hypot(event.clientX - this.down[0], event.clientY - this.down[1]);
    const found = this.chart.at(event.clientX, event.clientY);
    if (!found || moved > TAP_PX) return;
    this.chart.svg.focus({ preventScroll: true });
    this.cursor = found;
    this.showCursor();
    if (found.strand === undefined) this.useBrush();
    this.sayCursor();
  }

  useBrush() {
    const { row, place } = this.cursor;
    const here = this.state.rows[row][place];
    this.setKnot(this.brush === "next" ? CYCLE[here] : this.brush);
  }

  setKnot(knot) {
    const { row, place } = this.cursor;
    this.do((state) => steps.setKnot(state, row, place, knot), `Row ${row + 1}, knot ${place + 1}: ${NAMES[knot]}`);
  }

  setSlot(strand, slot) {
    this.do((state) => steps.setSlot(state, strand, slot), `Strand ${strand + 1}: ${this.slotWords(slot)}`);
  }

  // Shows the knot that a message is about.
  point(row, place) {
    if (!this.state.rows[row]?.length) return;
    this.moveTo({ row, place: Math.min(place, this.state.rows[row].length - 1) });
    this.chart.svg.focus();
  }

  pressed(event) {
    if (event.ctrlKey || event.metaKey || event.altKey) return;
    if (this.go(event.key) || this.typed(event.key, event.shiftKey)) event.preventDefault();
  }

  go(key) {
    const { strand, row, place } = this.cursor;
    const isHead = strand !== undefined;
    const last = isHead ? this.state.slots.length - 1 : this.state.rows[row].length - 1;
    const along = { ArrowLeft: -1, ArrowRight: 1, Home: -Infinity, End: Infinity }[key];
    if (along !== undefined) {
      const to = Math.min(Math.max((isHead ? strand : place) + along, 0), last);
      this.moveTo(isHead ? { strand: to } : { row, place: to });
      return true;
    }
    const down = { ArrowUp: -1, ArrowDown: 1, PageUp: -10, PageDown: 10 }[key];
    if (down === undefined) return false;
    this.goRows(down);
    return true;
  }

  // To the nearest knot of another row; above row 1 stand the strands' heads.
  goRows(down) {
    const { strand, row, place } = this.cursor;
    const position = strand ?? leftOf(row, place);
    let to = (strand === undefined ? row : -1) + down;
    while (this.state.rows[to]?.length === 0) to += Math.sign(down);
    if (to < 0) {
      if (strand === undefined) this.moveTo({ strand: position });
      return;
    }
    to = Math.min(to, this.state.rows.length - 1);
    const knots = this.state.rows[to].length;
    if (knots === 0) return;
    const near = Math.floor((strand === undefined ? position + 1 - (to % 2) : position) / 2);
    this.moveTo({ row: to, place: Math.min(near, knots - 1) });
  }

  typed(key, shift) {
    if (this.cursor.strand !== undefined) {
      if (!/^[a-z]$/i.test(key)) return false;
      this.setSlot(this.cursor.strand, key.toUpperCase());
      this.go("ArrowRight");
      return true;
    }
    const knot = { f: shift ? "fb" : "f", b: shift ? "bf" : "b" }[key.toLowerCase()];
    if (knot) {
      this.setKnot(knot);
      this.goOn();
    } else if (key === " ") this.setKnot(CYCLE[this.state.rows[this.cursor.row][this.cursor.place]]);
    else if (key === "Enter") this.goOn(true);
    else if (key === "Backspace") this.goBack();
    else return false;
    this.sayCursor();
    return true;
  }

  // As a typewriter does: to the next knot, at the end of a row to the next row.
  goOn(nextRow = false) {
    const { row, place } = this.cursor;
    if (!nextRow && place + 1 < this.state.rows[row].length) {
      this.moveTo({ row, place: place + 1 });
      return;
    }
    let next = row + 1;
    while (this.state.rows[next]?.length === 0) next += 1;
    if (next < this.state.rows.length) this.moveTo({ row: next, place: 0 });
  }

  goBack() {
    const { row, place } = this.cursor;
    if (place > 0) this.moveTo({ row, place: place - 1 });
    else if (row > 0 && this.state.rows[row - 1].length) {
      this.moveTo({ row: row - 1, place: this.state.rows[row - 1].length - 1 });
    }
  }

  // The steps of the buttons, by their data-step.
  step(name) {
    const row = this.cursor.row ?? 0;
    const slot = this.find("[data-slot]").value;
    const pair = pairWords(row);
    const left = this.leftHere();
    const two = twoWords(left);
    const named = {
      "strand-left": ["Added a strand at the left", (state) => steps.addLeftStrand(state, slot)],
      "strand-right": ["Added a strand at the right", (state) => steps.addRightStrand(state, slot)],
      "strand-left-out": ["Took out the left strand", steps.removeLeftStrand],
      "strand-right-out": ["Took out the right strand", steps.removeRightStrand],
      "widen": [`Two strands more beside ${two}`, (state) => steps.widen(state, left)],
      "narrow": [`Took out ${two}`, (state) => steps.narrow(state, left)],
      "rows-after": [`Added two rows after ${pair}`, (state) => steps.addRows(state, row)],
      "rows-copy": [`Copied ${pair}`, (state) => steps.copyRows(state, row)],
      "rows-out": [`Took out ${pair}`, (state) => steps.removeRows(state, row)],
      "row-fill": [`Row ${row + 1}: all ${NAMES[this.fillKnot]}`, (state) => steps.fillRow(state, row, this.fillKnot)],
      "turn-round": ["Turned end for end", steps.turnRound],
      "mirror": ["Mirrored left for right", steps.mirror],
      "begin-later": ["Begins two rows later", steps.beginLater],
      "begin-earlier": ["Begins two rows earlier", steps.beginEarlier],
      "colours-left": ["Moved the colours to the left", (state) => steps.shiftColours(state, -1)],
      "colours-right": ["Moved the colours to the right", (state) => steps.shiftColours(state, 1)],
      "repeat": ["Wrote the repeat twice", steps.repeatTwice],
      "repeat-mirrored": ["Wrote the repeat again mirrored", steps.repeatMirrored],
      "clear": ["Made every knot forward", steps.clear],
    }[name];
    if (!named) return false;
    this.do(named[1], named[0]);
    return true;
  }
}
