import type { BodyOf } from '#shared/contract/endpoint.ts';
import type { productEndpoints } from '#shared/contract/products.ts';
import type { eventKinds } from '#shared/contract/records.ts';
import type { Role } from '#shared/domain/role.ts';

/** The demo's invented world, in days before its start and hours of the UTC day. People are roles at example addresses. */

export const DEMO_PASSWORD = 'steady drops only';

export type PersonKey = 'ternOwner' | 'keeper' | 'ternSitter' | 'quayOwner' | 'quayViewer';

export const demoPeople: Record<PersonKey, { email: string; name: string }> = {
  ternOwner: { email: 'owner@ternlane.example', name: 'Tern Lane owner' },
  keeper: { email: 'keeper@ternlane.example', name: 'Keeper' },
  ternSitter: { email: 'sitter@ternlane.example', name: 'Tern Lane sitter' },
  quayOwner: { email: 'owner@quayroad.example', name: 'Quay Road owner' },
  quayViewer: { email: 'viewer@quayroad.example', name: 'Quay Road viewer' },
};

export interface DemoSite {
  key: string;
  name: string;
  timeZone: string;
  owner: PersonKey;
  members: { person: PersonKey; role: Role }[];
  product: { key: string } & Omit<BodyOf<(typeof productEndpoints)['createProduct']>, 'id'>;
  systems: DemoSystem[];
}

/** A line of results: from its first to its last value over the weeks, with a kit that reads in steps. */
export interface ResultStory {
  quantity: 'nitrate' | 'phosphate' | 'alkalinity';
  unit: 'mg/L NO3' | 'mg/L PO4' | 'dKH';
  /** Days before the start and what was found, oldest first; results in between lie on the line between them. */
  points: { daysAgo: number; value: number }[];
  /** One result each so many days. */
  everyDays: number;
  step: number;
}

export interface DemoSystem {
  key: string;
  seed: number;
  name: string;
  displayLitres: number;
  sumpLitres: number;
  displacementLitres: number;
  temperatureC: number;
  probe: { name: string; channels: string[] } | null;
  pump: { name: string; mlPerSecond: number; smallestMl: number; doses: { daysAgo: number; mlPerDay: number }[] } | null;
  reservoir: { name: string; capacityMl: number; refills: { daysAgo: number; ml: number; lot: string }[] } | null;
  handDoses: { daysAgo: number; hour: number; ml: number }[];
  results: ResultStory[];
  events: { daysAgo: number; hour: number; kind: (typeof eventKinds)[number]; litres?: number; note: string }[];
}

const everyFortnight = (litres: number, from = 116) =>
  Array.from({ length: Math.floor(from / 14) }, (_, index) => ({
    daysAgo: from - 14 * index,
    hour: 11,
    kind: 'water-change' as const,
    litres,
    note: '',
  }));

export const demoSites: DemoSite[] = [
  {
    key: 'tern',
    name: 'Tern Lane',
    timeZone: 'Europe/Lisbon',
    owner: 'ternOwner',
    members: [
      { person: 'keeper', role: 'keeper' },
      { person: 'ternSitter', role: 'sitter' },
    ],
    product: {
      key: 'blend-a',
      name: 'Carbon blend A, 40 % ethanol by volume',
      form: 'liquid',
      composition: [{ substance: 'ethanol', percentByVolume: 40 }],
      label: { ml: 2, maxMl: null, perLitres: 100, perDays: 1 },
    },
    systems: [
      {
        key: 'front',
        seed: 11,
        name: 'Front window',
        displayLitres: 360,
        sumpLitres: 110,
        displacementLitres: 50,
        temperatureC: 25.4,
        probe: {
          name: 'Front window probes',
          channels: ['temperature', 'ph', 'orp', 'conductivity', 'oxygen', 'level', 'power'],
        },
        pump: {
          name: 'Front window pump',
          mlPerSecond: 1.1,
          smallestMl: 0.1,
          doses: [
            { daysAgo: 37, mlPerDay: 2.1 },
            { daysAgo: 23, mlPerDay: 4.2 },
            { daysAgo: 9, mlPerDay: 6.3 },
          ],
        },
        reservoir: {
          name: 'Front window bottle',
          capacityMl: 500,
          refills: [
            { daysAgo: 37, ml: 150, lot: 'A-0417' },
            { daysAgo: 12, ml: 250, lot: 'A-0422' },
          ],
        },
        handDoses: [{ daysAgo: 21, hour: 18, ml: 0.3 }],
        results: [
          {
            quantity: 'nitrate',
            unit: 'mg/L NO3',
            points: [
              { daysAgo: 119, value: 24 },
              { daysAgo: 37, value: 32 },
              { daysAgo: 23, value: 30 },
              { daysAgo: 0, value: 21 },
            ],
            everyDays: 7,
            step: 1,
          },
          {
            quantity: 'phosphate',
            unit: 'mg/L PO4',
            points: [
              { daysAgo: 119, value: 0.26 },
              { daysAgo: 37, value: 0.34 },
              { daysAgo: 23, value: 0.32 },
              { daysAgo: 0, value: 0.22 },
            ],
            everyDays: 7,
            step: 0.01,
          },
          {
            quantity: 'alkalinity',
            unit: 'dKH',
            points: [
              { daysAgo: 119, value: 8.2 },
              { daysAgo: 0, value: 8.1 },
            ],
            everyDays: 14,
            step: 0.1,
          },
        ],
        events: [
          ...everyFortnight(42),
          { daysAgo: 98, hour: 16, kind: 'fish', note: 'Two fish added' },
          { daysAgo: 64, hour: 10, kind: 'equipment', note: 'Skimmer pump taken apart and cleaned' },
          { daysAgo: 36, hour: 9, kind: 'observation', note: 'Glass film every two days' },
          { daysAgo: 15, hour: 9, kind: 'observation', note: 'Glass film every four days, skimmate darker' },
          { daysAgo: 5, hour: 17, kind: 'cleaning', note: 'ORP probe cleaned' },
        ],
      },
      {
        key: 'frag',
        seed: 12,
        name: 'Frag shelf',
        displayLitres: 150,
        sumpLitres: 40,
        displacementLitres: 30,
        temperatureC: 25.8,
        probe: { name: 'Frag shelf probes', channels: ['temperature', 'ph', 'orp', 'oxygen', 'level'] },
        pump: {
          name: 'Frag shelf pump',
          mlPerSecond: 0.8,
          smallestMl: 0.1,
          doses: [
            { daysAgo: 112, mlPerDay: 0.8 },
            { daysAgo: 98, mlPerDay: 1.6 },
          ],
        },
        reservoir: { name: 'Frag shelf bottle', capacityMl: 250, refills: [{ daysAgo: 112, ml: 250, lot: 'A-0409' }] },
        handDoses: [],
        results: [
          {
            quantity: 'nitrate',
            unit: 'mg/L NO3',
            points: [
              { daysAgo: 119, value: 19 },
              { daysAgo: 98, value: 16 },
              { daysAgo: 60, value: 7 },
              { daysAgo: 0, value: 6 },
            ],
            everyDays: 7,
            step: 0.5,
          },
          {
            quantity: 'phosphate',
            unit: 'mg/L PO4',
            points: [
              { daysAgo: 119, value: 0.24 },
              { daysAgo: 98, value: 0.2 },
              { daysAgo: 60, value: 0.08 },
              { daysAgo: 0, value: 0.06 },
            ],
            everyDays: 7,
            step: 0.01,
          },
        ],
        events: [
          ...everyFortnight(16),
          { daysAgo: 98, hour: 12, kind: 'note', note: 'One riser up: both nutrients still above' },
          { daysAgo: 58, hour: 12, kind: 'note', note: 'Both in band: staying on this dose' },
        ],
      },
      {
        key: 'bench',
        seed: 13,
        name: 'Bench cube',
        displayLitres: 60,
        sumpLitres: 20,
        displacementLitres: 5,
        temperatureC: 25.1,
        probe: { name: 'Bench cube probes', channels: ['temperature', 'ph'] },
        // Its start dose, 0.375 mL a day, is under what this head gives accurately: it needs a dilution before it gets a schedule.
        pump: { name: 'Bench cube pump', mlPerSecond: 1.2, smallestMl: 0.5, doses: [] },
        reservoir: null,
        handDoses: [],
        results: [
          { quantity: 'nitrate', unit: 'mg/L NO3', points: [{ daysAgo: 17, value: 14 }], everyDays: 7, step: 1 },
          { quantity: 'phosphate', unit: 'mg/L PO4', points: [{ daysAgo: 17, value: 0.24 }], everyDays: 7, step: 0.01 },
        ],
        events: [{ daysAgo: 30, hour: 14, kind: 'note', note: 'Moved here from another tank' }],
      },
    ],
  },
  {
    key: 'quay',
    name: 'Quay Road Dental',
    timeZone: 'Europe/Lisbon',
    owner: 'quayOwner',
    members: [
      { person: 'keeper', role: 'keeper' },
      { person: 'quayViewer', role: 'viewer' },
    ],
    product: { key: 'pellets-b', name: 'Carbon pellets B', form: 'pellets', composition: [], label: null },
    systems: [
      {
        key: 'lobby',
        seed: 14,
        name: 'Lobby',
        displayLitres: 540,
        sumpLitres: 130,
        displacementLitres: 60,
        temperatureC: 25.2,
        probe: { name: 'Lobby probes', channels: ['temperature', 'ph', 'orp', 'conductivity', 'oxygen', 'power'] },
        pump: null,
        reservoir: null,
        handDoses: [
          { daysAgo: 100, hour: 10, ml: 80 },
          { daysAgo: 72, hour: 10, ml: 80 },
          { daysAgo: 44, hour: 10, ml: 60 },
          { daysAgo: 16, hour: 10, ml: 60 },
        ],
        results: [
          {
            quantity: 'nitrate',
            unit: 'mg/L NO3',
            points: [
              { daysAgo: 118, value: 28 },
              { daysAgo: 2, value: 9 },
            ],
            everyDays: 14,
            step: 1,
          },
          {
            quantity: 'phosphate',
            unit: 'mg/L PO4',
            points: [
              { daysAgo: 118, value: 0.3 },
              { daysAgo: 2, value: 0.11 },
            ],
            everyDays: 14,
            step: 0.01,
          },
        ],
        events: [
          ...everyFortnight(60),
          { daysAgo: 100, hour: 10, kind: 'equipment', note: 'Pellet reactor started, outflow at the skimmer' },
          { daysAgo: 44, hour: 10, kind: 'observation', note: 'All pellets tumble, none grind' },
          { daysAgo: 16, hour: 10, kind: 'observation', note: 'All pellets tumble; topped up' },
        ],
      },
    ],
  },
];
