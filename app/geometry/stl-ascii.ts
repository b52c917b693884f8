import { counted } from "#app/geometry/counted.ts";
import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { parseDecimal } from "#app/geometry/parse-decimal.ts";
import { BLOCK_TRIANGLES, type StlFacts, type StlReader, type TakeTriangles } from "#app/geometry/stl-triangles.ts";

const keyword = (text: string) => Uint8Array.from(text, (letter) => letter.charCodeAt(0));
const SOLID = keyword("solid"), ENDSOLID = keyword("endsolid"), FACET = keyword("facet"), ENDFACET = keyword("endfacet");
const OUTER = keyword("outer"), LOOP = keyword("loop"), ENDLOOP = keyword("endloop"), VERTEX = keyword("vertex");
const END = keyword("end");

/** A longer run without a blank is no STL; it bounds what is carried from chunk to chunk. */
const LONGEST_WORD = 65_536;
/** Binary STL can't say more than single precision holds; a text that does is damaged. */
const LARGEST = 3.4028234663852886e38;

/** What the next word must be. */
const enum Expect { Solid, Facet, Outer, Loop, Vertex, Coordinate, EndFacet, AfterEnd }

/**
 * Reads a text STL word by word: any blanks and line ends (LF, CRLF, CR), any case, "end loop" for
 * "endloop", comments from # to the line's end, several solids, names of any kind (the rest of
 * their line is never read as facets). Normals are not read: they follow from the winding.
 *
 * @throws UnreadableModel naming the line, for anything that would change or lose a triangle
 */
export class AsciiStlReader implements StlReader {
  readonly #take: TakeTriangles;
  readonly #block = new Float64Array(BLOCK_TRIANGLES * 9);
  #used = 0;
  #triangles = 0;
  #expect = Expect.Solid;
  #skipLine = false;
  /** "end" was read alone, its object follows as the next word. */
  #end = false;
  #corners = 0;
  #axis = 0;
  #normalWords = 0;
  #line = 1;
  #lastWasReturn = false;
  #solids = 0;
  #strayWords = 0;
  #begun = false;
  #warnings = new Set<string>();
  #carry = new Uint8Array(0);

  constructor(take: TakeTriangles) {
    this.#take = take;
  }

  push(chunk: Uint8Array): void {
    let bytes = chunk;
    if (this.#carry.length > 0) {
      bytes = new Uint8Array(this.#carry.length + chunk.length);
      bytes.set(this.#carry);
      bytes.set(chunk, this.#carry.length);
    }
    let end = bytes.length;
    while (end > 0 && bytes[end - 1]! > 32) end--;
    if (bytes.length - end > LONGEST_WORD && !this.#skipLine) throw this.#refuse("a word without end; this is not an STL");
    this.#carry = bytes.slice(end);
    this.#read(bytes, end);
  }

  finish(): StlFacts {
    const last = new Uint8Array(this.#carry.length + 1);
    last.set(this.#carry);
    last[last.length - 1] = 32;
    this.#read(last, last.length);

    if (this.#expect !== Expect.AfterEnd && this.#expect !== Expect.Facet) {
      throw this.#refuse("the file ends inside a facet: it is cut off; export or upload it again");
    }
    if (this.#triangles === 0 && this.#expect === Expect.Facet) {
      throw this.#refuse("the file ends before its first facet: it is cut off; export or upload it again");
    }
    if (this.#triangles === 0) throw new UnreadableModel("the STL holds no triangles; export the part again");
    this.#handOn();
    const warnings = [...this.#warnings];
    if (this.#expect === Expect.Facet) warnings.push("The last endsolid is missing: the file may be cut off.");
    if (this.#strayWords > 0) warnings.push(`${counted(this.#strayWords, "word")} after endsolid left out.`);
    if (this.#solids > 1) warnings.push(`${counted(this.#solids, "solid")} in one file, measured together.`);
    return { format: "stl-ascii", triangles: this.#triangles, warnings };
  }

  #read(bytes: Uint8Array, end: number): void {
    let at = 0;
    if (!this.#begun && end > 0) {
      this.#begun = true;
      if (bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf) at = 3;
    }
    while (at < end) {
      const byte = bytes[at]!;
      if (byte <= 32) {
        if (byte === 10 || byte === 13) {
          if (byte === 13 || !this.#lastWasReturn) this.#line++;
          this.#skipLine = false;
        }
        this.#lastWasReturn = byte === 13;
        at++;
        continue;
      }
      this.#lastWasReturn = false;
      if (this.#skipLine || byte === 0x23) {
        this.#skipLine = true;
        while (at < end && bytes[at] !== 10 && bytes[at] !== 13) at++;
        continue;
      }
      let wordEnd = at + 1;
      while (wordEnd < end && bytes[wordEnd]! > 32) wordEnd++;
      if (this.#expect === Expect.Coordinate) this.#coordinate(bytes, at, wordEnd);
      else this.#word(bytes, at, wordEnd);
      at = wordEnd;
    }
  }

  #coordinate(bytes: Uint8Array, from: number, to: number): void {
    const value = parseDecimal(bytes, from, to);
    if (!(Math.abs(value) <= LARGEST)) {
      const word = shown(bytes, from, to);
      if (word.includes(",")) throw this.#refuse(`"${word}" has a decimal comma; export with decimal points`);
      throw this.#refuse(`"${word}" is not a coordinate; repair the mesh or export the part again`);
    }
    this.#block[this.#used++] = value;
    if (++this.#axis === 3) this.#expect = Expect.Vertex;
  }

  #word(bytes: Uint8Array, from: number, to: number): void {
    const is = (word: Uint8Array) => matches(bytes, from, to, word);
    const closes = (joined: Uint8Array, object: Uint8Array) => (this.#end ? is(object) : is(joined));
    const closing = this.#expect === Expect.Facet || this.#expect === Expect.Vertex || this.#expect === Expect.EndFacet;
    if (closing && !this.#end && is(END)) {
      this.#end = true;
      return;
    }
    switch (this.#expect) {
      case Expect.Solid:
        if (is(SOLID)) return this.#openSolid();
        if (is(FACET)) {
          this.#warnings.add("The first line, solid, is missing.");
          return this.#openFacet();
        }
        break;
      case Expect.Facet:
        if (!this.#end && is(FACET)) return this.#openFacet();
        if (closes(ENDSOLID, SOLID)) {
          this.#end = false;
          this.#skipLine = true;
          this.#expect = Expect.AfterEnd;
          return;
        }
        if (is(SOLID)) {
          this.#warnings.add("An endsolid is missing between two solids.");
          return this.#openSolid();
        }
        break;
      case Expect.Outer:
        if (is(OUTER)) {
          this.#expect = Expect.Loop;
          return;
        }
        // "normal" and its three numbers, whatever they are.
        if (++this.#normalWords <= 4 && !is(VERTEX) && !is(FACET)) return;
        break;
      case Expect.Loop:
        if (is(LOOP)) {
          this.#expect = Expect.Vertex;
          return;
        }
        break;
      case Expect.Vertex:
        if (!this.#end && is(VERTEX)) {
          if (++this.#corners > 3) throw this.#refuse("a facet with more than three corners; export the part as triangles");
          this.#axis = 0;
          this.#expect = Expect.Coordinate;
          return;
        }
        if (closes(ENDLOOP, LOOP)) {
          if (this.#corners < 3) throw this.#refuse(`a facet with ${counted(this.#corners, "corner")} instead of three; export the part again`);
          this.#end = false;
          this.#expect = Expect.EndFacet;
          return;
        }
        break;
      case Expect.EndFacet:
        if (closes(ENDFACET, FACET)) {
          this.#end = false;
          this.#expect = Expect.Facet;
          this.#triangles++;
          if (this.#used === this.#block.length) this.#handOn();
          return;
        }
        break;
      case Expect.AfterEnd:
        if (is(SOLID)) return this.#openSolid();
        if (is(FACET)) throw this.#refuse("a facet after endsolid; export the part again");
        if (bytes[from] !== 0) this.#strayWords++;
        return;
    }
    throw this.#refuse(`"${shown(bytes, from, to)}" where ${EXPECTED[this.#expect]} should stand; export the part again`);
  }

  #handOn(): void {
    if (this.#used > 0) this.#take(this.#block.subarray(0, this.#used));
    this.#used = 0;
  }

  #openSolid(): void {
    this.#solids++;
    this.#skipLine = true;
    this.#expect = Expect.Facet;
  }

  #openFacet(): void {
    this.#corners = 0;
    this.#normalWords = 0;
    this.#expect = Expect.Outer;
  }

  #refuse(what: string): UnreadableModel {
    return new UnreadableModel(`line ${this.#line.toLocaleString("en-US")}: ${what}`);
  }
}

const EXPECTED = ["solid", "facet or endsolid", "outer loop", "loop", "vertex or endloop", "a coordinate", "endfacet", "solid"];

function matches(bytes: Uint8Array, from: number, to: number, word: Uint8Array): boolean {
  if (to - from !== word.length) return false;
  for (let i = 0; i < word.length; i++) if ((bytes[from + i]! | 0x20) !== word[i]) return false;
  return true;
}

/** A word for a message: short, and without bytes that a terminal would act on. */
function shown(bytes: Uint8Array, from: number, to: number): string {
  let text = "";
  for (let i = from; i < to && text.length < 24; i++) {
    const byte = bytes[i]!;
    text += byte > 32 && byte < 127 ? String.fromCharCode(byte) : "?";
  }
  return to - from > 24 ? `${text}…` : text;
}
