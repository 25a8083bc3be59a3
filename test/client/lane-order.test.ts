import { expect, test } from "vitest";
import { groupsOf, moved, placesOf, regrouped } from "../../client/data/lane-order.ts";

const places = (text: string) =>
  text.split(" ").map((each) => {
    const [stream, group = ""] = each.split("@");
    return { stream, group };
  });
const text = (all: { stream: string; group: string }[]) =>
  all.map(({ stream, group }) => (group ? `${stream}@${group}` : stream)).join(" ");

test("streams that nobody arranged follow in the plant's order; those that are gone are left out", () => {
  expect(text(placesOf(["a", "b", "c", "d"], places("c x a")))).toBe("c a b d");
  expect(text(placesOf(["a", "b"], []))).toBe("a b");
});

test("lanes of one group stand together, where the first of them stands", () => {
  expect(text(placesOf(["a", "b", "c", "d"], places("a@top b c@top d")))).toBe("a@top c@top b d");
  expect(groupsOf(places("a@top c@top b d"))).toEqual([
    { name: "top", streams: ["a", "c"] },
    { name: "", streams: ["b", "d"] },
  ]);
});

test("a lane changes places within its group, at its edge with the group beside it, and stays at the ends", () => {
  expect(text(moved(places("a@top c@top b d"), "c", -1))).toBe("c@top a@top b d");
  expect(text(moved(places("a@top c@top b d"), "b", -1))).toBe("b d a@top c@top");
  expect(text(moved(places("a@top c@top b d"), "a", -1))).toBe("a@top c@top b d");
  expect(text(moved(places("a b"), "b", 1))).toBe("a b");
});

test("a lane that is put into a group joins the others of it", () => {
  expect(text(regrouped(places("a b@top c"), "c", "top"))).toBe("a b@top c@top");
  expect(text(regrouped(places("a@top b@top c"), "a", ""))).toBe("a c b@top");
});

test("what is given is not changed", () => {
  const given = Object.freeze(places("a@top b c@top")) as never;
  expect(text(placesOf(["a", "b", "c"], given))).toBe("a@top c@top b");
});
