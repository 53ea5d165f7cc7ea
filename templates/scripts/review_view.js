/* The parts of the desk that are seen, from their template: bar, strip of buttons, box for texts, help. */
"use strict";
(function (review) {
  const { counted } = review.desk;

  function parts() {
    const found = document.getElementById("review-parts").content;
    return Object.fromEntries(["start", "bar", "strip", "box", "help"].map(
      (name) => [name, found.querySelector(`.review-${name}`)]));
  }

  /** What is seen of the desk; it knows elements and texts, and nothing of marks. */
  class View {
    constructor() {
      Object.assign(this, parts());
      this.name = this.bar.querySelector("[name=by]");
      this.letters = this.help.querySelector("[name=letters]");
      this.file = this.bar.querySelector("[type=file]");
      this.buttons = [...this.bar.querySelectorAll("[data-act]"), ...this.strip.querySelectorAll("[data-act]")];
      for (const button of this.buttons) this.#keyOn(button);
    }

    #keyOn(button) {
      const cap = document.createElement("kbd");
      cap.textContent = button.dataset.key;
      cap.setAttribute("aria-hidden", "true");
      button.append(" ", cap);
      button.setAttribute("aria-keyshortcuts", button.dataset.key);
      const row = this.help.querySelector("tbody").insertRow();
      row.insertCell().append(cap.cloneNode(true));
      row.insertCell().textContent = button.title;
    }

    /** Puts the button and the bar into the page. */
    place() {
      (document.querySelector("nav.contents") ?? document.body).append(this.start);
      document.body.append(this.bar, this.help);
      // The page keeps room for the bar, whose height hangs on the width of the window.
      const room = () => document.documentElement.style.setProperty("--bar", `${this.bar.offsetHeight}px`);
      new ResizeObserver(room).observe(this.bar);
    }

    /** Keeps or leaves the text in the box, by button or key. */
    listen() {
      this.box.addEventListener("submit", (event) => {
        event.preventDefault();
        this.finishBox(true);
      });
      this.box.querySelector(".review-drop").addEventListener("click", () => this.finishBox(false));
      this.box.addEventListener("keydown", (event) => {
        const keeps = event.key === "Enter" && (event.ctrlKey || event.metaKey);
        if (!keeps && event.key !== "Escape") return;
        event.preventDefault();
        this.finishBox(keeps);
      });
    }

    // The box for a text -----------------------------------------------------------------------

    /** Opens the box below the place at hand; ``done(text, kept)`` says whether it may close. */
    openBox(label, text, done) {
      this.done = done;
      this.box.querySelector("label").textContent = label;
      this.area = this.box.querySelector("textarea");
      this.area.maxLength = review.text.LONGEST_TEXT;
      this.area.value = text;
      this.strip.after(this.box);
      this.area.focus();
      this.box.scrollIntoView({ block: "nearest" });
    }

    finishBox(kept) {
      const place = this.box.closest("[data-kind], .review-row");
      if (!this.done || !this.done(this.area.value, kept)) return;
      this.done = undefined;
      this.box.remove();
      (place?.matches(".review-row") ? place.previousElementSibling : place)?.focus({ preventScroll: true });
    }

    /** Leaves the box, its text kept as a draft. */
    closeBox() {
      this.done?.(this.area.value, false);
      this.done = undefined;
      this.box.remove();
    }

    // Places -----------------------------------------------------------------------------------

    go(place) {
      place.box.focus({ preventScroll: true });
      const tall = place.box.getBoundingClientRect().height > window.innerHeight / 2;
      place.box.scrollIntoView({ block: tall ? "start" : "center", inline: "nearest" });
    }

    putStrip(place) {
      place.under.append(this.strip);
    }

    // The bar ----------------------------------------------------------------------------------

    report(words, share, store) {
      this.bar.querySelector(".review-counts").textContent = words.join(" · ");
      this.bar.querySelector(".review-share > div").style.width = `${100 * share}%`;
      const unsaved = store.unsaved.length;
      const save = this.bar.querySelector("[data-act=save]");
      save.classList.toggle("review-wanted", unsaved > 0);
      save.firstChild.textContent = unsaved ? `Save (${unsaved} unsaved)` : "Save";
      this.reportStart(store);
    }

    reportStart(store) {
      const unsaved = store.unsaved.length;
      const words = unsaved ? `Check this sheet (${counted(unsaved, "mark", "marks")} not saved)` : "Check this sheet";
      this.start.querySelector("span").textContent = words;
    }

    tell(words) {
      this.bar.querySelector(".review-told").textContent = words;
    }

    askName() {
      this.name.focus();
      this.name.select();
    }

    // Files ------------------------------------------------------------------------------------

    download(name, text) {
      const link = document.createElement("a");
      link.href = URL.createObjectURL(new Blob([text], { type: "application/yaml" }));
      link.download = name;
      link.click();
      setTimeout(() => URL.revokeObjectURL(link.href), 60000);
    }

    chooseFile(take) {
      this.file.value = "";
      this.file.onchange = async () => {
        const [chosen] = this.file.files;
        if (chosen) take(chosen.name, await chosen.text());
      };
      this.file.click();
    }

    // Help -------------------------------------------------------------------------------------

    openHelp(store) {
      const kept = counted(store.count, "mark", "marks");
      this.help.querySelector(".review-kept").textContent = store.lasting
        ? `This browser keeps ${kept} beyond those of the review file; ${store.unsaved.length} not saved.`
        : "This browser keeps nothing: save before you leave the page.";
      this.help.showModal();
    }
  }

  review.view = { View };
})(window.calcpackReview);
