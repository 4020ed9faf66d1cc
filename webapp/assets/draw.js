/* Draws figure dicts into their places and saves them as pictures. Knows nothing of their meaning.

   While a knob moves, traces that only got new numbers are sketched (sketch.js), which costs a
   small part of a full redraw; when the hand rests the drawing library draws them in full. One
   shared configuration keeps every figure on this machine. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});
  const CONFIG = {
    displaylogo: false,
    displayModeBar: false,
    showSendToCloud: false,
    responsive: true,
    doubleClick: false,
    scrollZoom: false,
  };
  const RESTS = 400; // ms without a new figure, after which sketches are drawn in full
  const NUMBERS = new Set(["x", "y", "z", "text", "textfont"]); // what a sketch can change, or not
  const GAP = 255; // of a map
  let resting = 0;
  const drawn = {};
  const measured = {};
  page.figures = drawn;
  page.caption = "";

  /* Sizes of all figures, read at once before anything of an answer is written: to read one after a
     change makes the browser lay the page out again. */
  page.measure = function () {
    for (const name of Object.keys(drawn)) {
      measured[name] = sizeOf(document.getElementById("figure-" + name));
    }
  };

  function sizeOf(place) {
    return place.clientWidth + "×" + place.clientHeight;
  }

  page.draw = function (name, figure) {
    const place = document.getElementById("figure-" + name);
    if (!place) return;
    const kept = drawn[name];
    const data = figure.data.map((trace, index) => unpack(trace, kept && kept.data[index]));
    const layout = JSON.stringify(figure.layout, withoutPictures);
    const shape = JSON.stringify(data, withoutNumbers);
    const size = measured[name];
    const now = { data, layout, shape, parts: null, sketched: false, size, images: figure.layout.images };
    drawn[name] = now;
    const alike =
      kept &&
      kept.layout === layout &&
      kept.shape === shape &&
      size === kept.size &&
      data.every((trace, index) => trace.z === kept.data[index].z);
    if (alike && page.sketch(place, kept.parts, data, figure.layout.images)) {
      now.parts = kept.parts;
      now.sketched = true;
      clearTimeout(resting);
      resting = setTimeout(fullOne, RESTS);
    } else {
      now.size = sizeOf(place); // the answer itself may have changed it
      if (kept && kept.size !== now.size) window.Plotly.purge(place); // it would keep the old size
      full(place, now);
    }
  };

  /* Draw one sketched figure in full, then the next, so that a hand that moves again can. */
  function fullOne() {
    const found = Object.entries(drawn).find(([, figure]) => figure.sketched);
    if (!found) return;
    found[1].sketched = false;
    full(document.getElementById("figure-" + found[0]), found[1]);
    resting = setTimeout(fullOne, 0);
  }

  function full(place, figure) {
    window.Plotly.react(place, figure.data, layoutOf(figure), CONFIG);
    figure.parts = page.sketchParts(place);
  }

  /* A picture behind a figure may change without a full redraw, so it is kept apart. */
  function withoutPictures(key, value) {
    return key === "images" ? undefined : value;
  }

  function layoutOf(figure) {
    const layout = JSON.parse(figure.layout);
    return figure.images ? { ...layout, images: figure.images } : layout;
  }

  function withoutNumbers(key, value) {
    return NUMBERS.has(key) ? undefined : value;
  }

  /* Binary numbers become typed arrays, which the drawing library takes as they are. A map that
     the page holds already is not sent again. */
  function unpack(trace, before) {
    const copy = { ...trace };
    for (const key of ["x", "y"]) {
      if (copy[key] && copy[key].bdata !== undefined) {
        copy[key] = new Float32Array(bytesOf(copy[key]).buffer);
      }
    }
    if (copy.z) copy.z = copy.z.kept ? before.z : rowsOf(copy.z, before && before.z);
    return copy;
  }

  /* Rows of a map, or those that are held if they came from the same text. */
  function rowsOf(packed, held) {
    if (held && held.text === packed.bdata) return held;
    const bytes = bytesOf(packed);
    const width = Number(packed.shape.split(",")[1]);
    const rows = [];
    for (let k = 0; k < bytes.length; k += width) {
      rows.push(Float32Array.from(bytes.subarray(k, k + width), (byte) => (byte === GAP ? NaN : byte)));
    }
    rows.text = packed.bdata;
    return rows;
  }

  function bytesOf(packed) {
    const letters = atob(packed.bdata);
    const bytes = new Uint8Array(letters.length); // filled by hand: eight times faster
    for (let k = 0; k < letters.length; k += 1) bytes[k] = letters.charCodeAt(k);
    return bytes;
  }

  /* The place on a logarithmic-logarithmic figure that a click meant, or null. */
  page.valueAt = function (place, event) {
    const full = place._fullLayout;
    if (!full || !full.xaxis) return null;
    const box = place.getBoundingClientRect();
    const x = event.clientX - box.left - full.xaxis._offset;
    const y = event.clientY - box.top - full.yaxis._offset;
    if (x < 0 || y < 0 || x > full.xaxis._length || y > full.yaxis._length) return null;
    return { x: full.xaxis.p2d(x), y: full.yaxis.p2d(y) };
  };

  /* Save a figure with its heading and a caption line that traces it to its inputs. */
  page.save = async function (name, format) {
    const place = document.getElementById("figure-" + name);
    const kept = drawn[name];
    if (!place || !kept) return;
    const width = Math.max(760, place.clientWidth);
    const height = Math.max(420, place.clientHeight) + 84;
    const layout = layoutOf(kept);
    const margin = layout.margin;
    if (layout.legend && !layout.showlegend) {
      layout.showlegend = true; // on the page a key names the lines
      if (layout.legend.orientation === "h") margin.t += 20;
    }
    layout.title = {
      text: place.getAttribute("aria-label"),
      x: 0.01,
      xanchor: "left",
      y: 0.98,
      yanchor: "top",
      font: { size: 16 },
    };
    layout.margin = { ...margin, t: margin.t + 34, b: margin.b + 50 };
    layout.annotations = [
      {
        text: folded(page.caption, width / 6.2).map(escape).join("<br>"),
        align: "left",
        showarrow: false,
        xref: "paper",
        yref: "paper",
        x: 0,
        xanchor: "left",
        xshift: 8 - margin.l,
        y: 0,
        yanchor: "top",
        yshift: -(margin.b + 8),
        font: { size: 10.5 },
      },
    ];
    layout.width = width;
    layout.height = height;
    const picture = { data: kept.data, layout, config: CONFIG };
    const options = { format, width, height, scale: format === "png" ? 2 : 1 };
    const address = await window.Plotly.toImage(picture, options);
    const link = document.createElement("a");
    link.href = address;
    link.download = "slackwater-" + name + "." + format;
    link.click();
  };

  /* Break a line between words so that no piece is longer than `most` letters. */
  function folded(line, most) {
    const lines = [""];
    for (const word of line.split(" ")) {
      const last = lines[lines.length - 1];
      if (last && last.length + word.length >= most) lines.push(word);
      else lines[lines.length - 1] = last ? last + " " + word : word;
    }
    return lines;
  }

  /* Figure text reads a little markup; a title that a person typed must stay plain. */
  function escape(text) {
    return text.replace(/&/g, "&amp;").replace(/</g, "&lt;").replace(/>/g, "&gt;");
  }
})();
