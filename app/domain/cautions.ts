/** What a part will meet in service, as far as its job knows; null or false where it doesn't. */
export interface Hazards {
  speed_rpm: number | null;
  pressure_MPa: number | null;
  temperature_C: number | null;
  fluid: Fluid | null;
  /** People or loads hang on it or stand under it. */
  lifting: boolean;
}

export const fluids = ["air", "water", "coolant", "oil", "fuel", "brake-fluid", "exhaust-gas", "other"] as const;
export type Fluid = (typeof fluids)[number];

export interface Caution {
  code: "check-not-approval" | "machine-tools" | "track-tests" | "rotating" | "pressure" | "heat" | "hot-fluid" | "fuel" | "lifting";
  /** The data it follows from, in words. When that changes, the caution has to be read again. */
  basis: string;
  title: string;
  text: string;
}

/** From here on touching bare metal for a while burns skin; set on the careful side. Shop practice, no source. */
export const HOT_TO_TOUCH_C = 50;

/**
 * Which cautions does this part show? Three always; the others follow from its data.
 *
 * @returns in a fixed order, each code once
 * @throws RangeError when speed or pressure is below zero or a figure is not finite
 */
export function cautionsFor(hazards: Hazards): Caution[] {
  const { speed_rpm, pressure_MPa, temperature_C, fluid, lifting } = hazards;
  for (const [name, value] of Object.entries({ speed_rpm, pressure_MPa, temperature_C })) {
    if (value !== null && !Number.isFinite(value)) throw new RangeError(`${name} must be a finite number`);
  }
  if (speed_rpm !== null && speed_rpm < 0) throw new RangeError("speed_rpm can't be below zero");
  if (pressure_MPa !== null && pressure_MPa < 0) throw new RangeError("pressure_MPa can't be below zero");

  const cautions: Caution[] = [
    {
      code: "check-not-approval",
      basis: "always shown",
      title: "A check, not an approval",
      text: "What is worked out here is a check. Local codes, the data of the fastener, seal and material suppliers, and licensed engineering practice come first.",
    },
    {
      code: "machine-tools",
      basis: "always shown",
      title: "Machine tools",
      text: "Machine tools need training and guarding. Clamp the work, keep guards closed, and take gloves and loose sleeves off at the spindle.",
    },
    {
      code: "track-tests",
      basis: "always shown",
      title: "Track tests",
      text: "Tests at speed belong on a track, under its safety rules, never on a public road.",
    },
  ];
  if (speed_rpm !== null && speed_rpm > 0) {
    cautions.push({
      code: "rotating",
      basis: `turns at ${speed_rpm} rpm`,
      title: "Rotating parts can burst",
      text: "Never spin a print under power. Spin the cut part behind a guard first, and stand out of its plane.",
    });
  }
  if (pressure_MPa !== null && pressure_MPa > 0) {
    cautions.push({
      code: "pressure",
      basis: `holds ${pressure_MPa} MPa${fluid === null ? "" : ` of ${fluidWords[fluid]}`}`,
      title: "Under pressure",
      text: "A print holds no pressure. Proof-test the cut part with liquid behind a shield, and let the pressure off before a screw is loosened.",
    });
  }
  if (temperature_C !== null && temperature_C >= HOT_TO_TOUCH_C) {
    cautions.push({
      code: "heat",
      basis: `gets to ${temperature_C} °C`,
      title: "Hot in service",
      text: "Hot metal burns, and a print softens long before metal does: try prints on a cold machine, and let the cut part cool before it is touched.",
    });
  }
  if (fluid !== null && hotFluids.has(fluid)) {
    cautions.push({
      code: "hot-fluid",
      basis: `carries ${fluidWords[fluid]}`,
      title: "Hot fluid",
      text: "Hot coolant, oil and gas are under pressure and burn. Let it cool, let the pressure off, and wear eye protection before it is opened.",
    });
  }
  if (fluid === "fuel") {
    cautions.push({
      code: "fuel",
      basis: "carries fuel",
      title: "Fuel burns",
      text: "Never put fuel on a print. Test the cut part for leaks with a liquid that does not burn first, away from sparks and heat, with an extinguisher at hand.",
    });
  }
  if (lifting) {
    cautions.push({
      code: "lifting",
      basis: "lifts or carries a load",
      title: "Lifting",
      text: "Nobody under the load. Lifting parts need a proof load and the rules for lifting gear that apply where it is used; a print lifts nothing.",
    });
  }
  return cautions;
}

const hotFluids: ReadonlySet<Fluid> = new Set<Fluid>(["water", "coolant", "oil", "exhaust-gas"]);

export const fluidWords: Record<Fluid, string> = {
  air: "air",
  water: "water",
  coolant: "coolant",
  oil: "oil",
  fuel: "fuel",
  "brake-fluid": "brake fluid",
  "exhaust-gas": "exhaust gas",
  other: "another fluid",
};
