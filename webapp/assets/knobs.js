/* The live knobs of the operating strip: native sliders, which every hand and screen reader knows.

   A knob's place in the page says its field, unit, range and scale. Moving it writes the value as
   text into its typed field, exactly as if it had been typed, and pushes the gate. */
(function () {
  "use strict";
  const RESTS = 200; // ms without a move before the page framework is told of the text
  const page = (window.slackwater = window.slackwater || {});
  const knobs = {};
  page.knobs = knobs;

  /* Make the sliders; `tell(path, text)` hands a settled text to the page framework. */
  knobs.make = function (tell) {
    for (const place of document.querySelectorAll("[data-knob]")) {
      const slider = document.createElement("input");
      const { knob, label, low, high, step } = place.dataset;
      Object.assign(slider, { type: "range", min: low, max: high, step });
      slider.setAttribute("aria-label", label);
      place.replaceChildren(slider);
      const self = (knobs[knob] = { place, slider, tell, timer: 0 });
      slider.addEventListener("input", () => knobs.set(knob, valueAt(self, Number(slider.value))));
    }
  };

  /* Set a knob to an SI value, by hand or by a click in a figure. */
  knobs.set = function (path, value) {
    const self = knobs[path];
    const text = prefixed(value, self.place.dataset.unit);
    page.gate.values[path] = text;
    typed(path).value = text;
    paint(self);
    clearTimeout(self.timer);
    self.timer = setTimeout(() => self.tell(path, text), RESTS);
    page.gate.push();
  };

  /* Move a knob to where an answer says that it stands, unless a hand holds it. */
  knobs.place = function (path, answer) {
    const self = knobs[path];
    const note = self.place.parentElement.querySelector(".knob-note");
    if (note.textContent !== answer.note) note.textContent = answer.note;
    if (answer.most !== undefined && Number(self.slider.max) !== answer.most) {
      self.slider.max = answer.most;
    }
    const position = self.place.dataset.scale === "log" ? Math.log10(answer.value) : answer.value;
    const near = Math.abs(Number(self.slider.value) - position) <= 1.01 * Number(self.slider.step);
    if (!near && !page.gate.moving()) self.slider.value = position;
    self.slider.setAttribute("aria-valuetext", answer.text);
    paint(self);
  };

  function typed(path) {
    return document.getElementById(JSON.stringify({ field: path.replaceAll(".", "/") }));
  }

  function valueAt(self, position) {
    if (self.place.dataset.scale === "log") return 10 ** position;
    return Math.max(position, Number(self.slider.step));
  }

  /* The filled part of the track. */
  function paint(self) {
    const { min, max, value } = self.slider;
    self.slider.style.setProperty("--filled", (100 * (value - min)) / (max - min) + "%");
  }

  function prefixed(value, unit) {
    const steps = [[1e9, "G"], [1e6, "M"], [1e3, "k"], [1, ""], [1e-3, "m"], [1e-6, "µ"]];
    if (unit === "S/m") steps.splice(5); // µS/m would be taken for the µS/cm of bench meters
    const rounded = Number(value.toPrecision(3));
    const [size, letter] = steps.find(([least]) => rounded >= least) || steps[steps.length - 1];
    return Number((rounded / size).toPrecision(3)) + " " + letter + unit;
  }
})();
