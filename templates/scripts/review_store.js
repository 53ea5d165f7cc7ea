/* Marks to the browser's own storage and back: what the review file that the page was built with has not. */
"use strict";
(function (review) {
  const { merged, beyond, keyOf } = review.marks;
  const SETTINGS = "calcpack review settings";

  /** Where texts are kept: in the browser's storage; in the page's memory where the browser keeps nothing. */
  class Shelf {
    #memory = new Map();
    lasting = true;

    get(key) {
      if (this.#memory.has(key)) return this.#memory.get(key);
      try {
        return window.localStorage.getItem(key);
      } catch {
        this.lasting = false;
        return null;
      }
    }

    set(key, text) {
      try {
        window.localStorage.setItem(key, text);
        this.#memory.delete(key);
        this.lasting = true;
      } catch {
        this.#memory.set(key, text);
        this.lasting = false;
      }
    }

    /** The mapping kept under a key; an empty one for whatever is none. */
    mapping(key) {
      try {
        const data = JSON.parse(this.get(key));
        return data !== null && typeof data === "object" ? data : {};
      } catch {
        return {};
      }
    }
  }

  /** What is kept of one sheet; ``unsaved`` names the marks and answers that are in no file yet, as they were made. */
  class Store {
    #built;
    #key;
    #shelf = new Shelf();

    constructor(built) {
      this.#built = built;
      this.#key = `calcpack review ${JSON.stringify([built.project, built.number])}`;
      this.#change((kept) => ({ ...kept, marks: beyond(built.marks, kept.marks) }));
    }

    get key() {
      return this.#key;
    }

    /** Whether marks outlive the page. */
    get lasting() {
      return this.#shelf.lasting;
    }

    get marks() {
      return merged(this.#built.marks, this.#kept.marks);
    }

    get signatures() {
      return merged(this.#built.signatures, this.#kept.signatures);
    }

    get unsaved() {
      return this.#kept.unsaved;
    }

    /** How many marks only this browser has. */
    get count() {
      return this.#kept.marks.length;
    }

    // Read anew each time: the same sheet may be open in a second window.
    get #kept() {
      const found = this.#shelf.mapping(this.#key);
      const listed = (name) => (Array.isArray(found[name]) ? found[name].filter((one) => one) : []);
      return { marks: listed("marks"), signatures: listed("signatures"), unsaved: listed("unsaved") };
    }

    #change(make) {
      const made = make(this.#kept);
      const there = new Set(made.marks.map(keyOf));
      const unsaved = made.unsaved.filter((one) => there.has(one.key));
      this.#shelf.set(this.#key, JSON.stringify({ ...made, unsaved }));
    }

    add(mark) {
      this.#change((kept) => ({ ...kept, marks: [...kept.marks, mark],
                                unsaved: [...kept.unsaved, { key: keyOf(mark), part: "mark" }] }));
    }

    answer(mark, answer) {
      const key = keyOf(mark), answered = { ...mark, answer };
      this.#change((kept) => {
        const marks = kept.marks.map((one) => (keyOf(one) === key ? answered : one));
        return { ...kept, marks: marks.includes(answered) ? marks : [...marks, answered],
                 unsaved: [...kept.unsaved, { key, part: "answer" }] };
      });
    }

    /** Takes back what was done last to a mark and is in no file yet: 'answer', 'mark', or undefined for nothing. */
    takeBack(mark) {
      const key = keyOf(mark);
      const last = this.unsaved.findLast((one) => one.key === key);
      if (last === undefined) return undefined;
      const { answer, ...bare } = mark;
      const left = (one) => (keyOf(one) !== key ? [one] : last.part === "answer" ? [bare] : []);
      this.#change((kept) => ({
        ...kept, marks: beyond(this.#built.marks, kept.marks.flatMap(left)),
        unsaved: kept.unsaved.filter((one) => one.key !== key || one.part !== last.part),
      }));
      return last.part;
    }

    /** Takes what a file holds; how many of its marks were new. */
    take(file) {
      const before = this.count;
      this.#change((kept) => ({
        ...kept, marks: beyond(this.#built.marks, merged(kept.marks, file.marks)),
        signatures: beyond(this.#built.signatures, merged(kept.signatures, file.signatures)),
      }));
      return this.count - before;
    }

    saved() {
      this.#change((kept) => ({ ...kept, unsaved: [] }));
    }

    forget() {
      this.#change(() => ({ marks: [], signatures: [], unsaved: [] }));
    }
  }

  /** What the browser keeps of its user, whatever the sheet: the name, and whether letters are keys. */
  class Settings {
    #shelf = new Shelf();

    get(name, otherwise) {
      return this.#shelf.mapping(SETTINGS)[name] ?? otherwise;
    }

    set(name, value) {
      this.#shelf.set(SETTINGS, JSON.stringify({ ...this.#shelf.mapping(SETTINGS), [name]: value }));
    }
  }

  review.store = { Store, Settings };
})(window.calcpackReview);
