/** Reads "lat, lng" as people type it: comma or space between, a true minus sign, N/S/E/W letters, ° signs. */
export function readCoordinates(text: string): { lat: number; lng: number } | { error: string } {
  const parts = text
    .replace(/\u2212/g, '-')
    .replace(/°/g, '')
    .trim()
    .split(/\s*[,;]\s*|\s+(?=[-+\d])/)
    .filter((part) => part !== '');
  const [lat, lng] = parts.map(readDegrees);
  if (parts.length !== 2 || lat === undefined || lng === undefined) {
    return {
      error: 'Enter latitude and longitude in degrees with a comma between, for example −34.612, −24.405',
    };
  }
  if (Math.abs(lat) > 90) return { error: `Latitude must be between −90 and 90; this says ${lat}` };
  if (Math.abs(lng) > 180) return { error: `Longitude must be between −180 and 180; this says ${lng}` };
  return { lat, lng };
}

function readDegrees(part: string): number | undefined {
  const match = /^([-+]?\d+(?:\.\d+)?)\s*([NSEW])?$/i.exec(part);
  if (!match) return undefined;
  const value = Number(match[1]);
  return /[SW]/i.test(match[2] ?? '') ? -Math.abs(value) : value;
}
