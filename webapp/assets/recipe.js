/* Writes what a recipe comes to beneath the liquid's inputs. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});
  const AMOUNT = JSON.stringify({ field: "liquid/recipe/amount" });
  let text = ""; // what is shown, as text to be copied
  let shown = "";

  page.recipe = function (found) {
    const place = document.getElementById("recipe-card");
    if (!place) return;
    place.hidden = !found;
    if (!found) return;
    const amount = document.getElementById(AMOUNT); // empty, it tells what follows for it
    if (amount && amount.placeholder !== found.amount) amount.placeholder = found.amount;
    const now = JSON.stringify(found);
    if (now === shown && place.firstChild) return;
    shown = now;
    text = found.text;
    if (!place.firstChild) place.append(...frame());
    const [, table, list, notes] = place.children;
    table.tBodies[0].replaceChildren(...found.rows.flatMap(rowsOf));
    list.replaceChildren(...found.properties.flatMap(([name, value]) => [
      make("dt", { textContent: name }), make("dd", { textContent: page.bound(value) }),
    ]));
    notes.replaceChildren(...found.notes.map((textContent) => make("p", { textContent })));
  };

  function frame() {
    const copy = make("button", { className: "export", textContent: "Copy as text" });
    copy.addEventListener("click", send);
    const heads = ["In a litre", "Weigh", "Amount"];
    const head = make("tr", {}, ...heads.map((textContent) => make("th", { textContent, scope: "col" })));
    return [
      make("div", { className: "inner-head" },
        make("h4", { className: "inner-heading", textContent: "What to mix" }), copy),
      make("table", {}, make("thead", {}, head), make("tbody", {})),
      make("dl", {}),
      make("div", { className: "recipe-notes" }),
    ];
  }

  /* A row for its numbers, and one for what is to be said of them. */
  function rowsOf({ name, amount, mass, remark }) {
    const numbers = make("tr", {},
      make("th", { scope: "row", textContent: name }),
      make("td", { textContent: page.bound(mass) }),
      make("td", { textContent: page.bound(amount) }));
    const said = make("td", { colSpan: 3, className: "remark", textContent: page.bound(remark) });
    return remark ? [numbers, make("tr", {}, said)] : [numbers];
  }

  async function send() {
    try {
      await navigator.clipboard.writeText(text);
      page.toast("Recipe copied.");
    } catch (refused) {
      page.toast("The browser does not let this page copy.");
    }
  }

  function make(tag, properties, ...children) {
    const element = Object.assign(document.createElement(tag), properties);
    element.append(...children);
    return element;
  }
})();
