// Words in the built-in alphabet, which the page brings along, so that lettering works without
// the network. The rules are those of patterns/alphabet.py; a test compares the two.

// Words that the alphabet cannot show; the message is for the maker.
export class LetteringError extends Error {}

export class Alphabet {
  // letters: by height, by letter, rows of "#" and "."; and the numbers of patterns/alphabet.py.
  constructor({ letters, sameMarks, mostLetters, wordGap }) {
    this.letters = letters;
    this.sameMarks = sameMarks;
    this.mostLetters = mostLetters;
    this.wordGap = wordGap;
  }

  get heights() {
    return Object.keys(this.letters).map(Number);
  }

  // Rows as they are tied, true where a letter is. "along": reads from the start of the band to
  // its end; "down": the letters stand one below the other.
  write(text, height, direction) {
    return direction === "down" ? this.stacked(text, height) : this.along(text, height);
  }

  along(text, height) {
    const parts = this.pictures(text, height);
    const upright = Array.from({ length: height }, (_, row) =>
      parts.flatMap((part, number) => (number ? [false, ...part[row]] : part[row])));
    return upright[0].map((_, column) => upright.map((row) => row[column]).toReversed());
  }

  stacked(text, height) {
    const parts = this.pictures(text, height);
    const width = Math.max(...parts.map((part) => part[0].length));
    const blank = Array(width).fill(false);
    return parts.flatMap((part, number) => {
      const shown = part.isBlank ? part.slice(0, this.wordGap) : part;
      const rows = shown.map((row) => centred(row, width));
      return number ? [blank, ...rows] : rows;
    });
  }

  pictures(text, height) {
    return this.characters(text, height).map((character) => {
      if (character !== " ") return this.letter(character, height);
      const blank = Array.from({ length: height }, () => Array(this.wordGap).fill(false));
      return Object.assign(blank, { isBlank: true });
    });
  }

  letter(character, height) {
    return this.letters[height][character].map((row) => [...row].map((cell) => cell === "#"));
  }

  has(character, height) {
    return Object.hasOwn(this.letters[height], character);
  }

  characters(text, height) {
    const plain = [...text.normalize("NFC")].map((c) => this.sameMarks[c] ?? c).join("");
    const words = plain.toUpperCase().normalize("NFC").split(/\s+/u).filter(Boolean).join(" ");
    const characters = [...words];
    if (characters.length === 0) throw new LetteringError("Write a word first.");
    if (characters.length > this.mostLetters) {
      throw new LetteringError(
        `Write at most ${this.mostLetters} letters; these are ${characters.length}.`);
    }
    characters.forEach((character, place) => {
      if (character !== " " && !this.has(character, height)) {
        throw new LetteringError(this.notThere(character, place + 1, height));
      }
    });
    return characters;
  }

  notThere(character, place, height) {
    const shown = /[\p{C}\p{Z}]/u.test(character) ? "?" : character;
    const words = `There is no '${shown}' (letter ${place}) ${height} cells high.`;
    const taller = Math.max(...this.heights);
    if (this.has(character, taller)) {
      return `${words} Take the letters of ${taller} cells, or write it without its mark.`;
    }
    const [plain] = character.normalize("NFD");
    if (plain !== character && this.has(plain, height)) return `${words} Write ${plain} instead.`;
    return `${words} Use A to Z, 0 to 9, blanks and & ! ? . - ' + ♥.`;
  }
}

function centred(row, width) {
  const left = Math.floor((width - row.length) / 2);
  const right = width - row.length - left;
  return [...Array(left).fill(false), ...row, ...Array(right).fill(false)];
}
