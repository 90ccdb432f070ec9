// One session of editing: the state, and every step back to its beginning, kept in the browser so
// that a reload, a crash or a lost connection loses neither the work nor the way back.

import { KeptWork, browserStorage } from "./kept_work.js";

const MOST_STEPS = 5000;
const STORE_AFTER_MS = 200;
const FORMAT = 1;

const sameRow = (row, other) =>
  row === other || (row.length === other.length && row.every((word, place) => word === other[place]));

// What changed between two states: the rows between `from` and the equal rows at the end, and every
// other field that differs. Small for a small change, however large the pattern.
export function difference(before, after) {
  const fields = {};
  for (const name of new Set([...Object.keys(before), ...Object.keys(after)])) {
    if (name === "rows") continue;
    if (JSON.stringify(before[name]) !== JSON.stringify(after[name])) {
      fields[name] = [before[name], after[name]];
    }
  }
  const shorter = Math.min(before.rows.length, after.rows.length);
  let from = 0;
  while (from < shorter && sameRow(before.rows[from], after.rows[from])) from += 1;
  let tail = 0;
  while (tail < shorter - from && sameRow(before.rows.at(-1 - tail), after.rows.at(-1 - tail))) tail += 1;
  return {
    fields,
    from,
    removed: before.rows.slice(from, before.rows.length - tail),
    added: after.rows.slice(from, after.rows.length - tail),
  };
}

// Apply a difference, or take it back.
export function applied(state, step, forward = true) {
  const [gone, come] = forward ? [step.removed, step.added] : [step.added, step.removed];
  const next = { ...state, rows: [...state.rows] };
  next.rows.splice(step.from, gone.length, ...come);
  for (const [name, pair] of Object.entries(step.fields)) {
    const value = pair[forward ? 1 : 0];
    if (value === undefined) delete next[name];
    else next[name] = value;
  }
  return next;
}

const endOf = ({ start, steps, at }) =>
  steps.slice(0, at).reduce((state, step) => applied(state, step), start);

const isEmpty = (step) =>
  step.removed.length === 0 && step.added.length === 0 && Object.keys(step.fields).length === 0;

const isWords = (list) => Array.isArray(list) && list.length > 0 && list.every((word) => typeof word === "string");

// Whether something that was kept has the shape of a pattern, as another of its technique has it.
function isPattern(state, like) {
  const rows = Array.isArray(state.rows) && state.rows.length > 0 &&
    state.rows.every((row) => Array.isArray(row) && row.every((word) => typeof word === "string"));
  return rows && Object.keys(like).every((name) =>
    name === "rows" || (name === "slots" ? isWords(state.slots) : typeof state[name] === "string"));
}

export class EditingSession {
  // `start` is the pattern as the server has it, at `version` (null for one that is not saved yet).
  constructor({ key, start, version = null, storage = browserStorage(), onChange = () => {} }) {
    this.storage = storage;
    this.onChange = onChange;
    this.restored = null;
    this.isKept = true;
    this._timer = null;
    this._keepUnder(key);
    this._begin(start, version);
    this._restore();
    window.addEventListener("pagehide", () => { this.store(); this.kept.tell("gone"); });
    window.addEventListener("pageshow", (event) => event.persisted && this.kept.tell("opened"));
    document.addEventListener("visibilitychange", () => document.hidden && this.store());
  }

  _keepUnder(key) {
    this.kept = new KeptWork(key, this.storage, () => this.onChange(this));
  }

  _begin(start, version) {
    this.version = version;
    this.start = start;
    this.saved = JSON.stringify(start);
    this.state = start;
    this.steps = [];
    this.at = 0;
    this.droppedSteps = 0;
  }

  get isOpenElsewhere() { return this.kept.others.size > 0; }

  get canUndo() { return this.at > 0; }
  get canRedo() { return this.at < this.steps.length; }
  get isDirty() { return JSON.stringify(this.state) !== this.saved; }
  get undoLabel() { return this.canUndo ? this.steps[this.at - 1].label : ""; }
  get redoLabel() { return this.canRedo ? this.steps[this.at].label : ""; }

  // Go to another state; one that is the same is no step.
  do(next, label) {
    const step = { ...difference(this.state, next), label };
    if (isEmpty(step)) return false;
    this.steps.length = this.at;
    this.steps.push(step);
    if (this.steps.length > MOST_STEPS) this._forgetOldest();
    this.at = this.steps.length;
    this._changed(next);
    return true;
  }

  _forgetOldest() {
    this.start = applied(this.start, this.steps.shift());
    this.droppedSteps = Math.max(0, this.droppedSteps - 1);
  }

  undo() {
    if (!this.canUndo) return "";
    this.at -= 1;
    const step = this.steps[this.at];
    this._changed(applied(this.state, step, false));
    return step.label;
  }

  redo() {
    if (!this.canRedo) return "";
    const step = this.steps[this.at];
    this.at += 1;
    this._changed(applied(this.state, step));
    return step.label;
  }

  // The server has this state now; the way back stays.
  markSaved(version, state = this.state) {
    this.version = version;
    this.saved = JSON.stringify(state);
    this.restored = null;
    this.store();
    this.onChange(this);
  }

  // A pattern that was new has a place of its own now: its steps go along.
  moveTo(key) {
    this.kept.drop();
    this.kept.close();
    this._keepUnder(key);
    this.store();
  }

  // Drop the work that was brought back, and begin with what the server has.
  forget(start, version) {
    this._begin(start, version);
    this.restored = null;
    this.kept.drop();
    this.onChange(this);
  }

  _changed(next) {
    this.state = next;
    clearTimeout(this._timer);
    this._timer = setTimeout(() => this.store(), STORE_AFTER_MS);
    this.onChange(this);
  }

  // When the browser's store is full the oldest steps go, never the work.
  store() {
    clearTimeout(this._timer);
    if (!this.isDirty && this.steps.length === 0) return;
    if (!this.isDirty && this.kept.isBeside) {
      this.kept.drop();
      return;
    }
    let dropped = Math.min(this.droppedSteps, this.at);
    while (!this._wrote(dropped) && dropped < this.at) {
      dropped = Math.min(this.at, Math.max(10, dropped * 2));
    }
    this.droppedSteps = dropped;
  }

  _wrote(dropped) {
    const wasKept = this.isKept;
    try {
      this.kept.write(this._asText(dropped));
      this.isKept = true;
    } catch {
      this.isKept = false;
    }
    if (this.isKept !== wasKept) this.onChange(this);
    return this.isKept;
  }

  _asText(dropped) {
    const start = endOf({ start: this.start, steps: this.steps, at: dropped });
    return JSON.stringify({
      format: FORMAT,
      when: new Date().toISOString(),
      version: this.version,
      saved: this.saved,
      start,
      steps: this.steps.slice(dropped),
      at: this.at - dropped,
    });
  }

  // Unsaved work comes first, else the way back of what was saved.
  _restore() {
    const found = this.kept.found().flatMap((kept) => this._readable(kept));
    const isWork = ({ work, state }) => JSON.stringify(state) !== work.saved;
    const chosen = found.find(isWork);
    if (chosen) this._bringBack(chosen);
    else if (found[0]?.work.version === this.version) this._takeUp(found[0]);
  }

  // What another version of this page kept, or something else spoilt, is no work.
  _readable({ place, work }) {
    try {
      if (work.format !== FORMAT || work.start.technique !== this.start.technique) return [];
      const state = endOf(work);
      const isWhole = [work.start, state].every((each) => isPattern(each, this.start));
      return isWhole && work.at <= work.steps.length ? [{ place, work, state }] : [];
    } catch {
      return [];
    }
  }

  _takeUp({ place, work, state }) {
    this.kept.takenUp = place;
    Object.assign(this, { start: work.start, steps: work.steps, at: work.at, state });
  }

  _bringBack(chosen) {
    const { version, when } = chosen.work;
    this.restored = { when: new Date(when), isOlder: version !== this.version };
    this._takeUp(chosen);
    this.version = version;
  }
}
