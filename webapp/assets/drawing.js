/* Draws the chip beside its controls: outlines to scale, and lengths with their typed values.

   Lengths along the flow stand below (at the lid: above), each in a row of its own where it would
   touch another; heights stand at the right. Colours come from the style sheet. */
(function () {
  "use strict";
  const page = (window.slackwater = window.slackwater || {});
  const BESIDE = 22; // px for the line of a height and its heads
  const ROW = 19;
  const LETTER = 6.4;
  const LOWEST = 46;
  const HIGHEST = 190;
  let shown = "";

  page.drawing = function (found) {
    const place = document.getElementById("chip-drawing");
    if (!place) return;
    const text = JSON.stringify(found) + place.clientWidth;
    if (text === shown && place.firstChild) return;
    if (!place.clientWidth) return; // folded away
    shown = text;
    place.replaceChildren(picture(found, place.clientWidth));
  };

  function picture(found, width) {
    const [left, right, low, high] = found.window;
    const heights = found.dimensions.filter(upright);
    const longest = Math.max(0, ...heights.map((dimension) => dimension.text.length));
    const wide = width - 2 - (longest ? BESIDE + LETTER * longest : 0);
    const tall = Math.min(Math.max((wide * (high - low)) / (right - left), LOWEST), HIGHEST);
    const lengths = found.dimensions.filter((dimension) => !upright(dimension));
    const above = lengths.filter((dimension) => dimension.start[1] > 0.5 * (low + high));
    const below = lengths.filter((dimension) => !above.includes(dimension));
    const x = (value) => 1 + ((value - left) / (right - left)) * wide;
    const upper = rows(above, x, wide);
    const lower = rows(below, x, wide);
    const top = ROW * upper.count + (upper.count ? 4 : 1);
    const y = (value) => top + ((high - value) / (high - low)) * tall;
    const svg = make("svg", { width, height: top + tall + ROW * lower.count + 6, role: "img" });
    svg.setAttribute("aria-label", found.label);
    svg.append(make("rect", { class: "liquid", x: 1, y: top, width: wide, height: tall }));
    for (const shape of found.shapes) svg.append(...solid(shape, x, y, top + tall / 2));
    for (const { dimension, row } of upper.placed) {
      svg.append(...length(dimension, x, y(dimension.start[1]), top - ROW * (row + 0.5) - 2, wide));
    }
    for (const { dimension, row } of lower.placed) {
      const line = top + tall + ROW * (row + 0.5) + 5;
      svg.append(...length(dimension, x, y(dimension.start[1]), line, wide));
    }
    for (const dimension of heights) svg.append(...height(dimension, y, wide + 11));
    return svg;
  }

  function upright(dimension) {
    return Math.abs(dimension.end[1] - dimension.start[1]) > Math.abs(dimension.end[0] - dimension.start[0]);
  }

  function solid(shape, x, y, middle) {
    const points = shape.outline.map((corner) => x(corner[0]) + "," + y(corner[1])).join(" ");
    const kind = shape.kind + (shape.kind === "electrode" ? (shape.solid ? " solid" : " hollow") : "");
    const parts = [make("polygon", { class: kind, points })];
    if (shape.sign) {
      const across = shape.outline.map((corner) => x(corner[0]));
      const down = shape.outline.map((corner) => y(corner[1]));
      const upper = Math.min(...down);
      const lower = Math.max(...down);
      const beside = (upper + lower) / 2 > middle ? lower + 9.5 : upper - 2.5; // of thin ones
      const sign = make("text", {
        class: "sign",
        x: (Math.min(...across) + Math.max(...across)) / 2,
        y: lower - upper > 16 ? (upper + lower) / 2 + 4 : beside,
      });
      sign.textContent = shape.sign;
      parts.push(sign);
    }
    return parts;
  }

  /* The row of each length, the nearest one where nothing else stands. */
  function rows(dimensions, x, wide) {
    const taken = [];
    const placed = dimensions.map((dimension) => {
      const { from, to } = extent(dimension, x, wide);
      let row = 0;
      while ((taken[row] || []).some((other) => from < other.to && other.from < to)) row += 1;
      (taken[row] = taken[row] || []).push({ from, to });
      return { dimension, row };
    });
    return { placed, count: taken.length };
  }

  /* Where a length's line and text lie; text that is too wide for its line stands beside it. */
  function extent(dimension, x, wide) {
    const ends = [x(dimension.start[0]), x(dimension.end[0])].sort((one, other) => one - other);
    const text = LETTER * dimension.text.length + 6;
    if (text <= ends[1] - ends[0] - 14) {
      return { ends, from: ends[0] + 1, to: ends[1] - 1, text: (ends[0] + ends[1]) / 2, anchor: "middle" };
    }
    if (ends[1] + text < wide) {
      return { ends, from: ends[0], to: ends[1] + text, text: ends[1] + 5, anchor: "start" };
    }
    return { ends, from: ends[0] - text, to: ends[1], text: ends[0] - 5, anchor: "end" };
  }

  function length(dimension, x, face, line, wide) {
    const { ends, text, anchor } = extent(dimension, x, wide);
    const beyond = line > face ? 4 : -4;
    return [
      ...ends.map((at) => make("path", { class: "reach", d: `M${at},${face}V${line + beyond}` })),
      make("path", { class: "measure", d: `M${ends[0]},${line}H${ends[1]}` }),
      ...heads(ends, line, true),
      written(dimension.text, text, line + 4, anchor),
    ];
  }

  function height(dimension, y, line) {
    const ends = [y(dimension.start[1]), y(dimension.end[1])].sort((one, other) => one - other);
    return [
      ...ends.map((at) => make("path", { class: "reach", d: `M${line - 10},${at}H${line + 4}` })),
      make("path", { class: "measure", d: `M${line},${ends[0]}V${ends[1]}` }),
      ...heads(ends, line, false),
      written(dimension.text, line + 5, (ends[0] + ends[1]) / 2 + 4, "start"),
    ];
  }

  /* Arrow heads at both ends, turned outward where there is no room between. */
  function heads(ends, line, flat) {
    const inward = ends[1] - ends[0] > 13 ? 1 : -1;
    return ends.map((at, index) => {
      const back = at + inward * (index ? -6 : 6);
      const corners = [[at, line], [back, line - 2.6], [back, line + 2.6]];
      const points = corners.map(([along, across]) => (flat ? along + "," + across : across + "," + along));
      return make("polygon", { class: "head", points: points.join(" ") });
    });
  }

  function written(words, x, y, anchor) {
    const text = make("text", { x, y, "text-anchor": anchor });
    text.textContent = page.bound(words);
    return text;
  }

  function make(name, attributes) {
    const part = document.createElementNS("http://www.w3.org/2000/svg", name);
    for (const [key, value] of Object.entries(attributes)) part.setAttribute(key, value);
    return part;
  }
})();
