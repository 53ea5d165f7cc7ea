/* The markable boxes of a page to places that say in words how they stand, with the marks below them. */
"use strict";
(function (review) {
  const WORDS = { agreed: "agreed", corrected: "corrected", comment: "comment", lapsed: "moved since",
                  unmarked: "not checked" };
  const SAID = { agreed: "Agreed", corrected: "Corrected", comment: "Comment" };

  function made(tag, name, text = "") {
    const element = document.createElement(tag);
    element.className = name;
    element.textContent = text;
    return element;
  }

  /** A markable box: what a mark on it binds to, the word beside it and the room below it. */
  class Place {
    constructor(box, index) {
      const { kind, name, seen, shown } = box.dataset;
      Object.assign(this, { box, kind, name, seen, shown });
      const step = kind === "step" ? box.querySelector(".id") : null;
      const figure = kind === "figure" ? box.querySelector("figcaption b") : null;
      this.label = figure ? `figure ‘${figure.textContent.replace(/\.$/, "")}’`
        : step ? `step ${step.textContent}, ${name}` : `${kind} ${name}`;
      this.word = made("span", "review-state");
      this.word.id = `review-state-${index}`;
      this.under = made("div", "review-under");
      this.notes = made("div", "review-notes");
      this.under.append(this.notes);
    }

    /** Puts word and room into the page. */
    dress() {
      if (this.box.matches("tr")) this.#dressRow();
      else this.#dressBlock();
      this.box.tabIndex = 0;
      this.box.setAttribute("aria-describedby", this.word.id);
    }

    undress() {
      this.box.removeAttribute("tabindex");
    }

    /** Takes the row below out of the table for print, whose rules for breaks count rows; and puts it back. */
    clear(out) {
      if (out) this.row?.remove();
      else if (this.row) this.box.after(this.row);
    }

    #dressRow() {
      const cell = made("td", "review-cell");
      cell.append(this.word);
      this.box.prepend(cell);
      this.row = made("tr", "review-row");
      const room = made("td", "");
      room.colSpan = this.box.cells.length;
      room.append(this.under);
      this.row.append(room);
      this.box.after(this.row);
    }

    #dressBlock() {
      (this.box.querySelector(".name, figcaption") ?? this.box).prepend(this.word);
      this.box.append(this.under);
      if (this.kind !== "figure") this.box.setAttribute("role", "group");
      this.box.setAttribute("aria-label", this.label);
    }

    /** The word and the notes of how the place stands; ``current`` tells all of its marks. */
    show(item, current) {
      const { state, mark, earlier } = item;
      this.word.textContent = WORDS[state] + (state === "comment" && mark.answer ? ", answered" : "");
      this.word.dataset.state = state;
      this.box.dataset.state = state;
      this.box.classList.toggle("review-current", current);
      const marks = current ? [mark, ...earlier].filter(Boolean) : state === "agreed" || !mark ? [] : [mark];
      this.notes.replaceChildren(...marks.flatMap((one, index) => notesOf(one, index ? "earlier" : state, this)));
      if (this.row) this.row.hidden = !current && !marks.length;
    }
  }

  function signed(entry) {
    return `${entry.by}, ${entry.date}`;
  }

  /** A mark in sentences; the answer to it stands below. */
  function notesOf(mark, state, place) {
    const said = `${SAID[mark.verdict]} by ${signed(mark)}, revision ${mark.revision}`;
    const seen = mark.shown && mark.shown !== place.shown ? `, at ${mark.shown}` : "";
    const moved = state === "lapsed" || (state === "comment" && mark.seen !== place.seen);
    const lines = [made("p", "review-note", said + seen + (moved ? "; moved since" : "") + (mark.text ? ": " : "."))];
    lines[0].append(made("span", "review-text", mark.text ?? ""));
    if (mark.answer) {
      lines.push(made("p", "review-note review-answer", `Answer by ${signed(mark.answer)}: `));
      lines[1].append(made("span", "review-text", mark.answer.text));
    }
    for (const line of lines) line.classList.toggle("review-earlier", state === "earlier");
    return lines;
  }

  /** A column for the words in each table that has places. */
  function dressTable(table) {
    table.querySelector("colgroup")?.prepend(made("col", "review-column"));
    for (const row of table.tHead.rows) {
      const head = made("th", "review-cell", "Check");
      head.scope = "col";
      row.prepend(head);
    }
    for (const row of table.querySelectorAll("tbody > tr:not([data-kind])")) row.prepend(made("td", "review-cell"));
  }

  function placesOf(page) {
    return [...page.querySelectorAll("[data-kind]")].map((box, index) => new Place(box, index));
  }

  /** Dresses all places of a page; its tables gain their column first. */
  function dress(places) {
    const tables = places.map((place) => place.box.closest("table")).filter(Boolean);
    new Set(tables).forEach(dressTable);
    for (const place of places) place.dress();
  }

  review.places = { placesOf, dress, made };
})(window.calcpackReview);
