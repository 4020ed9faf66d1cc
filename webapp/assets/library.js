/* The dialog of published particles: fetched when it is first opened, searched here, and a particle
   is added by an edit like any other. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});
  const byId = (id) => document.getElementById(id);
  let items = null; // one of { item, words, group } for each particle

  page.library = {
    start() {
      document.addEventListener("click", (event) => {
        if (event.target.closest && event.target.closest("[data-library]")) open(event.target);
      });
      byId("library-close").addEventListener("click", () => byId("library").close());
      byId("library").addEventListener("click", (event) => {
        if (event.target.id === "library") event.target.close(); // beside it
      });
      const search = make("input", { type: "search", placeholder: "Cell, author, method …" });
      search.setAttribute("aria-label", "Search the library");
      search.addEventListener("input", () => sift(search.value));
      byId("library-search").replaceChildren(search);
    },
  };

  async function open(button) {
    if (button.getAttribute("aria-disabled") === "true") return page.toast(button.title);
    byId("library").showModal();
    byId("library-search").firstChild.focus();
    if (items) return;
    try {
      const answer = await fetch("library");
      if (!answer.ok) throw new Error("status " + answer.status);
      fill(await answer.json());
    } catch (problem) {
      byId("library-list").textContent = "The server does not answer. Close this and try again.";
    }
  }

  function fill(groups) {
    items = [];
    const sections = groups.map(({ group, entries }) => {
      const section = make("section", {}, make("h3", { textContent: group }));
      for (const entry of entries) {
        const item = itemOf(entry);
        const words = [entry.title, group, entry.source, entry.method].join(" ").toLowerCase();
        items.push({ item, words, section });
        section.append(item);
      }
      return section;
    });
    byId("library-list").replaceChildren(...sections);
    sift("");
  }

  /* Keep what has every word of the search. */
  function sift(text) {
    if (!items) return;
    const wanted = text.toLowerCase().split(/\s+/).filter(Boolean);
    const seen = new Set();
    for (const { item, words, section } of items) {
      item.hidden = !wanted.every((word) => words.includes(word));
      if (!item.hidden) seen.add(section);
    }
    for (const { section } of items) section.hidden = !seen.has(section);
    const count = items.filter(({ item }) => !item.hidden).length;
    byId("library-count").textContent = count + " of " + items.length;
  }

  function itemOf(entry) {
    const add = make("button", { className: "edit edit-add", textContent: "Add" });
    add.setAttribute("aria-label", "Add " + entry.title);
    add.addEventListener("click", () => {
      byId("library").close();
      page.edits.send({ do: "add", at: "particle", word: entry.id });
    });
    const head = make("summary", {},
      make("b", { textContent: entry.title }),
      make("span", { textContent: entry.source + ". " + capital(entry.method) + "." }),
      make("span", { textContent: page.bound(entry.numbers.join(", ")), className: "numbers" }));
    const told = [entry.measured && "Measured in " + entry.measured + ".", entry.note];
    const notes = told.filter(Boolean).map((words) => make("p", { textContent: words }));
    return make("div", { className: "library-item" },
      make("details", {}, head, ...notes, tableOf(entry.rows)), add);
  }

  function tableOf(rows) {
    const heads = ["Value", "", "Known from", "Spread, remark"];
    const table = make("table", {}, make("thead", {}, make("tr", {},
      ...heads.map((textContent) => make(textContent ? "th" : "td", { textContent })))));
    const body = make("tbody", {});
    for (const row of rows) {
      const label = make("th", { textContent: row.label, scope: "row" });
      const status = make("td", { textContent: row.word, className: "status " + row.status });
      body.append(make("tr", {}, label, make("td", { textContent: page.bound(row.value) }), status,
        make("td", { textContent: page.bound(row.remark) })));
    }
    table.append(body);
    return table;
  }

  const capital = (words) => words.slice(0, 1).toUpperCase() + words.slice(1);

  function make(tag, properties, ...children) {
    const element = Object.assign(document.createElement(tag), properties);
    element.append(...children);
    return element;
  }
})();
