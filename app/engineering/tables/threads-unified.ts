// Unified inch threads: geometry and limits of class 2A and 2B computed by the formulas of
// ASME B1.1; they reproduce every published row that was seen. Lengths in inch.

export interface UnifiedThread {
  thread: string;
  diameter: number;
  threadsPerInch: number;
  majorMin2A: number;
  pitchMin2A: number;
  minorMax2B: number;
  pitchMax2B: number;
  tapDrill: number;
}

export const unifiedThreads: readonly UnifiedThread[] = [
  { thread: "4-40 UNC", diameter: 0.112, threadsPerInch: 40, majorMin2A: 0.1061, pitchMin2A: 0.0925, minorMax2B: 0.0939, pitchMax2B: 0.0991, tapDrill: 0.0890 },
  { thread: "4-48 UNF", diameter: 0.112, threadsPerInch: 48, majorMin2A: 0.1068, pitchMin2A: 0.0954, minorMax2B: 0.0968, pitchMax2B: 0.1016, tapDrill: 0.0935 },
  { thread: "5-40 UNC", diameter: 0.125, threadsPerInch: 40, majorMin2A: 0.1191, pitchMin2A: 0.1054, minorMax2B: 0.1062, pitchMax2B: 0.1121, tapDrill: 0.1015 },
  { thread: "5-44 UNF", diameter: 0.125, threadsPerInch: 44, majorMin2A: 0.1195, pitchMin2A: 0.107, minorMax2B: 0.1079, pitchMax2B: 0.1134, tapDrill: 0.1040 },
  { thread: "6-32 UNC", diameter: 0.138, threadsPerInch: 32, majorMin2A: 0.1312, pitchMin2A: 0.1141, minorMax2B: 0.114, pitchMax2B: 0.1214, tapDrill: 0.1065 },
  { thread: "6-40 UNF", diameter: 0.138, threadsPerInch: 40, majorMin2A: 0.1321, pitchMin2A: 0.1184, minorMax2B: 0.119, pitchMax2B: 0.1252, tapDrill: 0.1130 },
  { thread: "8-32 UNC", diameter: 0.164, threadsPerInch: 32, majorMin2A: 0.1571, pitchMin2A: 0.1399, minorMax2B: 0.139, pitchMax2B: 0.1475, tapDrill: 0.1360 },
  { thread: "8-36 UNF", diameter: 0.164, threadsPerInch: 36, majorMin2A: 0.1577, pitchMin2A: 0.1424, minorMax2B: 0.142, pitchMax2B: 0.1496, tapDrill: 0.1360 },
  { thread: "10-24 UNC", diameter: 0.19, threadsPerInch: 24, majorMin2A: 0.1818, pitchMin2A: 0.1586, minorMax2B: 0.155, pitchMax2B: 0.1672, tapDrill: 0.1495 },
  { thread: "10-32 UNF", diameter: 0.19, threadsPerInch: 32, majorMin2A: 0.1831, pitchMin2A: 0.1658, minorMax2B: 0.164, pitchMax2B: 0.1736, tapDrill: 0.1590 },
  { thread: "12-24 UNC", diameter: 0.216, threadsPerInch: 24, majorMin2A: 0.2078, pitchMin2A: 0.1845, minorMax2B: 0.181, pitchMax2B: 0.1933, tapDrill: 0.1770 },
  { thread: "12-28 UNF", diameter: 0.216, threadsPerInch: 28, majorMin2A: 0.2085, pitchMin2A: 0.1886, minorMax2B: 0.186, pitchMax2B: 0.197, tapDrill: 0.1820 },
  { thread: "1/4-20 UNC", diameter: 0.25, threadsPerInch: 20, majorMin2A: 0.2408, pitchMin2A: 0.2127, minorMax2B: 0.207, pitchMax2B: 0.2224, tapDrill: 0.2010 },
  { thread: "1/4-28 UNF", diameter: 0.25, threadsPerInch: 28, majorMin2A: 0.2425, pitchMin2A: 0.2225, minorMax2B: 0.22, pitchMax2B: 0.2311, tapDrill: 0.2130 },
  { thread: "5/16-18 UNC", diameter: 0.3125, threadsPerInch: 18, majorMin2A: 0.3026, pitchMin2A: 0.2712, minorMax2B: 0.265, pitchMax2B: 0.2817, tapDrill: 0.2570 },
  { thread: "5/16-24 UNF", diameter: 0.3125, threadsPerInch: 24, majorMin2A: 0.3042, pitchMin2A: 0.2806, minorMax2B: 0.277, pitchMax2B: 0.2902, tapDrill: 0.2720 },
  { thread: "3/8-16 UNC", diameter: 0.375, threadsPerInch: 16, majorMin2A: 0.3643, pitchMin2A: 0.3287, minorMax2B: 0.321, pitchMax2B: 0.3401, tapDrill: 0.3125 },
  { thread: "3/8-24 UNF", diameter: 0.375, threadsPerInch: 24, majorMin2A: 0.3667, pitchMin2A: 0.343, minorMax2B: 0.34, pitchMax2B: 0.3528, tapDrill: 0.3320 },
  { thread: "7/16-14 UNC", diameter: 0.4375, threadsPerInch: 14, majorMin2A: 0.4258, pitchMin2A: 0.385, minorMax2B: 0.376, pitchMax2B: 0.3972, tapDrill: 0.3680 },
  { thread: "7/16-20 UNF", diameter: 0.4375, threadsPerInch: 20, majorMin2A: 0.4282, pitchMin2A: 0.3996, minorMax2B: 0.395, pitchMax2B: 0.4104, tapDrill: 0.3906 },
  { thread: "1/2-13 UNC", diameter: 0.5, threadsPerInch: 13, majorMin2A: 0.4876, pitchMin2A: 0.4435, minorMax2B: 0.434, pitchMax2B: 0.4565, tapDrill: 0.4219 },
  { thread: "1/2-20 UNF", diameter: 0.5, threadsPerInch: 20, majorMin2A: 0.4906, pitchMin2A: 0.4619, minorMax2B: 0.457, pitchMax2B: 0.4731, tapDrill: 0.4531 },
  { thread: "9/16-12 UNC", diameter: 0.5625, threadsPerInch: 12, majorMin2A: 0.5495, pitchMin2A: 0.5016, minorMax2B: 0.49, pitchMax2B: 0.5152, tapDrill: 0.4844 },
  { thread: "9/16-18 UNF", diameter: 0.5625, threadsPerInch: 18, majorMin2A: 0.5524, pitchMin2A: 0.5205, minorMax2B: 0.515, pitchMax2B: 0.5323, tapDrill: 0.5156 },
  { thread: "5/8-11 UNC", diameter: 0.625, threadsPerInch: 11, majorMin2A: 0.6113, pitchMin2A: 0.5589, minorMax2B: 0.546, pitchMax2B: 0.5732, tapDrill: 0.5312 },
  { thread: "5/8-18 UNF", diameter: 0.625, threadsPerInch: 18, majorMin2A: 0.6149, pitchMin2A: 0.5828, minorMax2B: 0.578, pitchMax2B: 0.5949, tapDrill: 0.5781 },
  { thread: "3/4-10 UNC", diameter: 0.75, threadsPerInch: 10, majorMin2A: 0.7353, pitchMin2A: 0.6773, minorMax2B: 0.663, pitchMax2B: 0.6927, tapDrill: 0.6562 },
  { thread: "3/4-16 UNF", diameter: 0.75, threadsPerInch: 16, majorMin2A: 0.7391, pitchMin2A: 0.7029, minorMax2B: 0.696, pitchMax2B: 0.7159, tapDrill: 0.6875 },
  { thread: "7/8-9 UNC", diameter: 0.875, threadsPerInch: 9, majorMin2A: 0.8592, pitchMin2A: 0.7946, minorMax2B: 0.778, pitchMax2B: 0.811, tapDrill: 0.7656 },
  { thread: "7/8-14 UNF", diameter: 0.875, threadsPerInch: 14, majorMin2A: 0.8631, pitchMin2A: 0.8216, minorMax2B: 0.813, pitchMax2B: 0.8356, tapDrill: 0.8125 },
  { thread: "1-8 UNC", diameter: 1.0, threadsPerInch: 8, majorMin2A: 0.983, pitchMin2A: 0.9101, minorMax2B: 0.89, pitchMax2B: 0.9276, tapDrill: 0.8750 },
  { thread: "1-12 UNF", diameter: 1.0, threadsPerInch: 12, majorMin2A: 0.9868, pitchMin2A: 0.9382, minorMax2B: 0.928, pitchMax2B: 0.9535, tapDrill: 0.9219 },
];
