import { describe, expect, it } from 'vitest';
import type { Substation } from '../../../../shared/schemas/study-utility.ts';
import { ask, closeTie, inverterStudy, limitAt, machineStudy } from './island-studies.ts';

const question = ['high-side-float'] as const;

/** The 2 MVA plant behind the bank of Marrow Lane, whose delta is on the high side. */
const behind = (
  substation: Partial<Substation>,
  change: Parameters<typeof inverterStudy>[0] = () => undefined,
) =>
  inverterStudy((study) => {
    study.feeder.substations = [{ id: 'Marrow', transformer: 'bank', ...substation }];
    change(study);
  });

describe('The high side of the substation', () => {
  it('cannot float for long where nothing flows back', () => {
    const [finding] = ask(behind({ minimumKw: 4000 }), question);
    expect(finding).toMatchObject({ verdict: 'within', element: 'Marrow', value: 50, before: 0, limit: 100 });
  });

  it('is for a study where power may flow back and nothing trips the bank', () => {
    const [finding] = ask(behind({ minimumKw: 1600, zeroSequenceVoltageProtection: false }), question);
    expect(finding).toMatchObject({ verdict: 'outside', value: 125, consequence: 'study' });
    expect(finding!.note).toContain('there is no zero-sequence voltage protection');
  });

  it('is for a study at exactly the minimum load, the limit being strict', () => {
    expect(ask(behind({ minimumKw: 2000 }), question)[0]).toMatchObject({ verdict: 'outside', value: 100 });
    expect(ask(behind({ minimumKw: 2000 }), question, limitAt(100))[0]!.verdict).toBe('within');
  });

  it('is looked after by zero-sequence voltage protection', () => {
    const study = behind({ minimumKw: 1600, zeroSequenceVoltageProtection: true });
    expect(ask(study, question)[0]).toMatchObject({ verdict: 'within', value: null });
  });

  it('stays earthed by itself as an earthed star over a delta, and as no other', () => {
    const connected = (connection: string, neutralFrom?: 'ungrounded') =>
      ask(
        behind({ minimumKw: 1600 }, ({ feeder }) => {
          Object.assign(feeder.transformers![0]!, { connection, ...(neutralFrom ? { neutralFrom } : {}) });
        }),
        question,
      )[0]!.verdict;
    expect(connected('YNd1')).toBe('not-applicable');
    expect(connected('YNd1', 'ungrounded')).toBe('outside');
    expect(connected('YNyn0')).toBe('outside');
    expect(connected('Dyn1')).toBe('outside');
  });

  it('reads the connection from the substation where the model has no bank, and counts all that the model has', () => {
    const bare = (connection?: string) =>
      inverterStudy(({ feeder }) => {
        delete feeder.transformers;
        feeder.nodes = feeder.nodes.filter(({ id }) => id !== 'grid');
        feeder.sources![0]!.node = 'bus';
        feeder.inverters = [{ id: 'old', node: 'mid', phases: 'ABC', kva: 400, faultCurrentPu: 1.2 }];
        feeder.substations = [{ id: 'Marrow', minimumKw: 2000, ...(connection ? { connection } : {}) }];
      });
    expect(ask(bare('Dyn1'), question)[0]).toMatchObject({ verdict: 'outside', value: 120, before: 20 });
    expect(ask(bare('YNd11'), question)[0]!.verdict).toBe('not-applicable');
    expect(ask(bare(), question)[0]!.note).toContain('How its high side is connected is not known');
  });

  it('is for a study where power is known to flow back though the minimum is not, and else needs data', () => {
    expect(ask(behind({ reverseFlow: true }), question)[0]!.verdict).toBe('outside');
    expect(ask(behind({}), question)[0]!.verdict).toBe('needs-data');
    expect(ask(inverterStudy(), question)[0]!.verdict).toBe('needs-data');
  });

  it('calls for a study where a closed tie leaves another way past the bank', () => {
    const [finding] = ask(behind({ minimumKw: 4000 }, closeTie), question);
    expect(finding).toMatchObject({ verdict: 'needs-data', consequence: 'study' });
  });

  it('does not apply where nothing generates', () => {
    expect(
      ask(
        machineStudy(({ project }) => delete project.machines),
        question,
      )[0]!.verdict,
    ).toBe('not-applicable');
  });
});
