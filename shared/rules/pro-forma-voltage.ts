import type { RuleSet } from '../schemas/rule-sets.ts';

/** Rules for voltage, flow and service. */
export const voltageRules = {
  'steady-voltage': {
    stage: 'engineering',
    // The rise at the point of interconnection.
    limits: [{ limit: 3, comparison: '<=', consequence: 'study' }],
    unit: '%',
    source: 'rise at the point of interconnection: common practice, no source',
    readOrMemory: 'memory',
    sizeBasis: 'export',
    parameters: {
      // Over nominal; a node up to this voltage is taken for a service, one above it for primary.
      serviceUpToKv: 0.6,
      serviceLowPu: 0.95,
      serviceHighPu: 1.05,
      primaryLowPu: 0.975,
      primaryHighPu: 1.05,
      rangeSource: 'ANSI C84.1, range A (values from memory)',
    },
  },
  'rapid-voltage-change': {
    stage: 'engineering',
    limits: [{ limit: 3, comparison: '<=', consequence: 'study' }],
    unit: '%',
    source: 'IEEE 1547-2018 7.2.2, medium voltage (value from memory)',
    readOrMemory: 'memory',
    sizeBasis: 'nameplate',
    parameters: {
      lowVoltageUpToKv: 1,
      lowVoltageLimitPercent: 5,
      lowVoltageSource: 'IEEE 1547-2018 7.2.2, low voltage (value from memory)',
      // What a passing cloud takes from photovoltaics within seconds, over nameplate.
      rampShare: 0.8,
      rampSource: 'IEEE 1547-2018 7.2.2 (value from memory); size of the ramp: common practice, no source',
      // Energising is rare: at most four times a day.
      // A first peak of twelve times the rated current is about four times in its fundamental.
      inrushMultiple: 4,
      energisationLimitPercent: 5,
      energisationSource:
        'IEEE 1453, at most four changes a day (value from memory); inrush: common practice, no source',
    },
  },
  'reverse-flow': {
    stage: 'engineering',
    limits: [{ limit: 100, comparison: '<=', consequence: 'study' }],
    unit: '%',
    source: 'ratings of the equipment: common practice, no source',
    readOrMemory: 'memory',
    sizeBasis: 'export',
  },
  service: {
    stage: 'engineering',
    // Generation on the service transformer over its kVA, and the fault current at the panel over its rating.
    limits: [{ limit: 100, comparison: '<=', consequence: 'study' }],
    unit: '%',
    source: 'ratings of the equipment: common practice, no source',
    readOrMemory: 'memory',
    sizeBasis: 'export',
    parameters: {
      // A project without a transformer of its own hangs from a service transformer up to this size.
      ownConnectionAboveKva: 50,
      riseLimitPercent: 3,
      riseSource: 'rise on secondary and service drop: common practice, no source',
      // Current of a fault from line to the middle of a 120/240 V transformer, over that between the lines.
      halfWindingFactor: 1.5,
      panelSource: 'rating of the panel; current from line to the middle: common practice, no source',
    },
  },
} satisfies RuleSet['rules'];
