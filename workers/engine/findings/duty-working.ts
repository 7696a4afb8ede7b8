import type { Quantity, WorkingStep } from '../../../shared/schemas/working.ts';
import { asymmetryFactor } from '../asymmetry.ts';
import { branchAt, nodeAt } from '../model-parts.ts';
import { comparedCycles, findTestXr, isAsymmetrical } from '../rating-basis.ts';
import { Working } from '../working.ts';
import type { Loading, Rated } from './interrupting-duty.ts';
import type { Screening } from './screening.ts';

/** Writes down the duty of a device: the current, what its X/R adds, and both over the rating. */
export function workDuty(
  { model, study }: Screening,
  device: Rated,
  loading: Loading,
): readonly WorkingStep[] {
  const working = new Working();
  const current = workCurrent(working, device, loading);
  const factor = workFactor();
  const what = device.isClosing ? 'fault-closing' : 'interrupting';
  const rating = working.given(
    'I_r',
    `${what} rating of ${device.id}, from the model`,
    device.interruptingKa,
    'kA',
  );
  working.compute(
    { symbol: 'duty', words: 'current over the rating', unit: '%' },
    'I*F/(I_r*1000)*100',
    [current, factor, rating],
    loading.percent,
  );
  return working.steps;

  function workFactor(): Quantity {
    const { xr, factor: value } = loading;
    if (device.isClosing) return working.given('F', 'closing ratings count symmetrical current', value, '');
    const kv = nodeAt(model, branchAt(model, model.branchIndex.get(device.branch)!)[device.end]).kv;
    const service = { kv, frequencyHz: study.frequencyHz };
    const ratio = working.given('XR', `X/R at ${device.id}, of the fault that counts most`, xr, '');
    const isAsymmetric = isAsymmetrical(device);
    const cycles = isAsymmetric ? 0.5 : comparedCycles(device, service);
    const time = working.given('c', 'cycles after the fault began', cycles, '');
    // Without reactance there is no direct current, and the formula would divide by nothing.
    if (xr <= 0) return working.given('F', 'no direct current without reactance', value, '');
    const here = working.compute(
      {
        symbol: isAsymmetric ? 'F' : 'F_here',
        words: 'rms with direct current over symmetrical, here',
        unit: '',
      },
      'sqrt(1 + 2*exp(-4*3.14159265*c/XR))',
      [time, ratio],
      asymmetryFactor(xr, cycles),
    );
    if (isAsymmetric) return here;
    const test = findTestXr(device, service);
    const words = test.isGiven
      ? 'test X/R, from the model'
      : 'test X/R, the lowest standard value for its kind';
    const tested = working.given('XR_test', words, test.xr, '');
    const atTest = working.compute(
      { symbol: 'F_test', words: 'the same at the test', unit: '' },
      'sqrt(1 + 2*exp(-4*3.14159265*c/XR_test))',
      [time, tested],
      asymmetryFactor(test.xr, cycles),
    );
    const counts = { symbol: 'F', words: 'how many times the current counts, without credit', unit: '' };
    return working.compute(counts, 'max(1, F_here/F_test)', [here, atTest], value);
  }
}

function workCurrent(working: Working, { id }: Rated, { amperes, added }: Loading): Quantity {
  if (!added) return working.given('I', `fault current at ${id}, from its fault currents`, amperes, 'A');
  const bare = working.given('I_bare', `fault current at ${id} without inverters`, added.bareAmperes, 'A');
  const words = 'sum of |Zkm/Zkk| times the current of each inverter, over that current';
  const raise = working.given('u', words, added.raise, '');
  const symbol = { symbol: 'I', words: 'with the currents of inverters added in magnitude', unit: 'A' };
  return working.compute(symbol, 'I_bare*(1 + u)', [bare, raise], amperes);
}
