/** A place on a picture: fractions of its width from the left, of its height from the top. */
export interface Spot {
  x: number;
  y: number;
}

/** The spot moved by fractions, kept on the picture, to a thousandth. */
export function moveSpot({ x, y }: Spot, dx: number, dy: number): Spot {
  const kept = (value: number) => Math.round(Math.min(1, Math.max(0, value)) * 1000) / 1000;
  return { x: kept(x + dx), y: kept(y + dy) };
}

export function spotText({ x, y }: Spot): string {
  return `The spot is ${Math.round(x * 100)} % from the left and ${Math.round(y * 100)} % from the top.`;
}
