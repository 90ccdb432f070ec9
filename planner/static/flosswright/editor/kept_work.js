// Where a session of editing is kept in the browser. Windows on one pattern never write over each
// other's work: the first has the pattern's own place, each further one a place beside it.

const PREFIX = "flosswright-editing-";
const OWNER_PREFIX = "flosswright-owner-";
const IDENTITY = "flosswright-window";

// Some browsers refuse to keep anything: then the work lives as long as the page.
export function browserStorage() {
  try {
    window.localStorage.getItem(PREFIX);
    return window.localStorage;
  } catch {
    const refuse = () => { throw new Error("This browser keeps nothing."); };
    return { length: 0, key: () => null, getItem: () => null, removeItem: () => {}, setItem: refuse };
  }
}

const newIdentity = () => `${Date.now().toString(36)}-${Math.random().toString(36).slice(2)}`;

// A window stays the same one when it is loaded again.
function windowIdentity() {
  try {
    const identity = window.sessionStorage.getItem(IDENTITY) ?? newIdentity();
    window.sessionStorage.setItem(IDENTITY, identity);
    return identity;
  } catch {
    return newIdentity();
  }
}

export class KeptWork {
  constructor(key, storage, onOthers) {
    Object.assign(this, { storage, onOthers, others: new Set(), identity: windowIdentity() });
    this.main = PREFIX + key;
    this.ownerKey = OWNER_PREFIX + key;
    this.ownerSeen = this.owner;
    this.isBeside = this.storage.getItem(this.beside) !== null;
    this.takenUp = null;
    this.greet();
  }

  get owner() {
    return this.storage.getItem(this.ownerKey);
  }

  get beside() {
    return `${this.main}~${this.identity}`;
  }

  get place() {
    return this.isBeside ? this.beside : this.main;
  }

  // Windows that are open on the same pattern tell each other.
  greet() {
    this.channel = new BroadcastChannel(this.main);
    this.channel.onmessage = ({ data: { word, from } }) => this.heard(word, from);
    this.tell("opened");
  }

  heard(word, from) {
    if (word === "gone") this.others.delete(from);
    else this.others.add(from);
    if (word === "opened") this.tell("here");
    if (word === "here" && from === this.identity) this.becomeAnother();
    this.onOthers();
  }

  tell(word) {
    this.channel.postMessage({ word, from: this.identity });
  }

  // A copy of a window begins with the other's identity.
  becomeAnother() {
    this.identity = newIdentity();
    try {
      window.sessionStorage.setItem(IDENTITY, this.identity);
    } catch {
      // A browser that keeps nothing gives every page a new identity anyway.
    }
    this.isBeside = false;
    this.tell("opened");
  }

  // What is kept under the pattern: this window's own, then the pattern's, then what other windows
  // left, the newest first; as [{place, work}].
  found() {
    const places = Array.from({ length: this.storage.length }, (_, at) => this.storage.key(at));
    const left = places.filter((place) => place.startsWith(`${this.main}~`)).sort().reverse();
    return [...new Set([this.place, this.main, ...left])]
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
    this.isBeside ||= this.isTaken();
    this.storage.setItem(this.place, text);
    if (!this.isBeside) this.storage.setItem(this.ownerKey, this.identity);
    this.clearTakenUp();
  }

  isTaken() {
    const { owner } = this;
    return owner !== this.identity && (this.others.has(owner) || owner !== this.ownerSeen);
  }

  // What another window left is here now; what a window that is open has stays its own.
  clearTakenUp() {
    const { takenUp, main, place } = this;
    const isLeft = takenUp?.startsWith(`${main}~`) && !this.others.has(takenUp.slice(main.length + 1));
    if (isLeft && takenUp !== place) this.storage.removeItem(takenUp);
    this.takenUp = null;
  }

  // Another window's work stays where it is.
  drop() {
    if (this.isBeside || !this.isTaken()) this.storage.removeItem(this.place);
    this.clearTakenUp();
  }

  close() {
    this.tell("gone");
    this.channel.close();
  }
}
