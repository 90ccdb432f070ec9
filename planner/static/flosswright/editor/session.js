// One session of editing: the state, and every step back to its beginning, kept in the browser so
// that a reload, a crash or a lost connection loses neither the work nor the way back.

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

const isEmpty = (step) =>
  step.removed.length === 0 && step.added.length === 0 && Object.keys(step.fields).length === 0;

export class EditingSession {
  // `start` is the pattern as the server has it, at `version` (null for one that is not saved yet).
  constructor({ key, start, version = null, storage = window.localStorage, onChange = () => {} }) {
    this.key = `flosswright-editing-${key}`;
    this.storage = storage;
    this.onChange = onChange;
    this.identity = `${Date.now()}-${Math.random()}`;
    this.restored = null;
    this.openElsewhere = false;
    this._begin(start, version);
    this._restore();
    this._timer = null;
    window.addEventListener("pagehide", () => this.store());
    document.addEventListener("visibilitychange", () => document.hidden && this.store());
    window.addEventListener("storage", (event) => this._noticeOthers(event));
  }

  _begin(start, version) {
    this.version = version;
    this.start = start;
    this.saved = JSON.stringify(start);
    this.state = start;
    this.steps = [];
    this.at = 0;
  }

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
    if (this.steps.length > MOST_STEPS) this.start = applied(this.start, this.steps.shift());
    this.at = this.steps.length;
    this._changed(next);
    return true;
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

  // A pattern that was new has a name of its own now: its steps go along.
  moveTo(key) {
    this.storage.removeItem(this.key);
    this.key = `flosswright-editing-${key}`;
    this.store();
  }

  // Drop the work that was brought back, and begin with what the server has.
  forget(start, version) {
    this._begin(start, version);
    this.restored = null;
    this.storage.removeItem(this.key);
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
    let dropped = 0;
    for (;;) {
      try {
        this.storage.setItem(this.key, this._asText(dropped));
        return;
      } catch (error) {
        if (dropped >= this.at) return;
        dropped = Math.min(this.at, Math.max(10, dropped * 2));
      }
    }
  }

  _asText(dropped) {
    const start = this.steps.slice(0, dropped).reduce((state, step) => applied(state, step), this.start);
    return JSON.stringify({
      format: FORMAT,
      identity: this.identity,
      when: new Date().toISOString(),
      version: this.version,
      saved: this.saved,
      start,
      steps: this.steps.slice(dropped),
      at: this.at - dropped,
    });
  }

  _restore() {
    const kept = this._kept();
    if (kept === null) return;
    const state = kept.steps.slice(0, kept.at).reduce((before, step) => applied(before, step), kept.start);
    const isWork = JSON.stringify(state) !== kept.saved;
    // Saved elsewhere since, and nothing of ours is unsaved: the server's pattern is the newer one.
    if (!isWork && kept.version !== this.version) return;
    Object.assign(this, { start: kept.start, steps: kept.steps, at: kept.at, state });
    if (isWork) {
      this.restored = { when: new Date(kept.when), version: kept.version, isOlder: kept.version !== this.version };
      this.version = kept.version;
    }
  }

  _kept() {
    try {
      const kept = JSON.parse(this.storage.getItem(this.key));
      return kept?.format === FORMAT && kept.start.technique === this.start.technique ? kept : null;
    } catch {
      return null;
    }
  }

  _noticeOthers(event) {
    if (event.key !== this.key || event.newValue === null) return;
    this.openElsewhere = true;
    this.onChange(this);
  }
}
