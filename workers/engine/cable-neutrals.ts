import type { ConcentricCable, TapeCable } from '../../shared/schemas/study.ts';
import type { Wire } from './line-constants.ts';
import {
  conductorSizes,
  kmPerMile,
  metresPerInch,
  metresPerMil,
  outsideDiameterM,
  tapeSizes,
} from './line-units.ts';

/*
 * What lies around a cable's core, taken as one wire (W. H. Kersting, Distribution System Modeling and Analysis, 4.2;
 * value from memory, confirmed by the matrices of the IEEE test feeders).
 */

type Ring = Pick<Wire, 'ohmPerKm' | 'gmrM' | 'ringRadiusM'>;

/**
 * Takes k strands on a circle of radius R = (outside diameter − strand diameter)/2 as one wire of
 * r = r_strand/k and GMR = (GMR_strand·k·R^(k−1))^(1/k).
 * 13 strands #14 in 1.29 in: R 0.051079 ft, GMR 0.048640 ft, 1.14402 ohms per mile.
 */
export function bundleStrands(cable: ConcentricCable): Ring {
  const { strands } = cable;
  const { ohmPerKm, gmrM, diameterM } = conductorSizes(cable.strand);
  const ringRadiusM = (outsideDiameterM(cable) - diameterM) / 2;
  // Through logarithms, since R^(k−1) of many strands is too small a number to hold.
  const logarithm = Math.log(gmrM * strands) + (strands - 1) * Math.log(ringRadiusM);
  return { ohmPerKm: ohmPerKm / strands, gmrM: Math.exp(logarithm / strands), ringRadiusM };
}

/** Ohms per mile of a copper tape at 50 °C, times diameter in inches and thickness in mils. */
const tapeOhmInchMil = 18.826;

/**
 * Takes a copper tape of thickness T and outside diameter d as one wire of r = 18.826/(d·T) ohms per mile (d in inches, T
 * in mils) and GMR = (d − T)/2, the radius of its middle. 0.88 in, 5 mils: 4.27864 ohms per mile, 0.036458 ft.
 */
export function rollTape(cable: TapeCable): Ring {
  const { shieldDiameterM, tapeThicknessM } = tapeSizes(cable);
  const ohmPerMile = tapeOhmInchMil / ((shieldDiameterM / metresPerInch) * (tapeThicknessM / metresPerMil));
  const gmrM = (shieldDiameterM - tapeThicknessM) / 2;
  return { ohmPerKm: ohmPerMile / kmPerMile, gmrM, ringRadiusM: gmrM };
}
