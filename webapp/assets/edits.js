/* Edits of what the design is made of: sends them, and finds the page's way in the new inputs.

   The server answers an edit with the design opened anew, so that all inputs are made anew too.
   What was unfolded stays so, the inputs stay scrolled where they were, and the focus goes to what
   is new or to what stands where something was. */
(function () {
  "use strict";
  const PATIENCE = 8000; // ms after which an edit counts as lost and the next may be sent
  const page = (window.slackwater = window.slackwater || {});
  const inputs = () => document.getElementById("inputs");
  const folds = () => [...inputs().querySelectorAll("details[data-fold]")];
  const partAt = (path) => inputs().querySelector('[data-part="' + path + '"]');
  let before = null; // what was unfolded, how far it was scrolled, and what was wished
  let sent = -Infinity; // when an edit was sent that is not opened yet

  page.edits = {
    start() {
      document.addEventListener("click", (event) => {
        const button = event.target.closest && event.target.closest("button[data-do]");
        if (button) clicked(button);
      });
    },

    /* Another kind of a part was chosen. */
    turn(values, ids, opened) {
      if (!opened) return window.dash_clientside.no_update;
      ids.forEach((id, index) => {
        const path = id.turn.replaceAll("/", ".");
        const part = path.split(".").reduce((place, key) => place && place[key], opened.profile);
        if (!part || !values[index] || values[index] === (part.layout || part.kind)) return;
        page.edits.send({ do: "turn", at: path, word: values[index] });
      });
      return window.dash_clientside.no_update;
    },

    /* Whether an edit is sent and not opened yet; its answer would undo a second one. */
    underway: () => performance.now() - sent < PATIENCE,

    send(wish) {
      if (page.edits.underway()) return;
      sent = performance.now();
      page.edits.remember(wish);
      document.activeElement.blur(); // what is being typed counts
      setTimeout(() => {
        const data = { ...page.gate.body(), wish };
        window.dash_clientside.set_props("edit-request", { data });
      }, 50);
    },

    remember(wish) {
      const opened = folds().filter((fold) => fold.open).map((fold) => fold.dataset.fold);
      before = { opened, scrolled: inputs().scrollTop, wish };
    },

    /* New inputs stand there: `edit` tells what moved, if an edit made them. */
    opened(edit) {
      sent = -Infinity;
      if (!before) return;
      const { opened, scrolled, wish } = before;
      before = null;
      const kept = new Set(opened);
      for (const fold of folds()) {
        const was = edit ? formerly(fold.dataset.fold, edit) : fold.dataset.fold;
        fold.open = was !== null && kept.has(was);
      }
      page.redraw();
      inputs().scrollTop = scrolled;
      if (edit && wish) turnTo(edit.place, wish);
    },
  };

  /* What is wrong with a list or a part as a whole is told beside it. */
  page.edits.blame = function (path, words) {
    const place = partAt(path);
    if (!place) return false;
    const told = Object.assign(document.createElement("p"), { className: "part-error", textContent: words });
    told.setAttribute("role", "alert");
    place.append(told);
    show(place);
    return true;
  };

  page.edits.forgive = function () {
    for (const told of document.querySelectorAll(".part-error")) told.remove();
  };

  function clicked(button) {
    const { do: what, at, word } = button.dataset;
    if (button.getAttribute("aria-disabled") === "true") page.toast(button.title);
    else page.edits.send({ do: what, at, word });
  }

  /* Name that a fold had before the items of a list moved; null if it is new. */
  function formerly(name, { items, order }) {
    if (!items || !name.startsWith(items + ".")) return name;
    const [index, ...rest] = name.slice(items.length + 1).split(".");
    const source = order[Number(index)];
    return source === null || source === undefined ? null : [items, source, ...rest].join(".");
  }

  /* Unfold what a place is folded into. */
  function show(place) {
    for (let outer = place; outer; outer = outer.parentElement) {
      if (outer.tagName === "DETAILS") outer.open = true;
    }
  }

  /* Move the focus to what the edit was about. */
  function turnTo(path, wish) {
    const place = partAt(path);
    if (!place) return;
    const fresh = wish.do === "add" || wish.do === "copy";
    const fold = place.querySelector('details[data-fold="' + path + '"]');
    if (fresh && fold) fold.open = true;
    const again = wish.do === "turn" ? '[id*=\'"turn"\']' : 'button[data-do="' + wish.do + '"]';
    const nearest = place.querySelector(again) || place.querySelector("button");
    const target = fresh ? place.querySelector('input[id^=\'{"field"\']') : nearest;
    show(place);
    if (target) target.focus({ preventScroll: true });
    if (fresh && target) target.select();
    place.scrollIntoView({ block: "nearest" });
  }
})();
