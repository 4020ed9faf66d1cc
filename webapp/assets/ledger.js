/* Writes the ledger's rows into its list, keeping each row's element while its numbers change. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});
  const rows = new Map();

  page.ledger = function (found) {
    const list = document.getElementById("ledger");
    if (!list) return;
    const keys = new Set(found.map((row) => row.key));
    for (const [key, row] of rows) {
      if (!keys.has(key)) {
        row.remove();
        rows.delete(key);
      }
    }
    found.forEach((values, index) => {
      let row = rows.get(values.key);
      if (!row) {
        row = makeRow();
        rows.set(values.key, row);
      }
      fill(row, values);
      if (list.children[index] !== row) list.insertBefore(row, list.children[index] || null);
    });
  };

  function makeRow() {
    const row = document.createElement("li");
    row.innerHTML =
      '<details><summary><span class="row-name"><i aria-hidden="true"></i><b></b></span>' +
      '<span class="row-headroom"></span>' +
      '<span class="bar" aria-hidden="true"><span></span></span>' +
      '<span class="row-value"></span><span class="row-state"></span></summary>' +
      '<p class="row-bound"></p><p class="row-why"></p><p class="row-remedy"></p>' +
      '<p class="row-source"></p></details>';
    return row;
  }

  function fill(row, values) {
    row.className = values.state;
    set(row, "b", values.label);
    set(row, ".row-headroom", values.headroom);
    set(row, ".row-value", (values.subject ? values.subject + ": " : "") + values.value + ", " + values.allowed);
    set(row, ".row-state", values.state);
    set(row, ".row-bound", "Voltage: " + values.bound + ".");
    set(row, ".row-why", values.why);
    set(row, ".row-remedy", values.remedy);
    set(row, ".row-source", "Source: " + values.source + ".");
    row.querySelector("i").style.background = values.colour;
    row.querySelector(".bar span").style.width = (100 * values.fill).toFixed(1) + "%";
  }

  function set(row, selector, text) {
    const place = row.querySelector(selector);
    text = page.bound(text);
    if (place.textContent !== text) place.textContent = text;
  }
})();
