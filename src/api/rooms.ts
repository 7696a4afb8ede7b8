import type { RoomView } from '../../shared/schemas/rooms.ts';
import { getJson, sendJson } from './client.ts';

const at = (code: string) => `/api/models/${encodeURIComponent(code)}/room`;

export const getRoom = async (code: string) => (await getJson<{ room: RoomView | null }>(at(code))).room;
export const askForRoom = (code: string) => sendJson<RoomView>('POST', at(code), {});
