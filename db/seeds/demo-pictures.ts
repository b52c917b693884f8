import sharp from "sharp";

/** A drawn photo: the print on the hardware, seen from above, with the words that a photo can't say. */
export function drawFitPhoto({ title, holes, light }: { title: string; holes: number; light: string }): Promise<Buffer> {
  const spots = Array.from({ length: holes }, (_, i) => {
    const at = (i / holes) * 2 * Math.PI + 0.3;
    return `<ellipse cx="${800 + 300 * Math.cos(at)}" cy="${600 + 195 * Math.sin(at)}" rx="24" ry="17" fill="#39434a"/>`;
  }).join("");
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="1600" height="1200">
    <defs><linearGradient id="g" x1="0" y1="0" x2="1" y2="1"><stop offset="0" stop-color="#b7c0c6"/><stop offset="1" stop-color="#6d7980"/></linearGradient></defs>
    <rect width="1600" height="1200" fill="url(#g)"/>
    <ellipse cx="800" cy="645" rx="470" ry="310" fill="#2c363d"/>
    <ellipse cx="800" cy="600" rx="450" ry="295" fill="${light}" stroke="#2c363d" stroke-width="5"/>
    ${spots}
    <ellipse cx="800" cy="600" rx="170" ry="112" fill="#4a555c"/>
    <text x="60" y="1140" font-family="sans-serif" font-size="44" fill="#f2f0ea">${title}</text></svg>`;
  return sharp(Buffer.from(svg)).jpeg({ quality: 86 }).toBuffer();
}

/** A drawn text message, as a photo of a phone. */
export function drawMessage(lines: string[]): Promise<Buffer> {
  const text = lines.map((line, i) => `<text x="120" y="${330 + i * 62}" font-family="sans-serif" font-size="42" fill="#0d2b45">${line}</text>`).join("");
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="1000" height="1200"><rect width="1000" height="1200" fill="#39434a"/>
    <rect x="60" y="120" width="880" height="960" fill="#fbf9f4"/><rect x="90" y="260" width="820" height="${120 + lines.length * 62}" fill="#d3dee5"/>${text}</svg>`;
  return sharp(Buffer.from(svg)).jpeg({ quality: 86 }).toBuffer();
}
