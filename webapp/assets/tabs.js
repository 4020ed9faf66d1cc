/* The tabs: one view is seen, and asked for, at a time. Arrow keys move between them.

   Which one is seen belongs to the visitor and not to the design, so that it is kept in this
   browser and not in the link. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});
  const KEPT = "slackwater-view";
  const tabs = () => [...document.querySelectorAll('[role="tab"]')];

  page.tabs = {
    start() {
      const wanted = window.localStorage.getItem(KEPT);
      if (tabs().some((tab) => tab.dataset.view === wanted)) choose(wanted);
      document.querySelector('[role="tablist"]').addEventListener("keydown", keyed);
      document.addEventListener("click", (event) => {
        const tab = event.target.closest && event.target.closest('[role="tab"]');
        if (tab) choose(tab.dataset.view);
      });
    },
  };

  function choose(view) {
    for (const tab of tabs()) {
      const chosen = tab.dataset.view === view;
      tab.setAttribute("aria-selected", chosen);
      tab.tabIndex = chosen ? 0 : -1;
      document.getElementById(tab.getAttribute("aria-controls")).hidden = !chosen;
    }
    window.localStorage.setItem(KEPT, view);
    if (page.gate.view === view) return;
    page.gate.view = view;
    document.getElementById("view").scrollTop = 0;
    page.gate.push();
  }

  function keyed(event) {
    const all = tabs();
    const now = all.indexOf(document.activeElement);
    const steps = { ArrowRight: now + 1, ArrowLeft: now - 1, Home: 0, End: all.length - 1 };
    if (now < 0 || !(event.key in steps)) return;
    event.preventDefault();
    const tab = all[(steps[event.key] + all.length) % all.length];
    tab.focus();
    choose(tab.dataset.view);
  }
})();
