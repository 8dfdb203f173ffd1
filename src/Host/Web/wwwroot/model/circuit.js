// Where each part of the loop mains → bank → unit → mains is drawn. Only places: no colours, no document.
//
// A bank is a tree: { kind: "lamp", index, name } | { kind: "resistor", name } | { kind: "series" | "parallel", parts }.
// It is laid out along the current and across it; a tall screen turns the two round.

const PART = { along: 104, across: 104 };
const UPRIGHT_PART = { along: 104, across: 124 };
const JUNCTION = 22;
const GAP = 10;
const MARGIN = 66;
const RETURN = 84;

function measure(node, part) {
  if (node.kind !== "series" && node.kind !== "parallel") {
    return { node, along: part.along, across: part.across, line: part.across / 2 };
  }

  const parts = node.parts.map((child) => measure(child, part));
  if (node.kind === "series") {
    // All parts of a series hang on one straight wire.
    const above = Math.max(...parts.map((child) => child.line));
    const below = Math.max(...parts.map((child) => child.across - child.line));
    return { node, parts, along: sum(parts, "along"), across: above + below, line: above };
  }

  const across = sum(parts, "across") + GAP * (parts.length - 1);
  return { node, parts, along: Math.max(...parts.map((child) => child.along)) + 2 * JUNCTION, across, line: across / 2 };
}

const sum = (items, key) => items.reduce((total, item) => total + item[key], 0);

/** Places `box` with its wire entering at (along, line); pushes what is to be drawn to `out`. */
function place(box, along, line, out) {
  const end = along + box.along;
  if (!box.parts) {
    out.parts.push({ ...box.node, along: along + box.along / 2, across: line });
    out.wires.push([[along, line], [end, line]]);
  } else if (box.node.kind === "series") {
    let at = along;
    for (const child of box.parts) {
      place(child, at, line, out);
      at += child.along;
    }
  } else {
    placeParallel(box, along, line, out);
  }
}

function placeParallel(box, along, line, out) {
  const end = along + box.along;
  const inner = box.along - 2 * JUNCTION;
  let top = line - box.line;
  const lines = [];
  for (const child of box.parts) {
    const at = top + child.line;
    const start = along + JUNCTION + (inner - child.along) / 2;
    lines.push(at);
    out.wires.push([[along + JUNCTION / 2, at], [start, at]], [[start + child.along, at], [end - JUNCTION / 2, at]]);
    place(child, start, at, out);
    top += child.across + GAP;
  }

  for (const [outside, junction] of [[along, along + JUNCTION / 2], [end, end - JUNCTION / 2]]) {
    out.wires.push([[outside, line], [junction, line]], [[junction, Math.min(...lines, line)], [junction, Math.max(...lines, line)]]);
    out.dots.push([junction, line]);
  }
}

/**
 * The drawing of a whole loop.
 * @returns {{width, height, wires, dots, parts, source, unit}} wires as lists of points, parts with x and y.
 */
export function layout(tree, { upright = false } = {}) {
  const box = measure(tree, upright ? UPRIGHT_PART : PART);
  const out = { wires: [], dots: [], parts: [] };
  const line = box.line + 6;
  const back = Math.max(line + box.across - box.line, line + PART.across / 2) + RETURN - 50;
  const start = MARGIN;
  const end = start + box.along;
  const far = end + MARGIN;
  place(box, start, line, out);
  out.wires.push(
    [[MARGIN / 2, back], [MARGIN / 2, line], [start, line]],
    [[end, line], [far, line], [far, back], [MARGIN / 2, back]],
  );

  const point = ([along, across]) => (upright ? [across, along] : [along, across]);
  const length = far + MARGIN;
  const breadth = back + 22;
  const middle = (line + back) / 2;
  return {
    width: upright ? breadth : length,
    height: upright ? length : breadth,
    upright,
    wires: out.wires.map((wire) => wire.map(point)),
    dots: out.dots.map(point),
    parts: out.parts.map((part) => ({ ...part, ...named(point([part.along, part.across])) })),
    source: named(point([MARGIN / 2, middle])),
    unit: named(point([far, middle])),
  };
}

const named = ([x, y]) => ({ x, y });

/** Every lamp of a tree in the order of the bank text. */
export function lampsOf(node) {
  return node.kind === "lamp" ? [node] : (node.parts ?? []).flatMap(lampsOf);
}

/**
 * The bank as text without the lamps of `out` (their indices): a parallel part loses a branch, a series part loses the
 * whole chain. Null where nothing is left that could carry current.
 */
export function bankText(node, out = new Set()) {
  if (node.kind === "lamp" || node.kind === "resistor") {
    return out.has(node.index) ? null : node.name;
  }

  const parts = node.parts.map((part) => ({ text: bankText(part, out), kind: part.kind }));
  if (node.kind === "series") {
    return parts.some(({ text }) => text === null) ? null : parts.map(({ text, kind }) => bracket(text, kind === "parallel")).join(" + ");
  }

  const left = parts.filter(({ text }) => text !== null);
  return left.length === 0 ? null : left.length === 1 ? left[0].text : left.map(({ text, kind }) => bracket(text, kind === "series")).join(" || ");
}

const bracket = (text, compound) => (compound && /[+|]/.test(text) ? `(${text})` : text);
