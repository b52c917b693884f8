// Metals and printed plastics. Typical values at room temperature unless `typical` is false: for
// comparison, not allowables. Strength-critical parts need the mill certificate.

export interface Material {
  code: string;
  name: string;
  density_kg_m3: number;
  yield_MPa: number | null;
  tensile_MPa: number | null;
  shear_MPa: number | null;
  /** Linear expansion near room temperature. */
  expansion_per_K: number | null;
  /** False: minimum values. */
  typical: boolean;
  source: string;
}

export const materials: readonly Material[] = [
  { code: "6061-T6", name: "6061-T6/T651, minimum", density_kg_m3: 2700, yield_MPa: 241, tensile_MPa: 290, shear_MPa: 186, expansion_per_K: 23.6e-6, typical: false, source: "about 35/42/27 ksi plate, MIL-HDBK-5; 35/42 also on a stored secondary page, shear 27 ksi from memory; density and expansion as for the typical row" },
  { code: "6061-T6 typical", name: "6061-T6/T651, typical", density_kg_m3: 2700, yield_MPa: 276, tensile_MPa: 310, shear_MPa: 207, expansion_per_K: 23.6e-6, typical: true, source: "Aluminum Association typical properties, stored copies (two agree) (40/45/30 ksi, E 10.0 Msi, 1160 BTU.in/hr.ft2.F); Callister, Fundamentals of Materials Science and Engineering, appendix B (data from ASM handbooks), stored copies (276/310, CTE 23.6)" },
  { code: "7075-T6", name: "7075-T6/T651", density_kg_m3: 2810, yield_MPa: 503, tensile_MPa: 572, shear_MPa: 331, expansion_per_K: 23.4e-6, typical: true, source: "Aluminum Association typical properties, stored copies (two agree) (73/83/48 ksi, E 10.4 Msi); Callister, Fundamentals of Materials Science and Engineering, appendix B (data from ASM handbooks), stored copies (505/572, CTE 23.4); k from memory" },
  { code: "2024-T3", name: "2024-T3", density_kg_m3: 2780, yield_MPa: 345, tensile_MPa: 483, shear_MPa: 283, expansion_per_K: 22.9e-6, typical: true, source: "Aluminum Association typical properties, stored copies (two agree) (50/70/41 ksi, 840 BTU.in/hr.ft2.F); Callister, Fundamentals of Materials Science and Engineering, appendix B (data from ASM handbooks), stored copies (345/485, CTE 22.9; Aluminum Association 12.9e-6/F = 23.2)" },
  { code: "2024-T4", name: "2024-T4/T351", density_kg_m3: 2780, yield_MPa: 324, tensile_MPa: 469, shear_MPa: 283, expansion_per_K: 22.9e-6, typical: true, source: "Aluminum Association typical properties, stored copies (two agree) (47/68/41 ksi); Callister, Fundamentals of Materials Science and Engineering, appendix B (data from ASM handbooks), stored copies (325/470)" },
  { code: "303", name: "303 stainless, annealed", density_kg_m3: 8000, yield_MPa: 240, tensile_MPa: 620, shear_MPa: null, expansion_per_K: 17.3e-6, typical: true, source: "from memory (ASM typical)" },
  { code: "304", name: "304 stainless, annealed", density_kg_m3: 8000, yield_MPa: 205, tensile_MPa: 515, shear_MPa: null, expansion_per_K: 17.2e-6, typical: true, source: "Callister, Fundamentals of Materials Science and Engineering, appendix B (data from ASM handbooks), stored copies (density, E, CTE); 205/515 minimum of ASTM A240 and k from memory" },
  { code: "4140 normalised", name: "4140 normalised (870 C)", density_kg_m3: 7850, yield_MPa: 655, tensile_MPa: 1020, shear_MPa: null, expansion_per_K: 12.3e-6, typical: true, source: "Callister, Fundamentals of Materials Science and Engineering, appendix B (data from ASM handbooks), stored copies (density, E, CTE); strengths and k from memory" },
  { code: "4140 annealed", name: "4140 annealed (815 C)", density_kg_m3: 7850, yield_MPa: 417, tensile_MPa: 655, shear_MPa: null, expansion_per_K: 12.3e-6, typical: true, source: "Callister, Fundamentals of Materials Science and Engineering, appendix B (data from ASM handbooks), stored copies (density, E, CTE); strengths and k from memory" },
  { code: "C36000", name: "C36000 free-cutting brass, H02", density_kg_m3: 8500, yield_MPa: 310, tensile_MPa: 400, shear_MPa: 235, expansion_per_K: 20.5e-6, typical: true, source: "Callister, Fundamentals of Materials Science and Engineering, appendix B (data from ASM handbooks), stored copies (density, CTE); rest from memory" },
  { code: "PLA", name: "PLA", density_kg_m3: 1250, yield_MPa: null, tensile_MPa: 53, shear_MPa: null, expansion_per_K: 68e-6, typical: true, source: "Processes 13(9) 2733 (2025), materials section (density, UTS, E); that paper misprints Tg as 137; Tg 55..65 from a second stored table; CTE from memory" },
  { code: "PETG", name: "PETG", density_kg_m3: 1270, yield_MPa: null, tensile_MPa: 50, shear_MPa: null, expansion_per_K: 60e-6, typical: true, source: "Processes 13(9) 2733 (2025); CTE from memory" },
  { code: "ABS", name: "ABS", density_kg_m3: 1040, yield_MPa: null, tensile_MPa: 40, shear_MPa: null, expansion_per_K: 90e-6, typical: true, source: "Processes 13(9) 2733 (2025); CTE from memory" },
  { code: "ASA", name: "ASA", density_kg_m3: 1070, yield_MPa: null, tensile_MPa: 45, shear_MPa: null, expansion_per_K: 95e-6, typical: true, source: "from memory" },
  { code: "PA12", name: "PA12, laser sintered", density_kg_m3: 950, yield_MPa: null, tensile_MPa: 48, shear_MPa: null, expansion_per_K: 109e-6, typical: true, source: "from memory (part density 0.93..1.01 by process)" },
  { code: "PA12-CF", name: "PA12-CF, laser sintered XY", density_kg_m3: 1100, yield_MPa: 52, tensile_MPa: 65, shear_MPa: null, expansion_per_K: null, typical: true, source: "mid-points of a stored additive-manufacturing table: UTS 58..72 XY, 46..58 Z; E 5..6; yield 46..58 XY" },
  { code: "PA-CF filament", name: "PA-CF filament, XY dry", density_kg_m3: 1150, yield_MPa: null, tensile_MPa: 85, shear_MPa: null, expansion_per_K: null, typical: true, source: "from memory, wide spread 60..110 MPa" },
  { code: "resin", name: "photopolymer resin, general purpose, post-cured", density_kg_m3: 1180, yield_MPa: null, tensile_MPa: 60, shear_MPa: null, expansion_per_K: 90e-6, typical: true, source: "from memory, wide spread" },
];
