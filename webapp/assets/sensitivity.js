/* Writes the ranked bars of what moves the headroom. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});

  page.sensitivity = function (found) {
    document.getElementById("sentence-sensitivity").textContent = page.bound(found.sentence);
    document.getElementById("sensitivity").replaceChildren(...found.rows.map(row));
  };

  function row(values) {
    const item = document.createElement("li");
    item.className = values.raises ? "raises" : "lowers";
    const label = document.createElement("span");
    Object.assign(label, { className: "label", textContent: values.label, title: values.label });
    const bar = document.createElement("span");
    bar.className = "bar";
    bar.setAttribute("aria-hidden", "true");
    bar.append(document.createElement("span"));
    bar.firstChild.style.width = (100 * values.share).toFixed(1) + "%";
    const number = document.createElement("b");
    number.textContent = page.bound(values.value);
    item.append(label, bar, number);
    return item;
  }
})();
