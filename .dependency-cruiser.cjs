/** Who may import whom. The rooms are described in DEVELOPERS.md. */
const client = '^(app|components|hooks|lib|constants)/';

/** @param {string} name @param {string} from @param {string | object} to */
const forbid = (name, from, to) => ({
  name,
  severity: 'error',
  from: typeof from === 'string' ? { path: from } : from,
  to: typeof to === 'string' ? { path: to } : to,
});

/** @type {import('dependency-cruiser').IConfiguration} */
module.exports = {
  forbidden: [
    forbid('no-circular', {}, { circular: true, viaOnly: { dependencyTypesNot: ['type-only'] } }),
    forbid('shared-stands-alone', '^shared/', `^(server|broker|simulators|tests|scripts)/|${client}`),
    forbid('shared-is-pure', '^shared/', {
      path: '^node_modules/(react|express|kysely|better-sqlite3|aedes|mqtt|ws)/|^(fs|path|os|crypto|net|http)$',
    }),
    forbid('client-knows-no-server', client, '^(server|broker|simulators|tests|scripts)/'),
    forbid('lib-is-below-hooks', '^lib/', '^(app|components|hooks)/'),
    forbid('constants-are-lowest', '^constants/', '^(app|components|hooks|lib)/'),
    forbid('hooks-are-below-components', '^hooks/', '^(app|components)/'),
    forbid('components-are-below-app', '^components/', '^app/'),
    forbid('ui-knows-no-feature', '^components/ui/', '^components/(?!ui/)'),
    forbid('charts-know-no-feature', '^components/charts/', '^components/(?!ui/|charts/)'),
    forbid('server-knows-no-client', '^server/', `^(simulators|tests|scripts)/|${client}`),
    forbid(
      'broker-is-assembled-in-one-place',
      { path: '^server/', pathNot: '^server/(context|start-broker|ingest/external-broker)\\.ts$' },
      { path: '^broker/', dependencyTypesNot: ['type-only'] },
    ),
    forbid('broker-knows-no-tables', '^broker/', `^(server|simulators|tests|scripts)/|${client}`),
    forbid('simulators-speak-mqtt-only', '^simulators/', `^(server|broker|tests|scripts)/|${client}`),
    forbid(
      'express-only-at-the-edge',
      { path: '^server/', pathNot: '^server/(api/|http\\.ts$|http/)' },
      { path: '^node_modules/express/', dependencyTypesNot: ['type-only'] },
    ),
    forbid('nothing-imports-tests', '^(app|components|hooks|lib|constants|server|broker|shared|simulators|scripts)/', '^tests/'),
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    tsConfig: { fileName: 'tsconfig.json' },
    tsPreCompilationDeps: true,
    enhancedResolveOptions: {
      exportsFields: ['exports'],
      conditionNames: ['import', 'require', 'node', 'default', 'types'],
      extensions: ['.web.tsx', '.ts', '.tsx', '.mjs', '.js', '.json'],
    },
  },
};
