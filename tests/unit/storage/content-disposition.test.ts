import fc from "fast-check";
import { expect, test } from "vitest";
import { contentDisposition } from "#storage/content-disposition.ts";

const asked = { contentType: "model/stl", inline: false };

test.each([
  { filename: "plate.stl", header: `attachment; filename="plate.stl"; filename*=UTF-8''plate.stl` },
  // RFC 6266 section 5 shows this pair of forms for a name outside of ASCII.
  { filename: "€ rates", header: `attachment; filename="rates"; filename*=UTF-8''%E2%82%AC%20rates` },
  { filename: "Naïve plan (2).pdf", header: `attachment; filename="Naive plan (2).pdf"; filename*=UTF-8''Na%C3%AFve%20plan%20%282%29.pdf` },
  { filename: 'a"; filename="evil.exe', header: `attachment; filename="a_; filename=_evil.exe"; filename*=UTF-8''a%22%3B%20filename%3D%22evil.exe` },
  { filename: "../../etc/passwd", header: `attachment; filename="passwd"; filename*=UTF-8''passwd` },
  { filename: "C:\\shop\\hub.step", header: `attachment; filename="hub.step"; filename*=UTF-8''hub.step` },
  { filename: "evil\u202Etxt.exe\r\nX: y", header: `attachment; filename="eviltxt.exeX: y"; filename*=UTF-8''eviltxt.exeX%3A%20y` },
  { filename: "...", header: `attachment; filename="file"; filename*=UTF-8''file` },
  { filename: "", header: `attachment; filename="file"; filename*=UTF-8''file` },
  { filename: "図面", header: `attachment; filename="file"; filename*=UTF-8''%E5%9B%B3%E9%9D%A2` },
])("$filename", ({ filename, header }) => {
  expect(contentDisposition({ ...asked, filename })).toBe(header);
});

test("only kinds that can't carry a script are shown in place", () => {
  const kind = (contentType: string) => contentDisposition({ filename: "a", contentType, inline: true }).split(";")[0];
  expect(["image/jpeg", "image/webp", "application/pdf", "model/gltf-binary"].map(kind)).toEqual(Array(4).fill("inline"));
  expect(["text/html", "image/svg+xml", "application/xhtml+xml", "text/xml", "application/octet-stream", "image/jpeg; x"].map(kind)).toEqual(Array(6).fill("attachment"));
});

test("a long name keeps its ending", () => {
  const header = contentDisposition({ ...asked, filename: `${"x".repeat(400)}.step` });
  expect(header).toContain(`filename="${"x".repeat(145)}.step"`);
});

test("whatever the name, the header is one line of ASCII whose long form decodes", () => {
  fc.assert(fc.property(fc.string({ unit: "binary" }), (filename) => {
    const header = contentDisposition({ ...asked, filename });
    expect(header).toMatch(/^attachment; filename="[\x20-\x21\x23-\x5b\x5d-\x7e]+"; filename\*=UTF-8''[A-Za-z0-9\-._~!$&+^`|%]+$/);
    decodeURIComponent(header.slice(header.lastIndexOf("'") + 1));
  }));
});
