/* The section view's own choices: panel, particle and probed place. None is part of the design.

   They travel with each request as its options; the answer says what the probe reads. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});
  const gate = page.gate;
  const byId = (id) => document.getElementById(id);
  const PANELS = ["field", "force", "temperature", "flow"];
  let names = "";
  let hand = null; // the figure over which a hand moves the probe

  page.views = page.views || {};
  page.views.section = {
    start() {
      gate.options = { show: "four", particle: 0, probe: null };
      choices(byId("section-show"));
      particles(byId("section-particle"));
      place(byId("section-place"));
      for (const name of PANELS) {
        const figure = byId("figure-" + name + "-map");
        figure.addEventListener("pointerdown", (event) => {
          if (event.button === 0 && probe(figure, event)) hand = figure;
        });
      }
      window.addEventListener("pointermove", (event) => hand && probe(hand, event));
      window.addEventListener("pointerup", () => (hand = null));
    },

    /* What an answer says beside its figures; before these are drawn, so that they have room. */
    answered(answer) {
      byId("section-grid").style.setProperty("--aspect", answer.aspect);
      gate.held = answer.held;
      const found = answer.names.join("\n");
      if (found !== names) {
        names = found;
        const select = byId("section-particle").querySelector("select");
        const options = answer.names.map((name, index) => new Option(name, index));
        select.replaceChildren(...options);
        if (gate.options.particle >= answer.names.length) gate.options.particle = 0;
        select.value = gate.options.particle;
      }
      for (const key of ["x", "y"]) {
        const field = byId("probe-" + key);
        if (document.activeElement !== field) field.value = answer.probe[key];
      }
      readout(answer.probe.readings);
    },
  };

  function ask(options) {
    Object.assign(gate.options, options);
    gate.push();
  }

  function choices(parent) {
    const group = make("fieldset", { className: "segments" });
    group.append(make("legend", { textContent: "Show" }));
    for (const choice of parent.dataset.choices.split(";")) {
      const [value, word] = choice.split(":");
      const radio = make("input", { type: "radio", name: "section-panel", value });
      radio.checked = value === gate.options.show;
      const label = make("label", {});
      label.append(radio, make("span", { textContent: word }));
      group.append(label);
    }
    group.addEventListener("change", (event) => {
      byId("section-grid").dataset.show = event.target.value;
      ask({ show: event.target.value });
    });
    parent.replaceChildren(group);
  }

  function particles(parent) {
    const select = make("select", { id: "force-particle" });
    select.addEventListener("change", () => ask({ particle: Number(select.value) }));
    const label = make("label", { htmlFor: select.id, textContent: "Force on" });
    parent.replaceChildren(label, select);
  }

  function place(parent) {
    const parts = [make("span", { className: "probe-word", textContent: "Probe" })];
    for (const [key, word] of [["x", "along"], ["y", "up"]]) {
      const field = make("input", { id: "probe-" + key, type: "number", step: 1 });
      field.setAttribute("aria-label", "Probe, " + word + ", µm");
      field.addEventListener("input", typed);
      parts.push(make("label", { htmlFor: field.id, textContent: key }), field);
    }
    parts.push(make("span", { textContent: "µm" }));
    parent.replaceChildren(...parts);
  }

  function typed() {
    const [x, y] = ["x", "y"].map((key) => byId("probe-" + key).valueAsNumber * 1e-6);
    if (Number.isFinite(x) && Number.isFinite(y) && Math.abs(x) < 1 && Math.abs(y) < 1) {
      ask({ probe: { x, y } });
    }
  }

  /* Probe where a pointer is in a figure, if it is within its axes. */
  function probe(figure, event) {
    const found = page.valueAt(figure, event);
    if (!found) return false;
    ask({ probe: { x: found.x * 1e-6, y: found.y * 1e-6 } });
    return true;
  }

  function readout(readings) {
    const text = JSON.stringify(readings);
    const parent = byId("section-readout");
    if (parent.dataset.text === text) return;
    parent.dataset.text = text;
    parent.replaceChildren(
      ...readings.map((reading) => {
        const item = make("span", { className: "reading" });
        item.append(
          make("span", { className: "reading-label", textContent: reading.label }),
          make("b", { textContent: page.bound(reading.value) })
        );
        if (reading.note) item.append(make("span", { textContent: page.bound(reading.note) }));
        return item;
      })
    );
  }

  function make(name, properties) {
    return Object.assign(document.createElement(name), properties);
  }
})();
