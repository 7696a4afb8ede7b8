import type { Finding } from '../../../shared/schemas/findings.ts';
import type { Section } from '../../../shared/schemas/study.ts';
import { answer, judge } from './judge.ts';
import type { Screening } from './screening.ts';
import { findCutOff } from './upstream.ts';

/**
 * Is all generation small against the peak load of each line section?
 * For every section that the point of interconnection lies in, all generation beyond its device over its peak load; the
 * worst decides, and each section without a known peak is a finding of its own.
 */
export function answerSectionPeakLoad(screening: Screening): Finding[] {
  const { study, upstream, model } = screening;
  const deviceOf = new Map((study.feeder.devices ?? []).map((device) => [device.id, device]));
  const onPath = new Set(upstream.branches);
  const findings = (study.feeder.sections ?? []).flatMap((section) => {
    const branch = model.branchIndex.get(deviceOf.get(section.device)!.branch)!;
    return onPath.has(branch) ? [judgeSection(screening, section, branch)] : [];
  });
  if (findings.length === 0) {
    const note =
      'No line section with a known device lies between the source and the point of interconnection.';
    return [answer(screening, 'section-peak-load', 'needs-data', { note })];
  }
  const measured = findings.filter((finding) => finding.value !== null).sort((p, q) => q.value! - p.value!);
  return [...measured.slice(0, 1), ...findings.filter((finding) => finding.value === null)];
}

function judgeSection(screening: Screening, section: Section, branch: number): Finding {
  const element = section.id;
  const cutOff = findCutOff(screening.upstream, screening.poi, branch);
  if (!cutOff) {
    const note = 'The section has another way to a source, so its device does not bound it.';
    // A closed tie is no gap in the records: whatever the rule says of a peak that is not known, this takes a study.
    return {
      ...answer(screening, 'section-peak-load', 'needs-data', { element, note }),
      consequence: 'study',
    };
  }
  if (!section.peakKw) {
    return answer(screening, 'section-peak-load', 'needs-data', {
      element,
      note: 'Its peak load is not known.',
    });
  }
  const connected = sumGeneration(screening, cutOff, 'feeder');
  const proposed = sumGeneration(screening, cutOff, 'project');
  return judge(screening, 'section-peak-load', {
    element,
    value: ((connected + proposed) / section.peakKw) * 100,
    before: (connected / section.peakKw) * 100,
    note: `${kilowatts(connected)} connected or ahead and ${kilowatts(proposed)} of the project, against a peak of ${kilowatts(section.peakKw)}.`,
  });
}

/** Total size of the generators in an area, on the rule set's basis. */
function sumGeneration(
  { study, project, model, ruleSet }: Screening,
  area: Uint8Array,
  of: 'feeder' | 'project',
): number {
  const { machines = [], inverters = [] } = of === 'feeder' ? study.feeder : project;
  const basis = ruleSet.rules['section-peak-load'].sizeBasis;
  let total = 0;
  for (const { node, kva, exportKw } of [...machines, ...inverters]) {
    if (area[model.nodeIndex.get(node)!]) total += basis === 'export' ? (exportKw ?? kva) : kva;
  }
  return total;
}

function kilowatts(size: number): string {
  return `${Number(size.toFixed(1))} kW`;
}
