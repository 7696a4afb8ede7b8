import type { BareConductor, ConcentricCable, Place, TapeCable } from '../../shared/schemas/study.ts';

/* A file may give sizes in metric or in US units; the engine computes in metres and ohms per km. */

export const kmPerMile = 1.609344;
export const metresPerFoot = 0.3048;
export const metresPerInch = 0.0254;
export const metresPerMil = metresPerInch / 1000;

export function conductorSizes(given: BareConductor): { ohmPerKm: number; gmrM: number; diameterM: number } {
  if ('ohmPerKm' in given) return given;
  return {
    ohmPerKm: given.ohmPerMile / kmPerMile,
    gmrM: given.gmrFt * metresPerFoot,
    diameterM: given.diameterIn * metresPerInch,
  };
}

export function outsideDiameterM(cable: ConcentricCable): number {
  return 'outsideDiameterM' in cable ? cable.outsideDiameterM : cable.outsideDiameterIn * metresPerInch;
}

export function tapeSizes(cable: TapeCable): { shieldDiameterM: number; tapeThicknessM: number } {
  if ('shieldDiameterM' in cable) return cable;
  return {
    shieldDiameterM: cable.shieldDiameterIn * metresPerInch,
    tapeThicknessM: cable.tapeThicknessMil * metresPerMil,
  };
}

export function positionOf(place: Place): { xM: number; yM: number } {
  if ('xM' in place) return place;
  return { xM: place.xFt * metresPerFoot, yM: place.yFt * metresPerFoot };
}
