import { inTransaction, type Database } from '../../db/connection.ts';
import { insertBlob } from '../../db/repositories/blobs.ts';
import { insertModelNodes } from '../../db/repositories/model-nodes.ts';
import { insertPublishedVersion } from '../../db/repositories/model-versions.ts';
import { findNetworkModel, insertNetworkModel } from '../../db/repositories/network-models.ts';
import { saveSetting } from '../../db/repositories/settings.ts';
import { makeDemoAddresses } from '../../db/seeds/demo/addresses.ts';
import { makeDemoModels, type DemoModel } from '../../db/seeds/demo/feeders.ts';
import { makeDemoMap } from '../../db/seeds/demo/map.ts';
import { walkFeeder } from './walk-feeder.ts';

async function plantModel(db: Database, model: DemoModel, publishedAt: Date): Promise<void> {
  await inTransaction(db, async (trx) => {
    if (await findNetworkModel(trx, model.code)) return;
    const [lng, lat] = model.place;
    const { code, name, substation } = model;
    const modelId = await insertNetworkModel(trx, { code, name, substation, lng, lat });
    const modelSha256 = await insertBlob(trx, Buffer.from(JSON.stringify(model.content)));
    const version = { modelId, number: 1, modelSha256, absorbs: [], publishedBy: null, publishedAt };
    const versionId = await insertPublishedVersion(trx, version);
    await insertModelNodes(trx, versionId, walkFeeder(model.content.feeder));
  });
}

/** The demo's map, addresses and network models. */
export async function plantTerritory(db: Database, publishedAt: Date): Promise<void> {
  await saveSetting(db, 'map.layers', makeDemoMap());
  await saveSetting(db, 'map.addresses', makeDemoAddresses());
  for (const model of makeDemoModels()) await plantModel(db, model, publishedAt);
}
