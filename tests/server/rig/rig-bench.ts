import { uuidv7 } from 'uuidv7';
import { createDevices } from '../../../server/devices/create-devices.ts';
import { createProducts } from '../../../server/products/create-products.ts';
import { createHeads, type Heads } from '../../../server/rig/create-heads.ts';
import { createReservoirs, type Reservoirs } from '../../../server/rig/create-reservoirs.ts';
import { reviseSchedule } from '../../../server/schedules/revise-schedule.ts';
import type { Core } from '../../../server/core.ts';
import { addPlace, addSiteRow, addSystemRow, insertRow } from '../../helpers/rows.ts';

export interface RigBench {
  siteId: string;
  systemId: string;
  userId: string;
  pumpId: string;
  probeId: string;
  productId: string;
  heads: Heads;
  reservoirs: Reservoirs;
  /** A site with a system, a pump, a reservoir and a product that have nothing to do with the first. */
  foreign: { siteId: string; systemId: string; pumpId: string; productId: string; reservoirId: string };
  /** Another system of the same site, with a reservoir. */
  neighbour: { systemId: string; reservoirId: string; pumpId: string };
  /** Puts volume into the ledger as a head gives it. */
  give(headId: string, atMs: number, ml: number): Promise<void>;
}

export async function setUpRig(core: Core): Promise<RigBench> {
  const place = await addPlace(core);
  const { siteId, userId } = place;
  const devices = createDevices({ core, disconnect: () => undefined });
  const products = createProducts(core);
  const reservoirs = createReservoirs(core);
  const heads = createHeads(core, { revise: reviseSchedule });

  const device = async (at: { siteId: string; systemId: string }, kind: 'pump' | 'probe') =>
    (await devices.create({ ...at, userId, body: { name: kind, kind } })).value.device.id;
  const product = async (site: string) => {
    const body = {
      name: 'Blend',
      form: 'liquid' as const,
      composition: [{ substance: 'ethanol' as const, percentByVolume: 40 }],
      label: null,
    };
    return (await products.create({ siteId: site, userId, body })).value.id;
  };
  const reservoir = async (at: { siteId: string; systemId: string }) =>
    (await reservoirs.create({ ...at, userId, body: { name: 'Bottle', capacityMl: 500, levelSeriesId: null } })).value.id;

  const foreignSiteId = await addSiteRow(core, 'Quay Road');
  const foreign = { siteId: foreignSiteId, systemId: await addSystemRow(core, foreignSiteId, 'Lobby') };
  const neighbour = { siteId, systemId: await addSystemRow(core, siteId, 'Frag shelf') };

  return {
    ...place,
    heads,
    reservoirs,
    pumpId: await device(place, 'pump'),
    probeId: await device(place, 'probe'),
    productId: await product(siteId),
    foreign: {
      ...foreign,
      pumpId: await device(foreign, 'pump'),
      productId: await product(foreignSiteId),
      reservoirId: await reservoir(foreign),
    },
    neighbour: { systemId: neighbour.systemId, pumpId: await device(neighbour, 'pump'), reservoirId: await reservoir(neighbour) },
    give: (headId, atMs, deltaMl) =>
      insertRow(core, 'doseLedger', {
        siteId,
        systemId: place.systemId,
        sourceKind: 'run',
        sourceId: uuidv7(),
        step: 0,
        headId,
        kind: 'carbon',
        productRevisionId: null,
        atMs,
        deltaMl,
        oxygenDemandMg: null,
        receivedMs: atMs,
      }),
  };
}
