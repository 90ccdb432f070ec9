// Where a session of editing is kept in the browser. Windows on one pattern never write over each
// other's work: the first has the pattern's own place, each further one a place beside it.

const PREFIX = "flosswright-editing-";
const OWNER_PREFIX = "flosswright-owner-";

// Some browsers refuse to keep anything: then the work lives as long as the page.
export function browserStorage() {
  try {
    window.localStorage.getItem(PREFIX);
    return window.localStorage;
  } catch {
    return { length: 0, key: () => null, getItem: () => null, removeItem: () => {}, setItem: () => {} };
  }
}

export class KeptWork {
  constructor(key, storage, onOthers) {
    Object.assign(this, { storage, onOthers, others: new Set() });
    this.identity = `${Date.now().toString(36)}-${Math.random().toString(36).slice(2)}`;
    this.own = PREFIX + key;
    this.ownerKey = OWNER_PREFIX + key;
    this.place = this.own;
    this.ownerSeen = this.owner;
    this.greet();
  }

  get owner() {
    return this.storage.getItem(this.ownerKey);
  }

  get isBeside() {
    return this.place !== this.own;
  }

  // Windows that are open on the same pattern tell each other.
  greet() {
    this.channel = new BroadcastChannel(this.own);
    this.channel.onmessage = ({ data }) => {
      if (data.word === "gone") this.others.delete(data.from);
      else this.others.add(data.from);
      if (data.word === "opened") this.tell("here");
      this.onOthers();
    };
    this.tell("opened");
  }

  tell(word) {
    this.channel.postMessage({ word, from: this.identity });
  }

  // What is kept under the pattern, its own place first, then the newest: [{place, work}].
  found() {
    const places = Array.from({ length: this.storage.length }, (_, at) => this.storage.key(at));
    const beside = places.filter((place) => place.startsWith(`${this.own}~`)).sort().reverse();
    return [this.own, ...beside]
      .map((place) => ({ place, work: this.read(place) }))
      .filter(({ work }) => work !== null);
  }

  read(place) {
    try {
      return JSON.parse(this.storage.getItem(place));
    } catch {
      return null;
    }
  }

  // Throws where the store is full.
  write(text) {
    if (this.isTaken()) this.place = `${this.own}~${this.identity}`;
    this.storage.setItem(this.place, text);
    if (!this.isBeside) this.storage.setItem(this.ownerKey, this.identity);
  }

  isTaken() {
    const { owner } = this;
    if (this.isBeside || owner === this.identity) return false;
    return this.others.size > 0 || owner !== this.ownerSeen;
  }

  // Another window's work stays where it is.
  drop() {
    if (!this.isTaken()) this.storage.removeItem(this.place);
  }

  close() {
    this.tell("gone");
    this.channel.close();
  }
}
