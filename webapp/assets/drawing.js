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

  /* `width` of its place if it is known, as reading it after a change costs a layout. */
  page.drawing = function (found, width) {
    const place = document.getElementById("chip-drawing");
    if (!place) return;
    if (width === undefined) width = place.clientWidth;
    const text = JSON.stringify(found) + width;
    if (text === shown && place.firstChild) return;
    if (!width) return; // folded away
    shown = text;
    place.replaceChildren(picture(found, width));
  };

  function picture(found, width) {
    const [left, right, low, high] = found.window;
    const slanted = found.dimensions.filter(slants);
    const straight = found.dimensions.filter((one) => !slanted.includes(one));
    const heights = straight.filter(upright);
    const lengths = straight.filter((one) => !upright(one));
    const upper = lengths.filter((one) => one.start[1] > 0.5 * (low + high));
    const lower = lengths.filter((one) => !upper.includes(one));
    const longest = Math.max(0, ...heights.map((dimension) => dimension.text.length));
    const room = width - 2 - (longest ? BESIDE + LETTER * longest : 0);
    const wide = Math.min(room, (HIGHEST * (right - left)) / (high - low));
    const tall = Math.max((wide * (high - low)) / (right - left), LOWEST);
    const x = (value) => 1 + ((value - left) / (right - left)) * wide;
    const above = rows(upper, x, room);
    const below = rows(lower, x, room);
    const top = ROW * above.count + (above.count ? 4 : 1);
    const y = (value) => top + ((high - value) / (high - low)) * tall;
    const svg = make("svg", { width, height: top + tall + ROW * below.count + 6, role: "img" });
    svg.setAttribute("aria-label", found.label);
    const cut = { x: 1, y: top, width: wide, height: tall, role: "presentation" };
    const chip = make("svg", cut); // what goes on beyond is not seen
    chip.append(make("rect", { class: "liquid", width: "100%", height: "100%" }));
    for (const shape of found.shapes) {
      chip.append(...solid(shape, (value) => x(value) - 1, (value) => y(value) - top, tall / 2));
    }
    svg.append(chip);
    for (const { dimension, row } of above.placed) {
      svg.append(...length(dimension, x, y(dimension.start[1]), top - ROW * (row + 0.5) - 2, room));
    }
    for (const { dimension, row } of below.placed) {
      const line = top + tall + ROW * (row + 0.5) + 5;
      svg.append(...length(dimension, x, y(dimension.start[1]), line, room));
    }
    for (const dimension of slanted) svg.append(...slant(dimension, x, y));
    let used = []; // upright stretches that carry a text at the right already
    for (const dimension of heights) {
      const middle = (y(dimension.start[1]) + y(dimension.end[1])) / 2;
      let text = middle;
      while (used.some((other) => Math.abs(other - text) < 15)) text += 15;
      used = [...used, text];
      svg.append(...height(dimension, x, y, wide + 11, text, used.length));
    }
    return svg;
  }

  function upright(dimension) {
    return Math.abs(dimension.end[1] - dimension.start[1]) > Math.abs(dimension.end[0] - dimension.start[0]);
  }

  function slants(dimension) {
    const [across, up] = [0, 1].map((axis) => Math.abs(dimension.end[axis] - dimension.start[axis]));
    return Math.min(across, up) > 0.1 * Math.max(across, up);
  }

  /* A slanted length stands where it is, its text to the left of its middle. */
  function slant(dimension, x, y) {
    const [from, to] = [dimension.start, dimension.end].map((place) => [x(place[0]), y(place[1])]);
    const turn = (Math.atan2(to[1] - from[1], to[0] - from[0]) * 180) / Math.PI;
    const size = Math.hypot(to[0] - from[0], to[1] - from[1]);
    const line = make("g", { transform: `translate(${from[0]},${from[1]}) rotate(${turn})` });
    line.append(make("path", { class: "measure", d: `M0,0H${size}` }), ...heads([0, size], 0, true));
    const [across, down] = [0, 1].map((axis) => (from[axis] + to[axis]) / 2);
    return [line, written(dimension.text, across - 8, down - 4, "end")];
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
        class: lower - upper > 16 ? (shape.solid ? "sign inside" : "sign inside dark") : "sign",
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

  /* The first at the right edge, others where they are, all with their text at the right. */
  function height(dimension, x, y, edge, text, place) {
    const line = place === 1 ? edge : x(dimension.start[0]);
    const ends = [y(dimension.start[1]), y(dimension.end[1])].sort((one, other) => one - other);
    return [
      ...ends.map((at) => make("path", { class: "reach", d: `M${line - 10},${at}H${line + 4}` })),
      make("path", { class: "measure", d: `M${line},${ends[0]}V${ends[1]}` }),
      ...heads(ends, line, false),
      ...(line < edge ? [make("path", { class: "reach", d: `M${line},${text}H${edge + 4}` })] : []),
      written(dimension.text, edge + 5, text + 4, "start"),
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
