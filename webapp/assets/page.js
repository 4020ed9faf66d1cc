/* The page's own behaviour: gathers the controls, moves the knobs, shows answers, shares links. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});
  const gate = page.gate;
  const none = () => window.dash_clientside.no_update;
  const props = (id, values) => window.dash_clientside.set_props(id, values);
  const byId = (id) => document.getElementById(id);
  const marked = new Set(); // paths that carry an error now
  let profile = null;
  let addressTimer = 0;
  let travelling = false;
  let leaving = false; // whether the next address is another design's, opened over this one
  let visits = 0;
  let chipWidth = 0; // of the chip's drawing, before an answer is written
  let last = null; // the last good answer

  /* ---- opening ---- */

  function start() {
    const wanted = window.localStorage.getItem("slackwater-appearance");
    const system = window.matchMedia("(prefers-color-scheme: dark)").matches ? "dark" : "light";
    appearance(wanted || system);
    props("dark", { checked: gate.theme === "dark" });
    for (const view of Object.values(page.views)) view.start();
    page.tabs.start();
    page.edits.start();
    page.library.start();
    page.knobs.make((path, text) => props(idOf(path), { value: text }));
    window.addEventListener("popstate", travelled);
    document.addEventListener("click", clicked);
    for (const event of ["focusin", "mouseover"]) document.addEventListener(event, help);
    return { link: window.location.hash, visit: 0 };
  }

  /* Back or Forward: open what the address now holds, and write nothing over it meanwhile. */
  function travelled() {
    clearTimeout(addressTimer);
    travelling = true;
    visits += 1;
    page.edits.remember(null);
    props("address", { data: { link: window.location.hash, visit: visits } });
  }

  /* ---- controls ---- */

  function controls(values, flags, opened, ids, flagIds) {
    if (!opened) return none();
    const fresh = opened !== profile;
    if (fresh) {
      if (profile && !travelling && page.link) {
        clearTimeout(addressTimer);
        history.replaceState(null, "", "#" + page.link);
        leaving = true;
      }
      profile = opened;
      travelling = false;
      mark({}); // what stays on the page keeps no mark
      gate.profile = opened.profile;
      gate.values = {};
      gate.sent = "";
      notice(opened.problems);
      page.edits.opened(opened.edit);
    }
    ids.forEach((id, index) => {
      if (values[index] !== undefined) gate.values[pathOf(id.field)] = values[index] ?? "";
    });
    flagIds.forEach((id, index) => {
      if (flags[index] !== undefined) gate.values[pathOf(id.flag)] = Boolean(flags[index]);
    });
    hide();
    gate.push();
    return none();
  }

  /* Show the controls that matter with what the others hold. */
  function hide() {
    for (const place of document.querySelectorAll("#inputs [data-only]")) {
      const { only, word } = place.dataset;
      const held = gate.values[only];
      if (held !== undefined) place.hidden = word ? held !== word : held === "";
    }
  }

  /* ---- answers ---- */

  page.answered = function (answer, since, view) {
    const good = Object.keys(answer.errors).length === 0;
    const sketch = byId("chip-drawing");
    chipWidth = sketch ? sketch.clientWidth : 0;
    page.measure();
    mark(answer.errors);
    document.body.classList.toggle("stale", !good);
    byId("stale-label").hidden = good;
    if (!good) return;
    show(answer);
    if (view === gate.view) draw(answer); // else another view is seen by now, and asked for
    page.shown = answer.number;
    // Told when the picture is on its way to the screen; benchmarks listen.
    requestAnimationFrame(() =>
      document.dispatchEvent(new CustomEvent("slackwater-drawn", { detail: { since } }))
    );
  };

  /* Write typed values the usual way, unless something newer has been typed since. */
  function tidy(texts) {
    if (gate.moving()) return;
    for (const [path, words] of Object.entries(texts)) {
      const field = byId(JSON.stringify(idOf(path)));
      if (!field || field.value !== gate.values[path]) continue;
      gate.values[path] = words;
      props(idOf(path), { value: words });
    }
  }

  function draw(answer) {
    if (page.views[gate.view]) page.views[gate.view].answered(answer);
    for (const [name, figure] of Object.entries(answer.figures)) page.draw(name, figure);
    for (const [name, words] of Object.entries(answer.sentences)) text("sentence-" + name, words);
    if (answer.ledger) page.ledger(answer.ledger);
    if (answer.best !== undefined) best(answer.best);
    if (answer.sensitivity) page.sensitivity(answer.sensitivity);
  }

  /* The button that goes where the corridor is widest, if there is one. */
  function best(found) {
    const button = byId("best-point");
    button.disabled = found === null;
    button.title = found ? bound(found.words) : "No frequency has a corridor in this liquid";
    page.best = found;
  }

  /* What stands among the inputs, in new ones: as it was, until the next answer. */
  page.redraw = function () {
    if (!last) return;
    page.drawing(last.drawing);
    page.recipe(last.liquid);
  };

  function show(answer) {
    last = answer;
    byId("fingerprint").textContent = answer.fingerprint;
    text("verdict-headline", answer.verdict.headline);
    text("verdict-sentence", answer.verdict.sentence);
    byId("verdict").className = answer.verdict.inside ? "inside" : "outside";
    page.caption = answer.caption;
    for (const [path, found] of Object.entries(answer.knobs)) page.knobs.place(path, found);
    for (const [key, words] of Object.entries(answer.summaries)) text("summary-" + key, words);
    answer.names.forEach((name, index) => {
      text("particle-name-" + index, name);
      const label = byId("particle-name-" + index);
      if (label) label.previousElementSibling.style.color = answer.colours[index];
    });
    page.drawing(answer.drawing, chipWidth);
    page.recipe(answer.liquid);
    tidy(answer.texts);
    items("notes", answer.notes);
    items("cautions", answer.cautions);
    heed(answer.notes.length, answer.cautions.length - 1); // the last is there always
    document.title = answer.title + " · Slackwater";
    keepAddress(answer.link);
    // The framework's upload parts come late and name their fields nothing.
    for (const [id, words] of [["upload", "Open a profile file"], ["map-upload", "Choose a field map"]]) {
      const upload = document.querySelector("#" + id + " input");
      if (upload) upload.setAttribute("aria-label", words);
    }
  }

  /* Say beside the verdict that something below belongs to it. */
  function heed(notes, hazards) {
    const count = notes + hazards;
    byId("heed").hidden = count === 0;
    byId("heed").className = hazards ? "hazard" : "";
    text("heed", count + (hazards ? " warning" : " note") + (count > 1 ? "s" : ""));
  }

  function mark(errors) {
    for (const path of [...marked]) {
      if (!(path in errors)) {
        if (byId(JSON.stringify(idOf(path)))) props(idOf(path), { error: null });
        marked.delete(path);
      }
    }
    const homeless = [];
    page.edits.forgive();
    for (const [path, words] of Object.entries(errors)) {
      if (path in gate.values) {
        props(idOf(path), { error: words });
        marked.add(path);
        unfold(path);
      } else if (!page.edits.blame(path, words)) {
        homeless.push(path + ": " + words);
      }
    }
    if (homeless.length) notice(homeless);
  }

  /* What other scripts put into controls, or find wrong with one. */
  page.fill = function (values) {
    for (const [path, value] of Object.entries(values)) props(idOf(path), { value });
  };

  page.blame = function (path, words) {
    props(idOf(path), { error: words });
    marked.add(path);
  };

  /* Ids have slashes where profile paths have dots. */
  function pathOf(name) {
    return name.replaceAll("/", ".");
  }

  function idOf(path) {
    const name = path.replaceAll(".", "/");
    return typeof gate.values[path] === "boolean" ? { flag: name } : { field: name };
  }

  /* A marked control must be seen: open whatever it is folded into. */
  function unfold(path) {
    for (const input of document.querySelectorAll("#inputs input")) {
      if (input.id.includes('"' + path.replaceAll(".", "/") + '"')) {
        for (let place = input; place; place = place.parentElement) {
          place.hidden = false;
          if (place.tagName === "DETAILS") place.open = true;
        }
      }
    }
  }

  function notice(problems) {
    const place = byId("notice");
    place.hidden = problems.length === 0;
    place.replaceChildren(
      ...problems.map((words) => Object.assign(document.createElement("p"), { textContent: words }))
    );
    if (problems.length) {
      const button = document.createElement("button");
      button.textContent = "Understood";
      button.addEventListener("click", () => (place.hidden = true));
      place.append(button);
    }
  }

  /* A number and its unit stay on one line. */
  const bound = (words) => words.replace(/(\d) (?=[A-Za-zµΩ°%])/g, "$1\u00a0");
  page.bound = bound;

  function text(id, words) {
    const place = byId(id);
    words = bound(words);
    if (place && place.textContent !== words) place.textContent = words;
  }

  function items(id, lines) {
    const place = byId(id);
    const now = [...place.children].map((item) => item.textContent).join("\n");
    if (now === lines.join("\n")) return;
    place.replaceChildren(
      ...lines.map((line) => Object.assign(document.createElement("li"), { textContent: line }))
    );
  }

  /* ---- address ---- */

  /* The address follows the design; it is written seldom, browsers refuse a flood of changes. */
  function keepAddress(link) {
    if (travelling || gate.moving()) return;
    page.link = link;
    clearTimeout(addressTimer);
    if (leaving) {
      leaving = false;
      if (window.location.hash !== "#" + link) history.pushState(null, "", "#" + link);
      return;
    }
    addressTimer = setTimeout(() => history.replaceState(null, "", "#" + link), 350);
  }

  async function share(clicks) {
    if (!clicks || !page.link) return none();
    clearTimeout(addressTimer);
    history.replaceState(null, "", "#" + page.link);
    history.pushState(null, "", "#" + page.link);
    const address = window.location.href;
    try {
      await navigator.clipboard.writeText(address);
      toast("Link copied. It holds the whole design.");
    } catch (refused) {
      toast("Copy the address of this page: it holds the whole design.");
    }
    return none();
  }

  page.toast = toast;

  function toast(words) {
    const place = byId("toast");
    place.textContent = words;
    place.classList.add("shown");
    setTimeout(() => place.classList.remove("shown"), 4000);
  }

  function save(clicks) {
    return clicks ? gate.body() : none();
  }

  /* ---- appearance, help, clicks ---- */

  function dark(checked) {
    if (checked === undefined || checked === null) return none();
    const wanted = checked ? "dark" : "light";
    if (wanted !== gate.theme) {
      window.localStorage.setItem("slackwater-appearance", wanted);
      appearance(wanted);
      gate.push();
    }
    return none();
  }

  function appearance(wanted) {
    gate.theme = wanted;
    props("appearance", { forceColorScheme: wanted });
  }

  function help(event) {
    const target = event.target;
    const place = target.closest && target.closest(".mantine-InputWrapper-root, .mantine-Switch-root");
    if (!place || !place.closest("#inputs")) return;
    const words = place.querySelector(".mantine-InputWrapper-description, .mantine-Switch-description");
    const label = place.querySelector("label, .mantine-Switch-label");
    const name = label ? label.firstChild.textContent + ": " : ""; // a switch's help is within it
    if (words) byId("help").textContent = name + words.textContent;
  }

  function clicked(event) {
    const button = event.target.closest && event.target.closest("button.export");
    if (button) page.save(button.dataset.figure, button.dataset.format);
    if (event.target.id === "heed") document.querySelector("#view > footer").scrollIntoView();
    if (event.target.id === "best-point" && page.best) {
      page.knobs.set("drive.frequency", page.best.frequency);
      page.knobs.set("drive.voltage", page.best.voltage);
    }
    const figure = event.target.closest && event.target.closest("[data-sets-x]");
    const place = figure && page.valueAt(figure, event);
    if (place) {
      page.knobs.set(figure.dataset.setsX, place.x);
      page.knobs.set(figure.dataset.setsY, place.y);
    }
  }

  window.dash_clientside = Object.assign({}, window.dash_clientside, {
    slackwater: {
      start,
      controls,
      turn: page.edits.turn,
      save,
      share,
      dark,
      map: page.map,
    },
  });
})();
