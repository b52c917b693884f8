import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { createStlReader, readStl } from "#app/geometry/stl-reader.ts";
import { sniffModel } from "#app/geometry/sniff-model.ts";
import { asciiStl, binaryStl, box, torus } from "./solids.ts";

const text = (content: string) => new TextEncoder().encode(content);
const facet = "facet normal 0 0 1\nouter loop\nvertex 0 0 0\nvertex 1 0 0\nvertex 0 1 0\nendloop\nendfacet\n";

function readTriangles(bytes: Uint8Array, deliver: (push: (chunk: Uint8Array) => void) => void = (push) => push(bytes)) {
  const coordinates: number[] = [];
  const reader = createStlReader(bytes.length, (block) => coordinates.push(...block));
  deliver((chunk) => reader.push(chunk));
  return { ...reader.finish(), coordinates };
}

/** The bytes in pieces, all through one buffer that is overwritten, as a file reader does it. */
function readInPieces(bytes: Uint8Array, sizes: number[]) {
  return readTriangles(bytes, (push) => {
    const buffer = new Uint8Array(Math.max(1, ...sizes));
    for (let at = 0, turn = 0; at < bytes.length; turn++) {
      const piece = bytes.subarray(at, at + sizes[turn % sizes.length]!);
      buffer.fill(0xff);
      buffer.set(piece);
      push(buffer.subarray(0, piece.length));
      at += piece.length;
    }
  });
}

describe("pieces", () => {
  const files = { binary: binaryStl(torus(50, 20, 24, 12)), trailing: new Uint8Array([...binaryStl(torus(50, 20, 12, 8)), ...new Uint8Array(130)]), text: asciiStl(torus(50, 20, 12, 8), "käse # facet") };
  test.each(Object.entries(files))("of any size give the same %s", (_, bytes) => {
    const whole = readTriangles(bytes);
    fc.assert(
      fc.property(fc.array(fc.oneof(fc.integer({ min: 1, max: 60 }), fc.integer({ min: 1, max: 9000 })), { minLength: 1, maxLength: 6 }), (sizes) => {
        expect(readInPieces(bytes, sizes)).toEqual(whole);
      }),
      { numRuns: 60 },
    );
  });

  test("a file that stops arriving is refused", () => {
    const bytes = binaryStl(box(1, 1, 1));
    const reader = createStlReader(bytes.length, () => {});
    reader.push(bytes.subarray(0, 300));
    expect(() => reader.finish()).toThrow(/only 300 of 684 bytes/);
  });
});

describe("text", () => {
  const triangles = (content: string) => readTriangles(text(content));
  test.each([
    ["exponents", "solid\nfacet normal 0 0 1 outer loop vertex 0 0 0 vertex 1.5E+02 -2e-3 .5 vertex +7. 0 1e0 endloop endfacet endsolid", [0, 0, 0, 150, -0.002, 0.5, 7, 0, 1]],
    ["no normal", `solid\n${facet.replace("normal 0 0 1", "")}endsolid`, [0, 0, 0, 1, 0, 0, 0, 1, 0]],
    ["a normal of odd words", `solid\n${facet.replace("0 0 1", "-1.#IND nan(ind) inf")}endsolid`, [0, 0, 0, 1, 0, 0, 0, 1, 0]],
    ["tabs, form feeds and CR", `solid x\r${facet.replaceAll("\n", "\r").replaceAll(" ", "\t\f")}endsolid`, [0, 0, 0, 1, 0, 0, 0, 1, 0]],
    ["a name that looks like a facet", `solid ${facet.replaceAll("\n", " ")}\n${facet}endsolid`, [0, 0, 0, 1, 0, 0, 0, 1, 0]],
    ["an old end-of-file mark", `solid x\n${facet}endsolid x\n\x1a`, [0, 0, 0, 1, 0, 0, 0, 1, 0]],
  ])("%s", (_, content, want) => expect([...triangles(content).coordinates]).toEqual(want));

  test.each([
    ["no endsolid", `solid x\n${facet}`, /endsolid is missing/],
    ["no solid", `${facet}endsolid`, /solid, is missing/],
    ["two solids", `solid a\n${facet}endsolid a\nsolid b\n${facet}endsolid b`, /2 solids in one file/],
    ["no endsolid between", `solid a\n${facet}solid b\n${facet}endsolid b`, /missing between two solids/],
    ["words at the end", `solid a\n${facet}endsolid a\nwritten by hand`, /3 words after endsolid left out/],
  ])("%s: read, with a warning", (_, content, warning) => expect(triangles(content).warnings.join()).toMatch(warning));

  test.each([
    ["prose", "solid advice\nis hard to find", /line 2: "is" where facet or endsolid/],
    ["a facet after the end", `solid a\n${facet}endsolid a\n${facet}`, /line 10: a facet after endsolid/],
    ["overflow", `solid a\n${facet.replace("vertex 1 0 0", "vertex 1e39 0 0")}endsolid`, /line 5: "1e39" is not a coordinate/],
    ["hexadecimal", `solid a\n${facet.replace("vertex 1 0 0", "vertex 0x10 0 0")}endsolid`, /"0x10"/],
    ["a corner of two numbers", `solid a\n${facet.replace("vertex 1 0 0", "vertex 1 0")}endsolid`, /line 6: "vertex" is not a coordinate/],
    ["a corner of four numbers", `solid a\n${facet.replace("vertex 1 0 0", "vertex 1 0 0 0")}endsolid`, /line 5: "0" where vertex/],
    ["bytes a terminal would act on", `solid a\n\x9b31mred`, /"\?/],
    ["CRLF lines are one each", `solid a\r\n\r\nnonsense`, /line 3:/],
  ])("%s: refused", (_, content, why) => expect(() => triangles(content)).toThrow(why));

  test("coordinates keep double precision", () => {
    expect(triangles(`solid\n${facet.replace("vertex 1 0 0", "vertex 0.1234567890123456 0 0")}endsolid`).coordinates[3]).toBe(0.1234567890123456);
  });
});

describe("binary", () => {
  test.each(["solid", "solid facet normal outer loop vertex", "", "STLB ATF 2.0 COLOR="])("header %j", (header) => {
    const coordinates = box(3, 2, 1);
    expect([...readStl(binaryStl(coordinates, { header })).positions]).toEqual([...coordinates]);
  });

  test("a promise of triangles costs no memory before the size backs it", () => {
    const bytes = binaryStl(box(1, 1, 1), { count: 4_000_000_000 });
    expect(() => readStl(bytes)).toThrow(/promises 4,000,000,000 triangles/);
  });

  test("text and binary give the same triangles for drawing", () => {
    const coordinates = torus(5, 2, 6, 5);
    expect(readStl(asciiStl(coordinates)).positions).toEqual(readStl(binaryStl(coordinates)).positions);
  });
});

describe("what is it?", () => {
  test.each([
    ["step", "ISO-10303-21;\nHEADER;"],
    ["step", "\ufeff /* a comment */\n  ISO-10303-21;"],
    ["stl", "# made by hand\n\nSOLID x\n"],
    [null, "<html>solid</html>"],
    [null, "solidarity"],
    [null, ""],
  ])("%s: %j", (kind, content) => expect(sniffModel(text(content))).toBe(kind));

  test("noise, pictures and archives are not STL", () => {
    const noise = Uint8Array.from({ length: 4096 }, (_, i) => Math.imul(i + 1, 0x9e3779b1) >>> 24);
    expect(sniffModel(noise)).toBeNull();
    expect(() => readStl(new Uint8Array([0x50, 0x4b, 3, 4, ...noise]))).toThrow(/ZIP archive/);
    expect(() => readStl(new Uint8Array([0x25, 0x50, 0x44, 0x46, ...noise]))).toThrow(/PDF/);
    expect(() => readStl(new Uint8Array([0x89, 0x50, 0x4e, 0x47, ...noise]))).toThrow(/picture/);
  });

  test("a damaged binary STL is still one, so that reading it says what is wrong", () => {
    expect(sniffModel(binaryStl(torus(5, 2, 6, 5), { count: 3 }))).toBe("stl");
    expect(sniffModel(binaryStl(torus(5, 2, 6, 5)).subarray(0, 777))).toBe("stl");
  });
});
