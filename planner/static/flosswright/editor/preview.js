// The drawn band and the strand lengths beside the board: they follow each change.

import { NotReached, post } from "./server.js";

const TRY_AGAIN_MS = 3000;
const LONG_MS = 400;

export class Preview {
  constructor({ url, box, choice, status, stateOf, onProblem }) {
    Object.assign(this, { url, box, choice, status, stateOf, onProblem });
    this.isAsking = false;
    this.timer = null;
    choice.addEventListener("change", () => this.follow());
    window.addEventListener("online", () => this.follow());
  }

  // Only the newest state counts. One question is out at a time, because the server works on even
  // those that nobody waits for any more; one that takes long is dropped for a newer one.
  follow() {
    this.wanted = JSON.stringify({ state: this.stateOf(), choice: this.chosen() });
    if (!this.isAsking) this.ask();
    else if (performance.now() - this.askedAt > LONG_MS) this.asked.abort();
  }

  chosen() {
    return Object.fromEntries(new FormData(this.choice));
  }

  async ask() {
    clearTimeout(this.timer);
    this.isAsking = true;
    try {
      while (this.wanted !== this.shown) await this.askOnce(this.wanted);
      this.status.textContent = "";
    } catch (error) {
      if (!(error instanceof NotReached)) throw error;
      this.status.textContent = `${error.message} Your work is kept here; the lengths follow later.`;
      this.timer = setTimeout(() => this.ask(), TRY_AGAIN_MS);
    } finally {
      this.isAsking = false;
    }
  }

  async askOnce(question) {
    this.asked = new AbortController();
    this.askedAt = performance.now();
    try {
      const answer = await post(this.url, question, this.asked.signal);
      this.show(answer);
      this.shown = question;
    } catch (error) {
      if (error.name !== "AbortError") throw error;
    }
  }

  show({ html, data }) {
    if (html !== undefined) this.fill(html);
    this.onProblem(html === undefined ? data : null);
  }

  // What was opened stays open.
  fill(html) {
    const opened = [...this.box.querySelectorAll("details")].map((details) => details.open);
    this.box.innerHTML = html;
    this.box.querySelectorAll("details").forEach((details, at) => { details.open = opened[at] ?? details.open; });
  }
}
