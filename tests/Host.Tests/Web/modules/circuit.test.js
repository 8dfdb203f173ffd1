import { test } from "node:test";
import assert from "node:assert/strict";
import { bankText, lampsOf, layout } from "../../../../src/Host/Web/wwwroot/model/circuit.js";

const lamp = (index) => ({ kind: "lamp", index, name: `L${index}` });
const series = (...parts) => ({ kind: "series", parts });
const parallel = (...parts) => ({ kind: "parallel", parts });

const trees = {
  one: lamp(0),
  parallel: parallel(lamp(0), lamp(1), lamp(2)),
  series: series(lamp(0), lamp(1)),
  mixed: series(parallel(lamp(0), lamp(1)), lamp(2)),
  deep: parallel(series(parallel(lamp(0), lamp(1)), lamp(2)), series(lamp(3), parallel(lamp(4), { kind: "resistor", name: "8 ohm" }))),
};

for (const upright of [false, true]) {
  for (const [name, tree] of Object.entries(trees)) {
    test(`layout_${name}_${upright ? "Upright" : "Lying"}_HasNoTwoPartsOnOneAnother`, () => {
      const { parts } = layout(tree, { upright });
      for (const [index, a] of parts.entries()) {
        for (const b of parts.slice(index + 1)) {
          assert.ok(Math.abs(a.x - b.x) >= 100 || Math.abs(a.y - b.y) >= 100, `${a.name} and ${b.name}`);
        }
      }
    });

    test(`layout_${name}_${upright ? "Upright" : "Lying"}_StaysInsideItsFrame`, () => {
      const drawing = layout(tree, { upright });
      const points = [...drawing.wires.flat(), ...drawing.dots, ...drawing.parts.map(({ x, y }) => [x, y]), [drawing.unit.x, drawing.unit.y]];
      for (const [x, y] of points) {
        assert.ok(x >= 0 && y >= 0 && x <= drawing.width && y <= drawing.height, `${x}, ${y} in ${drawing.width} x ${drawing.height}`);
      }
    });

    test(`layout_${name}_${upright ? "Upright" : "Lying"}_IsOneClosedLoop`, () => {
      // Every end of a wire must lie on another wire (wires through a lamp run through its middle).
      const { wires } = layout(tree, { upright });
      const on = ([x, y], wire) => wire.slice(1).some(([bx, by], index) => {
        const [ax, ay] = wire[index];
        return x >= Math.min(ax, bx) - 1e-9 && x <= Math.max(ax, bx) + 1e-9 && y >= Math.min(ay, by) - 1e-9 && y <= Math.max(ay, by) + 1e-9
          && Math.abs((bx - ax) * (y - ay) - (by - ay) * (x - ax)) < 1e-9;
      });
      for (const wire of wires) {
        for (const end of [wire[0], wire.at(-1)]) {
          assert.ok(wires.some((other) => other !== wire && on(end, other)), `${end} hangs loose`);
        }
      }
    });
  }
}

test("layout_KeepsEveryPart", () => assert.equal(layout(trees.deep).parts.length, 6));

test("lampsOf_CountsLampsOnly", () => assert.deepEqual(lampsOf(trees.deep).map(({ index }) => index), [0, 1, 2, 3, 4]));

test("bankText_ALampOfAParallelPartOut_LeavesTheOthers", () => {
  assert.equal(bankText(trees.mixed, new Set([0])), "L1 + L2");
  assert.equal(bankText(trees.mixed), "(L0 || L1) + L2");
});

test("bankText_ALampOfASeriesOut_OpensIt", () => {
  assert.equal(bankText(trees.series, new Set([1])), null);
  assert.equal(bankText(trees.deep, new Set([2])), "L3 + (L4 || 8 ohm)");
});
