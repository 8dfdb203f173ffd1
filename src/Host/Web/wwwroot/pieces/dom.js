// Making elements without ever writing markup from data: children are nodes or become text nodes.

const SVG = "http://www.w3.org/2000/svg";

function fill(node, properties, children) {
  for (const [name, value] of Object.entries(properties ?? {})) {
    if (name.startsWith("on")) {
      node.addEventListener(name.slice(2), value);
    } else if (value === true) {
      node.setAttribute(name, "");
    } else if (value !== false && value !== null && value !== undefined) {
      node.setAttribute(name, value);
    }
  }

  node.append(...children.flat(Infinity).filter((child) => child !== null && child !== undefined && child !== false));
  return node;
}

/** An element: h("p", { class: "quiet", onclick }, "text", node). */
export const h = (tag, properties, ...children) => fill(document.createElement(tag), properties, children);

/** The same in SVG. */
export const s = (tag, properties, ...children) => fill(document.createElementNS(SVG, tag), properties, children);

/** Writes text only where it differs, so that screen readers and layout are left in peace. */
export function text(node, value) {
  if (node.textContent !== value) {
    node.textContent = value;
  }
}

/** Sets an attribute only where it differs; null takes it away. */
export function attribute(node, name, value) {
  if (value === null) {
    node.removeAttribute(name);
  } else if (node.getAttribute(name) !== String(value)) {
    node.setAttribute(name, value);
  }
}

/** Shows a problem of the host beside what caused it. */
export function problemBox(error) {
  const where = Number.isInteger(error.position) && error.input
    ? h("code", {}, `\n${error.input}\n${" ".repeat(Math.min(error.position, error.input.length))}^`)
    : null;
  return h("div", { class: "problem", role: "alert" }, h("strong", {}, error.title ?? "That did not work"), "\n", error.detail ?? error.message, where);
}

/** Runs `work` from a button: the button waits meanwhile, and a problem is shown in `place`. */
export async function act(button, place, work) {
  button.disabled = true;
  place.replaceChildren();
  try {
    return await work();
  } catch (error) {
    // Whoever left the view, or asked anew, wants no answer any more.
    if (error.name !== "AbortError") {
      place.replaceChildren(problemBox(error));
    }

    return undefined;
  } finally {
    button.disabled = false;
  }
}
