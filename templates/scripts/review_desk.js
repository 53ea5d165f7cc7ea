/* What a checker does at the page, by key or button, to marks of its places; the bar tells how the check stands. */
"use strict";
(function (review) {
  const { plainName, isAuthor, twiceAnswered, standing, goneComments, counts } = review.marks;
  const OPEN = ["unmarked", "lapsed", "comment"];

  function today() {
    const now = new Date();
    const parts = [now.getFullYear(), now.getMonth() + 1, now.getDate()];
    return parts.map((part) => String(part).padStart(2, "0")).join("-");
  }

  /** A text as it is kept: its lines end in line feeds, and what cannot be seen is gone. */
  function cleaned(text) {
    return text.replace(/\r\n?|[\u2028\u2029\u0085]/g, "\n").replace(review.text.UNSEEN, "").trim();
  }

  function counted(count, one, several) {
    return `${count} ${count === 1 ? one : several}`;
  }

  /** The desk: the places, what is kept of them, and the place at hand. */
  class Desk {
    constructor({ data, places, store, settings, view, off }) {
      Object.assign(this, { data, places, store, settings, view, off });
      this.at = undefined;
      this.drafts = new Map();
    }

    get name() {
      return cleaned(this.settings.get("by", ""));
    }

    /** The marks that count: an author checks nobody's work. */
    get marks() {
      const { marks, signatures } = this.store;
      return marks.filter((mark) => !isAuthor(mark.by, mark.revision, this.data, signatures));
    }

    get items() {
      return standing(this.places, this.marks);
    }

    get item() {
      return this.items.find((item) => item.place === this.at);
    }

    // Moving about -----------------------------------------------------------------------------

    next() {
      this.#go(this.#index() + 1, 1, () => true);
    }

    previous() {
      this.#go(this.#index() - 1, -1, () => true);
    }

    nextOpen() {
      const start = this.#index() + 1;
      const open = (item) => OPEN.includes(item.state);
      if (!this.#go(start, 1, open) && !this.#go(0, 1, open)) this.tell("Nothing is open: every place is checked.");
    }

    /** The place at hand; before there is one, the last place above what the window shows. */
    #index() {
      if (this.at !== undefined) return this.places.indexOf(this.at);
      const below = this.places.findIndex((place) => place.box.getBoundingClientRect().top >= 0);
      return (below < 0 ? this.places.length : below) - 1;
    }

    #go(start, step, wanted) {
      const items = this.items;
      for (let index = start; index >= 0 && index < items.length; index += step) {
        if (wanted(items[index])) {
          this.view.go(items[index].place);
          return true;
        }
      }
      return false;
    }

    /** Back to the place at hand, from the bar. */
    resume() {
      if (this.at === undefined) this.next();
      else this.view.go(this.at);
    }

    arrive(place) {
      if (this.at === place) return;
      this.view.closeBox();
      this.at = place;
      this.view.putStrip(place);
      this.refresh();
    }

    // Marking ----------------------------------------------------------------------------------

    agree() {
      const item = this.#itemFor();
      if (item === undefined) return;
      if (["agreed", "corrected"].includes(item.state) && plainName(item.mark.by) === plainName(this.name)) {
        this.tell(`${item.place.label} stands as ${item.state} by you already.`);
      } else {
        this.#mark(item.place, "agreed");
      }
    }

    comment() {
      this.#ask("comment", "Comment on");
    }

    corrected() {
      this.#ask("corrected", "What has been put right in");
    }

    #ask(verdict, words) {
      const item = this.#itemFor();
      if (item === undefined) return;
      this.#write(verdict, `${words} ${item.place.label}`, (text) => this.#mark(item.place, verdict, text));
    }

    answer() {
      const item = this.#atHand();
      if (item === undefined || !this.#named()) return;
      if (item.state !== "comment") {
        this.tell(`There is no open comment on ${item.place.label}.`);
      } else if (item.mark.answer) {
        this.tell("The comment has its answer; the checker agrees, corrects or comments again.");
      } else if (plainName(item.mark.by) === plainName(this.name)) {
        this.tell("The comment is your own: agree, correct, or comment again.");
      } else {
        this.#write("answer", `Answer to ${item.mark.by} on ${item.place.label}`, (text) => {
          this.store.answer(item.mark, { by: this.name, date: today(), text });
          this.#done(`Answered the comment on ${item.place.label}.`);
        });
      }
    }

    takeBack() {
      const item = this.#atHand();
      if (item === undefined) return;
      const part = item.mark && this.store.takeBack(item.mark);
      const what = { mark: "your mark", answer: "the answer" }[part];
      this.#done(what ? `Took back ${what} on ${item.place.label}.`
        : `Nothing unsaved to take back on ${item.place.label}; marks that are in a file stay as history.`);
    }

    #mark(place, verdict, text) {
      const mark = { [place.kind]: place.name, revision: this.data.revision, seen: place.seen };
      if (place.shown !== undefined) mark.shown = place.shown;
      Object.assign(mark, { verdict, by: this.name, date: today() }, text === undefined ? {} : { text });
      this.store.add(mark);
      const said = { agreed: "Agreed", comment: "Comment kept on", corrected: "Corrected" }[verdict];
      this.#done(`${said} ${place.label}.`);
    }

    #write(kind, label, keep) {
      const draft = `${kind} ${this.at.kind} ${this.at.name}`;
      this.view.openBox(label, this.drafts.get(draft) ?? "", (text, kept) => {
        const clean = cleaned(text);
        this.drafts.set(draft, kept && clean ? "" : text);
        if (kept && clean) keep(clean);
        else this.tell(kept ? "Nothing is written; nothing was kept." : "");
        return !kept || clean !== "";
      });
    }

    /** The item at hand for a mark of the check, which the author cannot give. */
    #itemFor() {
      const item = this.#atHand();
      if (item === undefined || !this.#named()) return undefined;
      if (isAuthor(this.name, this.data.revision, this.data, this.store.signatures)) {
        this.#refuse(`${this.name} prepared this sheet; another person has to check it.`);
        return undefined;
      }
      return item;
    }

    #atHand() {
      if (this.item === undefined) this.tell("Go to a place first: Next, or the key j.");
      return this.item;
    }

    #named() {
      if (plainName(this.name)) return true;
      this.#refuse("Write your name first; it goes with each mark.");
      return false;
    }

    #refuse(words) {
      this.tell(words);
      this.view.askName();
    }

    // Files ------------------------------------------------------------------------------------

    save() {
      const { marks, signatures } = this.store;
      if (!marks.length && !signatures.length) {
        this.tell("There is no mark to save yet.");
        return;
      }
      this.view.download(this.data.file, review.text.write(this.data.number, marks, signatures));
      this.store.saved();
      this.#done(`Saved ${this.data.file} to your downloads; put it beside ${this.data.spec}.`);
    }

    load() {
      this.view.chooseFile((file, text) => this.take(file, text));
    }

    take(file, text) {
      try {
        const found = review.text.read(text, this.data.number);
        this.#require(found);
        const added = this.store.take(found);
        this.#done(`Read ${file}: ${counted(found.marks.length, "mark", "marks")}, ${added} of them new here.`);
      } catch (error) {
        this.tell(`${file} was not read: ${error.message}.`);
      }
    }

    /** Refuses marks by the author, and a second answer to one comment. */
    #require({ marks }) {
      const { data, store } = this;
      const own = marks.find((one) => one.revision === data.revision
        && isAuthor(one.by, one.revision, data, store.signatures));
      if (own) throw new Error(`it has a mark by ${own.by}, who prepared revision ${data.revision}`);
      const twice = twiceAnswered(store.marks, marks);
      if (twice) throw new Error(`it has another answer to the comment of ${twice.by}, ${twice.date}`);
    }

    forget() {
      this.store.forget();
      this.drafts.clear();
      this.#done("Marks kept in this browser are forgotten; those of the review file stay.");
    }

    help() {
      this.view.openHelp(this.store);
    }

    leave() {
      this.off();
    }

    // Telling ----------------------------------------------------------------------------------

    #done(words) {
      this.refresh();
      this.tell(words);
    }

    tell(words) {
      this.view.tell(words);
    }

    refresh() {
      const items = this.items;
      for (const item of items) item.place.show(item, item.place === this.at);
      const found = counts(items);
      const settled = found.agreed + found.corrected, gone = goneComments(this.places, this.marks);
      this.view.report([`${found.agreed} agreed`, ...(found.corrected ? [`${found.corrected} corrected`] : []),
        counted(found.comment + gone, "comment open", "comments open") + (gone ? ` (${gone} on what is gone)` : ""),
        `${found.lapsed} moved since`, `${found.unmarked} not checked`],
      items.length ? settled / items.length : 0, this.store);
    }
  }

  review.desk = { Desk, counted };
})(window.calcpackReview);
