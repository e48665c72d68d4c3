import type { Knex } from 'knex';
import { toAsset, type Asset, type AssetRow } from '../rows';

export const assets = (db: Knex) => {
  const table = (labId: string) => db<AssetRow>('assets').where({ lab_id: labId });
  return {
    async find(labId: string, sha256: string): Promise<Asset | null> {
      const row = await table(labId).andWhere({ sha256 }).first();
      return row ? toAsset(row) : null;
    },
    async list(labId: string): Promise<Asset[]> {
      return (await table(labId).orderBy('name')).map(toAsset);
    },
    /** Those of the given hashes that belong to this lab. */
    async among(labId: string, hashes: string[]): Promise<Asset[]> {
      return (await table(labId).whereIn('sha256', hashes)).map(toAsset);
    },
    /** Keep a file once per lab; the first upload's name and note stay. */
    async keep(labId: string, asset: Asset, author: string): Promise<Asset> {
      await db<AssetRow>('assets')
        .insert({ lab_id: labId, ...asset, uploaded_by: author })
        .onConflict(['lab_id', 'sha256'])
        .ignore();
      return (await this.find(labId, asset.sha256))!;
    }
  };
};
