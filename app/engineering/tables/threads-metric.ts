// Metric ISO threads: geometry by ISO 724 and ISO 68-1, limits of class 6g and 6H by ISO 965-1.
// 6g limits of M2 to M6 and M10 agree with a stored copy of ISO 965; other 6g and all 6H tolerance
// values are from memory of ISO 965-1. Lengths in mm.

export interface MetricThread {
  thread: string;
  diameter: number;
  pitch: number;
  /** Least major and least pitch diameter of the screw, class 6g. */
  majorMin6g: number;
  pitchMin6g: number;
  /** Largest minor and largest pitch diameter of the tapped hole, class 6H. */
  minorMax6H: number;
  pitchMax6H: number;
  tapDrill: number;
}

export const metricThreads: readonly MetricThread[] = [
  { thread: "M2x0.4", diameter: 2, pitch: 0.4, majorMin6g: 1.886, pitchMin6g: 1.654, minorMax6H: 1.679, pitchMax6H: 1.83, tapDrill: 1.6 },
  { thread: "M2.5x0.45", diameter: 2.5, pitch: 0.45, majorMin6g: 2.38, pitchMin6g: 2.117, minorMax6H: 2.138, pitchMax6H: 2.303, tapDrill: 2.05 },
  { thread: "M3x0.5", diameter: 3, pitch: 0.5, majorMin6g: 2.874, pitchMin6g: 2.58, minorMax6H: 2.599, pitchMax6H: 2.775, tapDrill: 2.5 },
  { thread: "M3.5x0.6", diameter: 3.5, pitch: 0.6, majorMin6g: 3.354, pitchMin6g: 3.004, minorMax6H: 3.01, pitchMax6H: 3.222, tapDrill: 2.9 },
  { thread: "M4x0.7", diameter: 4, pitch: 0.7, majorMin6g: 3.838, pitchMin6g: 3.433, minorMax6H: 3.422, pitchMax6H: 3.663, tapDrill: 3.3 },
  { thread: "M5x0.8", diameter: 5, pitch: 0.8, majorMin6g: 4.826, pitchMin6g: 4.361, minorMax6H: 4.334, pitchMax6H: 4.605, tapDrill: 4.2 },
  { thread: "M6x1", diameter: 6, pitch: 1, majorMin6g: 5.794, pitchMin6g: 5.212, minorMax6H: 5.153, pitchMax6H: 5.5, tapDrill: 5 },
  { thread: "M8x1.25", diameter: 8, pitch: 1.25, majorMin6g: 7.76, pitchMin6g: 7.042, minorMax6H: 6.912, pitchMax6H: 7.348, tapDrill: 6.8 },
  { thread: "M8x1", diameter: 8, pitch: 1, majorMin6g: 7.794, pitchMin6g: 7.212, minorMax6H: 7.153, pitchMax6H: 7.5, tapDrill: 7 },
  { thread: "M10x1.5", diameter: 10, pitch: 1.5, majorMin6g: 9.732, pitchMin6g: 8.862, minorMax6H: 8.676, pitchMax6H: 9.206, tapDrill: 8.5 },
  { thread: "M10x1.25", diameter: 10, pitch: 1.25, majorMin6g: 9.76, pitchMin6g: 9.042, minorMax6H: 8.912, pitchMax6H: 9.348, tapDrill: 8.8 },
  { thread: "M10x1", diameter: 10, pitch: 1, majorMin6g: 9.794, pitchMin6g: 9.212, minorMax6H: 9.153, pitchMax6H: 9.5, tapDrill: 9 },
  { thread: "M12x1.75", diameter: 12, pitch: 1.75, majorMin6g: 11.701, pitchMin6g: 10.679, minorMax6H: 10.441, pitchMax6H: 11.063, tapDrill: 10.2 },
  { thread: "M12x1.5", diameter: 12, pitch: 1.5, majorMin6g: 11.732, pitchMin6g: 10.854, minorMax6H: 10.676, pitchMax6H: 11.216, tapDrill: 10.5 },
  { thread: "M12x1.25", diameter: 12, pitch: 1.25, majorMin6g: 11.76, pitchMin6g: 11.028, minorMax6H: 10.912, pitchMax6H: 11.368, tapDrill: 10.8 },
  { thread: "M14x2", diameter: 14, pitch: 2, majorMin6g: 13.682, pitchMin6g: 12.503, minorMax6H: 12.21, pitchMax6H: 12.913, tapDrill: 12 },
  { thread: "M14x1.5", diameter: 14, pitch: 1.5, majorMin6g: 13.732, pitchMin6g: 12.854, minorMax6H: 12.676, pitchMax6H: 13.216, tapDrill: 12.5 },
  { thread: "M16x2", diameter: 16, pitch: 2, majorMin6g: 15.682, pitchMin6g: 14.503, minorMax6H: 14.21, pitchMax6H: 14.913, tapDrill: 14 },
  { thread: "M16x1.5", diameter: 16, pitch: 1.5, majorMin6g: 15.732, pitchMin6g: 14.854, minorMax6H: 14.676, pitchMax6H: 15.216, tapDrill: 14.5 },
  { thread: "M18x2.5", diameter: 18, pitch: 2.5, majorMin6g: 17.623, pitchMin6g: 16.164, minorMax6H: 15.744, pitchMax6H: 16.6, tapDrill: 15.5 },
  { thread: "M18x1.5", diameter: 18, pitch: 1.5, majorMin6g: 17.732, pitchMin6g: 16.854, minorMax6H: 16.676, pitchMax6H: 17.216, tapDrill: 16.5 },
  { thread: "M20x2.5", diameter: 20, pitch: 2.5, majorMin6g: 19.623, pitchMin6g: 18.164, minorMax6H: 17.744, pitchMax6H: 18.6, tapDrill: 17.5 },
  { thread: "M20x1.5", diameter: 20, pitch: 1.5, majorMin6g: 19.732, pitchMin6g: 18.854, minorMax6H: 18.676, pitchMax6H: 19.216, tapDrill: 18.5 },
  { thread: "M22x2.5", diameter: 22, pitch: 2.5, majorMin6g: 21.623, pitchMin6g: 20.164, minorMax6H: 19.744, pitchMax6H: 20.6, tapDrill: 19.5 },
  { thread: "M22x1.5", diameter: 22, pitch: 1.5, majorMin6g: 21.732, pitchMin6g: 20.854, minorMax6H: 20.676, pitchMax6H: 21.216, tapDrill: 20.5 },
  { thread: "M24x3", diameter: 24, pitch: 3, majorMin6g: 23.577, pitchMin6g: 21.803, minorMax6H: 21.252, pitchMax6H: 22.316, tapDrill: 21 },
  { thread: "M24x2", diameter: 24, pitch: 2, majorMin6g: 23.682, pitchMin6g: 22.493, minorMax6H: 22.21, pitchMax6H: 22.925, tapDrill: 22 },
];
