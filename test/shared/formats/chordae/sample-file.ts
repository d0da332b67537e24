/** A small tree file with every kind of content, as a plain value that tests may change. */
// biome-ignore lint/suspicious/noExplicitAny: tests break it on purpose, in every place.
export function sampleFile(): any {
  return {
    format: "chordae-trees",
    version: 1,
    unit: "mm",
    frame: "LPS",
    volume: {
      name: "HB-07",
      sha256: "ab".repeat(32),
      dtype: "uint16",
      size: [10, 20, 30],
      spacing: [0.04, 0.04, 0.04],
      origin: [0, 0, 0],
      direction: [1, 0, 0, 0, 1, 0, 0, 0, 1],
      handedness: "confirmed",
      blurFwhm: 0.07,
      scanner: { note: "kept" },
    },
    specimen: { species: "porcine", pressure: 100, state: "closed" },
    annotator: "AN-1",
    pass: 1,
    created: "2026-12-01T09:00:00Z",
    software: { name: "Tautline", version: "0.1.0" },
    radii: "blur-corrected",
    project: "kept too",
    trees: [
      {
        id: "t1",
        name: "ALPM-03",
        root: "n1",
        colour: "kept",
        nodes: [
          { id: "n1", kind: "origin", site: "head", muscle: "antero-lateral", head: 1, position: [0, 0, 0] },
          { id: "n2", kind: "fork", position: [0, 0, 4], certainty: "doubtful", support: 3 },
          { id: "n3", kind: "insertion", position: [1, 0, 8], leaflet: "anterior", segment: "A2", zone: "rough", cleft: false },
          { id: "n4", kind: "ruptured", position: [-1, 0, 8] },
        ],
        strands: [
          {
            id: "s1",
            from: "n1",
            to: "n2",
            strut: true,
            certainty: "sure",
            points: [
              [0, 0, 0],
              [0.1, 0, 2],
              [0, 0, 4],
            ],
            radii: [0.5, null, 0.4],
            via: [[0.1, 0, 2]],
            legs: ["guide", "straight"],
            madeBy: [
              [0, 1, "guide"],
              [1, 2, "straight"],
            ],
            imageFit: 0.93,
            spread: [0.1],
          },
          { id: "s2", from: "n3", to: "n2", via: [[0.5, 0, 6]] },
          {
            id: "s3",
            from: "n2",
            to: "n4",
            points: [
              [0, 0, 4],
              [-1, 0, 8],
            ],
          },
        ],
      },
    ],
    crossLinks: [
      {
        id: "x1",
        from: "n3",
        to: "n4",
        points: [
          [1, 0, 8],
          [-1, 0, 8],
        ],
        radii: [0.1, 0.1],
      },
    ],
    landmarks: {
      annulus: {
        closed: true,
        points: [
          [0, 0, 10],
          [5, 0, 10],
        ],
      },
      commissures: [[5, 5, 10]],
      muscleHeads: [{ muscle: "antero-lateral", head: 1, position: [0, 0, 0] }],
      sutures: [[1, 1, 1]],
    },
  };
}
