import type { Device } from '../../shared/schemas/study.ts';
import { asymmetryFactor } from './asymmetry.ts';

/*
 * What a rating means where X/R at the device is not that of the test. All test values are from memory: breakers
 * IEEE C37.04/C37.09 (45 ms, which is 17 at 60 Hz and 14 at 50 Hz), reclosers C37.60, cutouts C37.42, breakers at low
 * voltage UL 489.
 */

const upToKv = 1;
const lowestTestXr: Readonly<Record<string, number>> = { recloser: 8, fuse: 8 };
const lowestOfAny = 8;
const lowestAtLowVoltage = 1.73;
const breakerTimeConstantS = 0.045;

/** Where a device stands: at which voltage and frequency. */
export type Service = { kv: number; frequencyHz: number };

/** Relay half a cycle, opening one and a half: a breaker of three cycles parts its contacts then (value from memory). */
const usualPartingCycles = 2;

/** Gives the X/R that a device was tested at: its own, or the lowest standard value for its kind. */
export function findTestXr(device: Device, { kv, frequencyHz }: Service): { xr: number; isGiven: boolean } {
  if (device.testXr !== undefined) return { xr: device.testXr, isGiven: true };
  if (kv <= upToKv) return { xr: lowestAtLowVoltage, isGiven: false };
  if (isBreaker(device)) {
    return { xr: Math.round(2 * Math.PI * frequencyHz * breakerTimeConstantS), isGiven: false };
  }
  return { xr: lowestTestXr[device.kind.toLowerCase()] ?? lowestOfAny, isGiven: false };
}

/**
 * Gives by what a symmetrical fault current counts more against the rating than it is. A symmetrical rating holds up to its
 * test X/R; above, currents are compared with their direct current in: that factor at the fault over that at the test,
 * when a breaker's contacts part (C37.010), else half a cycle after the fault began. There is no credit below the test
 * X/R. A rating that is asymmetrical itself meets the current of the first half cycle as it is.
 * Example: a fuse tested at 8 counts X/R 20 as 1.5687/1.3827 = 1.1345.
 */
export function ratingFactor(device: Device, service: Service, xr: number): number {
  if (isAsymmetrical(device)) return asymmetryFactor(xr);
  const cycles = comparedCycles(device, service);
  const tested = asymmetryFactor(findTestXr(device, service).xr, cycles);
  return Math.max(1, asymmetryFactor(xr, cycles) / tested);
}

/** How many cycles after the fault began currents are compared. */
export function comparedCycles(device: Device, { kv }: Service): number {
  return isBreaker(device) && kv > upToKv ? usualPartingCycles : 0.5;
}

export function isAsymmetrical({ ratingBasis }: Device): boolean {
  return ratingBasis === 'asymmetrical';
}

function isBreaker({ kind }: Device): boolean {
  return kind.toLowerCase() === 'breaker';
}
