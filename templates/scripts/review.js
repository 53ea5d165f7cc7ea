/* The sheet's page to a desk for its checker; off until the button or Alt+R turns it on, so that no letter is a key. */
"use strict";
(function (review) {
  const { placesOf, dress } = review.places;
  const { Store, Settings } = review.store;

  /** The mode: turns the page into the checker's desk and back. */
  class Mode {
    #dressed = false;

    constructor() {
      const data = JSON.parse(document.getElementById("review-data").textContent);
      this.settings = new Settings();
      this.store = new Store(data);
      this.view = new review.view.View();
      this.places = placesOf(document.querySelector("main"));
      const off = () => this.turn(false);
      this.desk = new review.desk.Desk({ ...this, data, off });
      this.keys = new Map(this.view.buttons.map((button) => [button.dataset.key, button.dataset.act]));
      this.view.help.querySelector(".review-file").textContent = data.file;
    }

    get on() {
      return document.body.classList.contains("reviewing");
    }

    turn(on) {
      this.view.closeBox();
      document.body.classList.toggle("reviewing", on);
      if (on) this.#dress();
      else for (const place of this.places) place.undress();
      this.view.reportStart(this.store);
      if (on && !this.desk.name) this.view.askName();
      if (!on) this.view.start.focus({ preventScroll: true });
    }

    #dress() {
      if (!this.#dressed) dress(this.places);
      else for (const place of this.places) place.box.tabIndex = 0;
      this.#dressed = true;
      this.view.name.value = this.desk.name;
      this.view.letters.checked = this.settings.get("letters", true);
      this.view.tell(this.store.lasting ? "" : "This browser keeps no marks: save before you leave the page.");
      this.desk.refresh();
    }

    // Keys and clicks --------------------------------------------------------------------------

    key(event) {
      if (event.altKey && event.code === "KeyR" && !event.ctrlKey && !event.metaKey) {
        event.preventDefault();
        this.turn(!this.on);
      } else if (this.on && !this.view.help.open) {
        const act = this.#actOf(event);
        if (act === undefined) return;
        event.preventDefault();
        this.desk[act]();
      }
    }

    #actOf(event) {
      const writing = event.target.closest?.("input, textarea, select, [contenteditable]");
      if (event.ctrlKey || event.metaKey || writing) return undefined;
      if (event.altKey) return { ArrowDown: "next", ArrowUp: "previous" }[event.key];
      return this.settings.get("letters", true) ? this.keys.get(event.key.toLowerCase()) : undefined;
    }

    listen() {
      const main = document.querySelector("main");
      document.addEventListener("keydown", (event) => this.key(event));
      document.addEventListener("click", (event) => {
        const button = event.target.closest("[data-act]");
        if (button) this.desk[button.dataset.act]();
      });
      for (const event of ["focusin", "click"]) main.addEventListener(event, ({ target }) => this.#arrive(target));
      this.view.start.addEventListener("click", () => this.turn(true));
      this.view.listen();
      this.#listenToSettings();
      this.#listenToWindow();
    }

    #listenToSettings() {
      const { view, desk, settings } = this;
      view.name.addEventListener("input", () => settings.set("by", view.name.value));
      view.name.addEventListener("keydown", ({ key }) => {
        if (key === "Enter" || key === "Escape") desk.resume();
      });
      view.letters.addEventListener("change", () => settings.set("letters", view.letters.checked));
      view.help.querySelector(".review-done").addEventListener("click", () => view.help.close());
      view.help.querySelector(".review-forget").addEventListener("click", () => {
        view.help.close();
        desk.forget();
      });
    }

    #listenToWindow() {
      window.addEventListener("storage", ({ key }) => {
        if (key === this.store.key && this.on) this.desk.refresh();
      });
      window.addEventListener("beforeunload", (event) => {
        if (!this.store.lasting && this.store.unsaved.length) event.preventDefault();
      });
      for (const [event, out] of [["beforeprint", true], ["afterprint", false]]) {
        window.addEventListener(event, () => this.places.forEach((place) => place.clear(out)));
      }
    }

    #arrive(target) {
      if (!this.on) return;
      const box = target.closest("[data-kind]") ?? target.closest(".review-row")?.previousElementSibling;
      const place = this.places.find((one) => one.box === box);
      if (place) this.desk.arrive(place);
    }
  }

  const mode = new Mode();
  mode.listen();
  mode.view.place();
  mode.view.reportStart(mode.store);
})(window.calcpackReview);
