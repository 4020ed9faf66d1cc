/* The gate between the controls and the server: one request at a time, always the newest values.

   A drag makes far more values than can be answered. Each request waits for the answer to the one
   before, and then carries whatever stands in the controls by then. A failed or lost answer opens
   the gate again; the next change, or a short while, tries anew. Requests go past the page
   framework, whose bookkeeping of every control would cost more than the answer itself. */
(function () {
  "use strict";
  const PATIENCE = 60000; // a chip solve and a queue of others may be ahead
  const BUSY_AFTER = 250;
  const AGAIN_AFTER = 3000;
  const page = (window.slackwater = window.slackwater || {});

  const gate = {
    values: {},
    profile: null,
    theme: "light",
    view: "corridor",
    options: {}, // what is looked at in a view
    held: "", // key of the maps that need not be sent again
    number: 0,
  };
  page.gate = gate;
  let waiting = false;
  let dirty = false;
  let asked = 0;
  let sent = "";
  let resting = 0;
  const RESTS = 350; // ms without a change, after which there is time for what is slow

  /* Ask for an answer to the values as they are now. */
  gate.push = function () {
    if (!dirty) asked = performance.now();
    dirty = true;
    rest(false);
    pump();
  };

  /* Whether newer values wait or are under way than those that were answered last. */
  gate.moving = () => dirty || waiting;

  /* Whether the hand rests travels with each request; the last of a drag says that it does. */
  function rest(rests) {
    gate.options.resting = rests;
    clearTimeout(resting);
    if (rests) {
      dirty = true;
      asked = performance.now();
      pump();
    } else {
      resting = setTimeout(rest, RESTS, true);
    }
  }

  /* What a request carries. */
  gate.body = function () {
    return {
      number: gate.number,
      document: gate.profile,
      values: gate.values,
      theme: gate.theme,
      options: { ...gate.options, held: gate.held },
    };
  };

  async function pump() {
    if (!dirty || waiting || !gate.profile) return;
    dirty = false;
    const { profile, values, theme, view, options } = gate;
    const text = JSON.stringify([profile, values, theme, view, options]);
    if (text === sent) return;
    sent = text;
    gate.number += 1;
    waiting = true;
    const since = asked;
    // What a resting hand gets besides changes nothing that is shown, so that nothing is greyed.
    const besides = options.resting;
    const greys = () => besides || document.body.classList.add("busy");
    const busy = setTimeout(greys, BUSY_AFTER);
    let answer = null;
    try {
      answer = await ask(view, gate.body());
    } catch (problem) {
      sent = "";
      setTimeout(() => waiting || gate.push(), AGAIN_AFTER);
    }
    clearTimeout(busy);
    document.body.classList.remove("busy");
    document.getElementById("lost").hidden = answer !== null;
    waiting = false;
    pump(); // first of all, so that the server works while this page draws
    if (answer) page.answered(answer, since, view);
  }

  async function ask(view, body) {
    const response = await fetch("answer/" + view, {
      method: "POST",
      headers: { "Content-Type": "application/json" },
      body: JSON.stringify(body),
      signal: AbortSignal.timeout(PATIENCE),
    });
    if (!response.ok) throw new Error("status " + response.status);
    return response.json();
  }
})();
