import { isoOf } from '#shared/time/iso-of.ts';
import type { Ingest } from '../ingest/ingest-port.ts';
import type { Telemetry } from '../telemetry/create-telemetry.ts';
import { pageFrom, pageRequest, pageOfWhole } from './page.ts';
import { handlers } from './route.ts';

export function messageHandlers(ingest: Ingest, telemetry: Telemetry) {
  return handlers({
    listMessages: async ({ params, query }) =>
      pageOfWhole(
        ingest.recentMessages(params.deviceId).map(({ receivedMs, ...message }) => ({ ...message, at: isoOf(receivedMs) })),
        query,
      ),
    listRejects: async ({ params, query }) => {
      const rows = await telemetry.listRejects(params.deviceId, pageRequest(query));
      return pageFrom(
        rows,
        query,
        (row) => ({ key: row.seq, id: '' }),
        ({ seq, topic, reason, payload, receivedMs }) => ({ seq, topic, reason, payload, at: isoOf(receivedMs) }),
      );
    },
  });
}
