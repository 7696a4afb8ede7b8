import type { CompleteAnswers } from '../../shared/schemas/answers.ts';

/* Answers that can be handed in as they are, for the feeder and the equipment of the fixture world. */

const project = {
  name: 'Saltwick barn roofs',
  contactName: 'Ada Brenn',
  contactEmail: 'ada@saltwick.example',
};

/** 60 m east of n2, in three phases. */
const nearN2 = { lat: 42.02, lng: -30.9993 };

/** 1 MVA of solar behind a transformer that keeps the zero sequence apart. */
export function solarAnswers(): CompleteAnswers {
  return {
    project,
    site: nearN2,
    equipment: { units: [{ source: 'record', equipmentId: 'solar', count: 2 }] },
    connection: {
      phases: 'ABC',
      transformer: {
        rating: { source: 'record', equipmentId: 'lowTransformer' },
        windings: 'Dyn1',
        utilityNeutral: { kind: 'ungrounded' },
        siteNeutral: { kind: 'solid' },
      },
    },
    papers: { files: [] },
  };
}

/** A 2.5 MVA synchronous machine. */
export function biogasAnswers(): CompleteAnswers {
  return {
    project: { ...project, name: 'Oxmere biogas' },
    site: nearN2,
    equipment: { units: [{ source: 'record', equipmentId: 'biogas', count: 1 }], exportKw: 1500 },
    connection: {
      phases: 'ABC',
      transformer: {
        rating: { source: 'record', equipmentId: 'mediumTransformer' },
        windings: 'YNd1',
        utilityNeutral: { kind: 'impedance', rOhm: 0, xOhm: 5 },
        siteNeutral: { kind: 'ungrounded' },
      },
      machineNeutral: { kind: 'ungrounded' },
    },
    papers: { files: [] },
  };
}

/** A roof on the one-phase lateral. */
export function rooftopAnswers(): CompleteAnswers {
  return {
    project: { ...project, name: 'Fellow house roof' },
    site: { lat: 42.0201, lng: -31.01, address: '4 Lateral Lane' },
    equipment: { units: [{ source: 'record', equipmentId: 'rooftop', count: 1 }] },
    connection: { phases: 'one' },
    papers: { files: [] },
  };
}
