/* The polarisation view's key and table, and the buttons that save its numbers. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});
  const byId = (id) => document.getElementById(id);
  let table = { rows: [], csv: "" };
  let shown = "";

  page.views = page.views || {};
  page.views.polarisation = {
    start() {
      byId("save-polarisation").addEventListener("click", () =>
        save("slackwater-polarisation.csv", table.csv)
      );
      byId("save-spectra").addEventListener("click", spectra);
    },

    /* What an answer says beside its figures; before these are drawn, so that they have room. */
    answered(answer) {
      table = answer.table;
      document.querySelector(".card-travel").hidden = !answer.figures.travel;
      const text = JSON.stringify(table.rows);
      if (text === shown) return;
      shown = text;
      byId("polarisation-key").replaceChildren(
        ...table.rows.map((row) => {
          const item = make("li");
          item.append(swatch(row), make("span", { textContent: row.name }));
          return item;
        })
      );
      byId("polarisation-rows").replaceChildren(...table.rows.flatMap(rowsOf));
    },
  };

  /* A row of numbers and, where there is something to say, one of words below it. */
  function rowsOf(row) {
    const head = make("th", { scope: "row" });
    const name = make("span", { className: "table-name" });
    name.append(swatch(row), make("span", { textContent: row.name }));
    head.append(name);
    const line = make("tr");
    line.append(head, ...row.cells.map((words) => make("td", { textContent: page.bound(words) })));
    if (!row.note) return [line];
    head.rowSpan = 2;
    const note = make("tr", { className: "note" });
    note.append(make("td", { colSpan: row.cells.length, textContent: page.bound(row.note) }));
    return [line, note];
  }

  function swatch(row) {
    const line = make("span", { className: "swatch dash-" + row.dash });
    line.style.color = row.colour;
    line.setAttribute("aria-hidden", "true");
    return line;
  }

  /* The server writes the spectra, as its command line does. */
  async function spectra() {
    try {
      const response = await fetch("spectra", {
        method: "POST",
        headers: { "Content-Type": "application/json" },
        body: JSON.stringify(page.gate.body()),
      });
      if (!response.ok) throw new Error("status " + response.status);
      const found = await response.json();
      if (found.csv) save("slackwater-spectra.csv", found.csv);
      else page.toast("Correct the marked entries first.");
    } catch (problem) {
      page.toast("The server does not answer. Try again in a while.");
    }
  }

  /* Save a table below a line that traces it to its inputs. */
  function save(name, csv) {
    const file = new Blob(["# " + page.caption + "\n" + csv], { type: "text/csv;charset=utf-8" });
    const link = make("a", { href: URL.createObjectURL(file), download: name });
    link.click();
    setTimeout(() => URL.revokeObjectURL(link.href), 1000);
  }

  function make(name, properties) {
    return Object.assign(document.createElement(name), properties);
  }
})();
