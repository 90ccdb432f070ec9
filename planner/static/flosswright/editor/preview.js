// The drawn band and the strand lengths beside the board: they follow each change.

import { NotReached, post } from "./server.js";

const TRY_AGAIN_MS = 3000;

export class Preview {
  constructor({ url, box, choice, status, stateOf, onProblem }) {
    Object.assign(this, { url, box, choice, status, stateOf, onProblem });
    this.asked = null;
    this.timer = null;
    choice.addEventListener("change", () => this.follow());
    window.addEventListener("online", () => this.follow());
  }

  // The newest question counts: an older one is dropped.
  async follow() {
    clearTimeout(this.timer);
    this.asked?.abort();
    const asked = new AbortController();
    this.asked = asked;
    try {
      const answer = await post(this.url, { state: this.stateOf(), choice: this.chosen() }, asked.signal);
      if (this.asked !== asked) return;
      this.show(answer);
    } catch (error) {
      if (error.name === "AbortError") return;
      if (!(error instanceof NotReached)) throw error;
      this.status.textContent = `${error.message} Your work is kept here; the lengths follow later.`;
      this.timer = setTimeout(() => this.follow(), TRY_AGAIN_MS);
    }
  }

  chosen() {
    return Object.fromEntries(new FormData(this.choice));
  }

  show({ html, data }) {
    this.status.textContent = "";
    if (html !== undefined) this.box.innerHTML = html;
    this.onProblem(html === undefined ? data : null);
  }
}
