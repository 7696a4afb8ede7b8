import { makeDemoCircuits } from './feeders.ts';
import { nearestSettlement } from './parcels.ts';
import { toLngLat } from './plane.ts';
import { makeDice } from './random.ts';

export interface DemoAddress {
  label: string;
  lat: number;
  lng: number;
}

const wanted = 156;

/** Invented addresses beside poles of the demo's feeders; house numbers follow the poles along each street. */
export function makeDemoAddresses(): DemoAddress[] {
  const dice = makeDice(1873);
  const poles = makeDemoCircuits().flatMap((circuit) => circuit.poles);
  const countByStreet = new Map<string, number>();
  const addresses = poles.map(({ street, point }) => {
    const count = (countByStreet.get(street) ?? 0) + dice.whole(1, 4);
    countByStreet.set(street, count);
    const [lng, lat] = toLngLat([point[0] + 0.02, point[1] + 0.022]);
    return { label: `${count} ${street}, ${nearestSettlement(point)}`, lat, lng };
  });
  const every = poles.length / wanted;
  const chosen = Array.from({ length: wanted }, (_, i) => addresses[Math.floor(i * every)]);
  return chosen.filter((address) => address !== undefined).sort((a, b) => (a.label < b.label ? -1 : 1));
}
