import type { FastTrack, RuleSet } from '../schemas/rule-sets.ts';

const order792 = 'SGIP 2.1 as amended by Order 792 (value from memory';

/**
 * Fast Track sizes. The federal table as a whole comes from memory. Derived rules that were read have the same numbers:
 * Minnesota's process rows 1, 3 and 4, and Ohio Adm. Code 4901:1-22-07(A) the sizes at any place and 3, 4 and 5 MW on a
 * mainline.
 */
export const fastTrackTable: FastTrack = {
  rows: [
    {
      fromKv: 0,
      belowKv: 5,
      anywhereKw: 500,
      mainlineKw: 500,
      source: `${order792}; read in Minnesota's process)`,
      readOrMemory: 'memory',
    },
    {
      fromKv: 5,
      belowKv: 15,
      anywhereKw: 2000,
      mainlineKw: 3000,
      source: `${order792}; read in Ohio Adm. Code 4901:1-22-07(A))`,
      readOrMemory: 'memory',
    },
    {
      fromKv: 15,
      belowKv: 30,
      anywhereKw: 3000,
      mainlineKw: 4000,
      source: `${order792}; read in Minnesota's process)`,
      readOrMemory: 'memory',
    },
    {
      fromKv: 30,
      belowKv: null,
      anywhereKw: 4000,
      mainlineKw: 5000,
      source: `${order792}; read in Minnesota's process)`,
      readOrMemory: 'memory',
    },
  ],
  mainlineMiles: 2.5,
  machinesKw: 2000,
  maximumKv: 69,
  source: `${order792})`,
  readOrMemory: 'memory',
};

/** Rules for the screens of initial and supplemental review. */
export const screenRules = {
  'fast-track-size': {
    stage: 'initial-review',
    scope: 'the project',
    // The limit is the table's, by voltage and place.
    limits: [{ limit: null, comparison: '<=', consequence: 'study' }],
    unit: 'kW',
    source: fastTrackTable.source,
    readOrMemory: 'memory',
    sizeBasis: 'nameplate',
  },
  jurisdiction: {
    stage: 'initial-review',
    limits: [{ limit: null, comparison: '<=', consequence: 'study' }],
    unit: '',
    source: 'SGIP 2.2.1.1',
    readOrMemory: 'read',
  },
  'section-peak-load': {
    stage: 'initial-review',
    scope: 'each line section that holds the point of interconnection',
    limits: [{ limit: 15, comparison: '<=', consequence: 'supplemental' }],
    unit: '%',
    source: 'SGIP 2.2.1.2',
    readOrMemory: 'read',
    sizeBasis: 'nameplate',
  },
  'spot-network': {
    stage: 'initial-review',
    scope: 'the spot network',
    // The smaller of this and the share of the network's peak load.
    limits: [{ limit: 50, comparison: '<=', consequence: 'supplemental' }],
    unit: 'kW',
    source: 'SGIP 2.2.1.3',
    readOrMemory: 'read',
    sizeBasis: 'nameplate',
    parameters: { sharePercent: 5 },
  },
  'transformer-connection': {
    stage: 'initial-review',
    limits: [{ limit: null, comparison: '<=', consequence: 'supplemental' }],
    unit: '',
    source: 'SGIP 2.2.1.6',
    readOrMemory: 'read',
  },
  'shared-secondary': {
    stage: 'initial-review',
    scope: 'the secondary of the service transformer',
    limits: [{ limit: 20, comparison: '<=', consequence: 'supplemental' }],
    unit: 'kW',
    source: 'SGIP 2.2.1.7',
    readOrMemory: 'read',
    sizeBasis: 'nameplate',
  },
  'centre-tap-balance': {
    stage: 'initial-review',
    scope: 'the project',
    limits: [{ limit: 20, comparison: '<=', consequence: 'supplemental' }],
    unit: '%',
    source: 'SGIP 2.2.1.8',
    readOrMemory: 'read',
  },
  'transient-stability': {
    stage: 'initial-review',
    scope: "the transmission side of the substation's transformer",
    limits: [{ limit: 10, comparison: '<=', consequence: 'supplemental' }],
    unit: 'MW',
    source: 'SGIP 2.2.1.9',
    readOrMemory: 'read',
    sizeBasis: 'nameplate',
  },
  'no-construction': {
    stage: 'initial-review',
    limits: [{ limit: null, comparison: '<=', consequence: 'supplemental' }],
    unit: '',
    source: 'SGIP 2.2.1.10',
    readOrMemory: 'read',
  },
  'minimum-load': {
    stage: 'supplemental-review',
    scope: 'each line section that holds the point of interconnection',
    limits: [{ limit: 100, comparison: '<', consequence: 'study' }],
    unit: '%',
    source: 'SGIP 2.4.4.1 (hours of daytime load from memory)',
    readOrMemory: 'memory',
    sizeBasis: 'nameplate',
  },
  'voltage-quality': {
    stage: 'supplemental-review',
    limits: [{ limit: null, comparison: '<=', consequence: 'study' }],
    unit: '',
    source: 'SGIP 2.4.4.2',
    readOrMemory: 'read',
  },
  'safety-reliability': {
    stage: 'supplemental-review',
    scope: 'the way to the substation and each line section on it',
    limits: [{ limit: 2.5, comparison: '<', consequence: 'study' }],
    unit: 'mi',
    source:
      'SGIP 2.4.4.3 (considerations from memory; the share of one customer is common practice, no source)',
    readOrMemory: 'memory',
    parameters: { largestCustomerSharePercent: 50 },
  },
} satisfies RuleSet['rules'];
