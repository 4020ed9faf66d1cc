/* Moves the lines, fills, marks and names of a drawn figure to new numbers, and nothing else.

   The drawing library goes through every default of every trace for each redraw; while a hand
   drags a knob that is most of the time. Here the numbers go straight into the picture's paths.
   The picture is the same to the pixel; what the library keeps for itself (hover, saving) follows
   with the full redraw when the hand rests. The names of the library's parts that are used here
   belong to the version that is served beside this file. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});

  /* The parts of a figure that was drawn in full: one entry a trace. */
  page.sketchParts = function (place) {
    return place._fullData.map((trace) => {
      const group = place.querySelector(".trace" + trace.uid);
      return {
        x: place._fullLayout[trace.xaxis.replace("x", "xaxis")],
        y: place._fullLayout[trace.yaxis.replace("y", "yaxis")],
        lines: group ? [...group.querySelectorAll("path.js-line")] : [],
        fills: group ? [...group.querySelectorAll("path.js-fill")] : [],
        points: group ? [...group.querySelectorAll(".points path")] : [],
        texts: group ? [...group.querySelectorAll(".textpoint text")] : [],
      };
    });
  };

  /* Move all parts to new numbers; false, with nothing moved, where the parts do not fit them. */
  page.sketch = function (place, parts, data, images) {
    if (!parts || !place._fullLayout || !data.every((trace, index) => fits(trace, parts[index], parts[index - 1]))) {
      return false;
    }
    place.querySelectorAll(".imagelayer image").forEach((image, k) => {
      const source = images[k].source;
      if (image.getAttribute("href") !== source) image.setAttribute("href", source);
    });
    let before = null; // pixels of the trace before, for the fill between two
    data.forEach((trace, index) => {
      if (trace.z) return; // a map stays as it was drawn
      const part = parts[index];
      const x = pixels(trace.x, part.x);
      const y = pixels(trace.y, part.y);
      if (has(trace, "lines")) {
        part.lines.forEach((line, k) => line.setAttribute("d", k ? "" : pathOf(x, y)));
      }
      if (trace.fill === "tonexty") {
        parts[index - 1].fills[0].setAttribute("d", pathOf(x, y) + "L" + pathBack(before.x, before.y) + "Z");
      }
      if (trace.fill === "toself") part.fills.forEach((fill) => fill.setAttribute("d", pathOf(x, y)));
      part.points.forEach((point, k) =>
        point.setAttribute("transform", `translate(${x[k]},${y[k]})`)
      );
      part.texts.forEach((text, k) => {
        text.setAttribute("x", x[k]);
        text.setAttribute("y", y[k]);
        text.style.fill = trace.textfont.color[k];
        if (text.textContent !== trace.text[k]) text.textContent = trace.text[k];
      });
      before = { x, y };
    });
    return true;
  };

  function fits(trace, part, before) {
    if (!part) return false;
    if (trace.z) return true;
    if (has(trace, "lines") && !part.lines.length && trace.line.width > 0) {
      return !trace.y.some(Number.isFinite); // nothing was drawn: fine if nothing is to be
    }
    if (trace.fill === "tonexty" && !before.fills.length) return false;
    if (trace.fill === "toself" && !part.fills.length) return !trace.y.some(Number.isFinite);
    if (has(trace, "markers") && part.points.length !== trace.x.length) return false;
    return !has(trace, "text") || part.texts.length === trace.text.length;
  }

  function has(trace, mode) {
    return trace.mode.includes(mode);
  }

  function pixels(values, axis) {
    const log = axis.type === "log";
    const start = axis.range[0];
    const scale = axis._length / (axis.range[1] - start);
    const down = axis._id.startsWith("y");
    const found = new Array(values.length);
    for (let k = 0; k < values.length; k += 1) {
      const place = ((log ? Math.log10(values[k]) : values[k]) - start) * scale;
      found[k] = Math.round((down ? axis._length - place : place) * 100) / 100;
    }
    return found;
  }

  /* Path through all points; what is no number lifts the pen. */
  function pathOf(x, y) {
    let path = "";
    let pen = "M";
    for (let k = 0; k < x.length; k += 1) {
      if (Number.isNaN(y[k])) {
        pen = "M";
      } else {
        path += pen + x[k] + "," + y[k];
        pen = "L";
      }
    }
    return path;
  }

  function pathBack(x, y) {
    return pathOf([...x].reverse(), [...y].reverse()).slice(1);
  }
})();
