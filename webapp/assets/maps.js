/* Sends a chosen field map to the server, and fills in the controls that follow from it. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});
  const FIELD = "chip.file";

  page.map = function (contents, name) {
    if (contents) send(contents, name);
    return window.dash_clientside.no_update;
  };

  async function send(contents, name) {
    window.dash_clientside.set_props("map-upload", { contents: null }); // the same may come again
    try {
      const answer = await fetch("maps", { method: "POST", body: bytes(contents) });
      if (answer.status === 413) throw new Error("The file is larger than a map may be.");
      if (!answer.ok) throw new Error("The server did not take the file.");
      const found = await answer.json();
      if (found.problem) throw new Error(found.problem);
      page.fill({ ...found.values, [FIELD]: name.slice(-120) });
    } catch (problem) {
      page.blame(FIELD, problem.message);
    }
  }

  /* The upload part hands over text: a media type, and the bytes in base 64. */
  function bytes(contents) {
    const letters = atob(contents.slice(contents.indexOf(",") + 1));
    return Uint8Array.from(letters, (letter) => letter.charCodeAt(0));
  }
})();
