type Pdf = PDFKit.PDFDocument;

const ink = "#0d2b45";
const soft = "#52657a";
const rule = "#9aa6b0";

/** The few things a printed sheet is made of: headings, facts, tables, a picture, a block of cells. */
export type SheetWriter = ReturnType<typeof createSheetWriter>;

export function createSheetWriter(pdf: Pdf) {
  const left = pdf.page.margins.left;
  const width = pdf.page.width - left - pdf.page.margins.right;
  const bottom = () => pdf.page.height - pdf.page.margins.bottom;
  const room = (height: number) => {
    if (pdf.y + height > bottom()) pdf.addPage();
  };
  const line = (y: number, color = rule, weight = 0.6) => pdf.moveTo(left, y).lineTo(left + width, y).lineWidth(weight).strokeColor(color).stroke();

  function row(cells: string[], shares: number[], fontName: string, color: string): void {
    const total = shares.reduce((sum, share) => sum + share, 0);
    const widths = shares.map((share) => (width * share) / total);
    pdf.font(fontName).fontSize(9.5);
    const height = Math.max(...cells.map((text, i) => pdf.heightOfString(text || " ", { width: widths[i]! - 8 }))) + 6;
    room(height);
    const top = pdf.y;
    let x = left;
    cells.forEach((text, i) => {
      pdf.fillColor(color).text(text, x, top + 3, { width: widths[i]! - 8 });
      x += widths[i]!;
    });
    pdf.x = left;
    pdf.y = top + height;
    line(pdf.y);
  }

  return {
    heading(text: string): void {
      pdf.font("bold").fontSize(20).fillColor(ink).text(text, left, pdf.y, { width });
      pdf.moveDown(0.2);
    },
    section(text: string): void {
      room(60);
      pdf.moveDown(0.9);
      line(pdf.y, ink, 1.2);
      pdf.font("bold").fontSize(12).fillColor(ink).text(text, left, pdf.y + 6, { width });
      pdf.moveDown(0.25);
    },
    text(text: string): void {
      pdf.font("text").fontSize(10).fillColor(ink).text(text, left, pdf.y, { width });
      pdf.moveDown(0.15);
    },
    facts(facts: Array<[string, string]>): void {
      for (const [label, value] of facts) row([label, value], [1, 3], "text", ink);
    },
    table(head: string[], rows: string[][], shares: number[]): void {
      row(head, shares, "label", soft);
      for (const cells of rows) row(cells, shares, "text", ink);
    },
    picture(png: Buffer, height: number): void {
      room(height + 10);
      pdf.image(png, left, pdf.y + 6, { fit: [width, height], align: "center" });
      pdf.y += height + 12;
    },
    /** A title block: three cells a row, ruled. */
    cells(cells: Array<[string, string]>): void {
      const cell = width / 3;
      const height = 34;
      room(Math.ceil(cells.length / 3) * height + 6);
      const top = pdf.y + 6;
      cells.forEach(([label, value], i) => {
        const x = left + (i % 3) * cell;
        const y = top + Math.floor(i / 3) * height;
        pdf.rect(x, y, cell, height).lineWidth(0.8).strokeColor(ink).stroke();
        pdf.font("label").fontSize(7.5).fillColor(soft).text(label, x + 6, y + 4, { width: cell - 12, lineBreak: false });
        pdf.font("bold").fontSize(10.5).fillColor(ink).text(value, x + 6, y + 15, { width: cell - 12, height: 14, ellipsis: true });
      });
      pdf.x = left;
      pdf.y = top + Math.ceil(cells.length / 3) * height + 4;
    },
    footers(text: string): void {
      const { start, count } = pdf.bufferedPageRange();
      for (let page = start; page < start + count; page++) {
        pdf.switchToPage(page);
        // Below the margin: a text there must not begin a page of its own.
        pdf.page.margins.bottom = 0;
        pdf.font("label").fontSize(8).fillColor(soft).text(`${text} · page ${page - start + 1} of ${count}`, left, pdf.page.height - 40, { width, lineBreak: false });
        pdf.text("A check, not an approval: local codes, suppliers' data and licensed engineering practice come first.", left, pdf.page.height - 28, { width, lineBreak: false });
      }
    },
  };
}
