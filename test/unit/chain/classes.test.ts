import { describe, expect, test } from "vitest";
import { absorbingStates, communicatingClasses, statesReached, statesReaching } from "../../../src/chain/classes";
import { Generator, type Arrow } from "../../../src/chain/generator";

const chain = Generator.fromArrows(6, [[5, 0, 1], [0, 5, 1], [0, 2, 1], [2, 3, 1], [3, 2, 1], [1, 4, 1]]);

describe("classes", () => {
  test("are numbered by their first states; closed ones are never left", () => {
    const { classOf, classes, closed } = communicatingClasses(chain);
    expect([...classOf]).toEqual([0, 1, 2, 2, 3, 0]);
    expect(classes.map((members) => [...members])).toEqual([[0, 5], [1], [2, 3], [4]]);
    expect(closed).toEqual([false, false, true, true]);
  });

  test("ended states count as absorbing", () => {
    expect(communicatingClasses(chain, Uint8Array.of(1, 0, 0, 0, 0, 0)).closed).toEqual([true, false, true, true, false]);
  });

  test("absorbing states are those without exits", () => {
    expect([...absorbingStates(chain)]).toEqual([0, 0, 0, 0, 1, 0]);
  });

  test("reaching and reached stop at ended states", () => {
    expect([...statesReaching(chain, Uint8Array.of(0, 0, 0, 1, 0, 0))]).toEqual([1, 0, 1, 1, 0, 1]);
    expect([...statesReaching(chain, Uint8Array.of(0, 0, 0, 1, 0, 0), Uint8Array.of(1, 0, 0, 0, 0, 0))]).toEqual([0, 0, 1, 1, 0, 0]);
    expect([...statesReached(chain, Uint8Array.of(0, 0, 0, 0, 0, 1))]).toEqual([1, 0, 1, 1, 0, 1]);
    expect([...statesReached(chain, Uint8Array.of(0, 0, 0, 0, 0, 1), Uint8Array.of(1, 0, 0, 0, 0, 0))]).toEqual([1, 0, 0, 0, 0, 1]);
  });

  test("a ring of 200,000 states is one class, without deep recursion", () => {
    const n = 200_000;
    const ring = Generator.fromArrows(n, Array.from({ length: n }, (_, i): Arrow => [i, (i + 1) % n, 1]));
    expect(communicatingClasses(ring).classes.length).toBe(1);
  });
});
