/** The companies of the invented region; whoever resembles them does so by chance. */
export const organisations = [
  { code: 'QUERNWICK', name: 'Quern & Wickett Railroad', kind: 'railroad' },
  { code: 'QUARREL', name: 'Quarrel Tank Leasing', kind: 'carOwner' },
  { code: 'BRACKENLD', name: 'Bracken Lading Cars', kind: 'carOwner' },
  { code: 'QUILLBOX', name: 'Quillbark Box Line', kind: 'containerLine' },
  { code: 'STONECROP', name: 'Stonecrop Resin Works', kind: 'shipper' },
  { code: 'QUERNMILL', name: 'Quern Mills Cooperative', kind: 'shipper' },
] as const;

/** The password of every demo person; printed at start, worthless outside the demo. */
export const DEMO_PASSWORD = 'fishplate-demo';

/** Who tells what no reader saw: a railroad by its own messages, a clerk by eye. */
export const tellers = { railroad: 'QUERNWICK', clerk: 'clerk@fishplate.example' };

/** The demo people. `sites` empty: not narrowed by site. */
export const people: {
  email: string;
  name: string;
  organisation: string | null;
  roles: string[];
  sites: string[];
  timeZone: string;
}[] = [
  {
    email: 'admin@fishplate.example',
    name: 'Ines Abernethy',
    organisation: null,
    roles: ['administrator'],
    sites: [],
    timeZone: 'America/Chicago',
  },
  {
    email: 'owner@fishplate.example',
    name: 'Runa Lindgren',
    organisation: 'QUARREL',
    roles: ['owner'],
    sites: [],
    timeZone: 'America/Chicago',
  },
  {
    email: 'boxes@fishplate.example',
    name: 'Tomas Okafor',
    organisation: 'QUILLBOX',
    roles: ['owner'],
    sites: [],
    timeZone: 'America/Chicago',
  },
  {
    email: 'clerk@fishplate.example',
    name: 'Della Marchetti',
    organisation: 'QUERNWICK',
    roles: ['clerk'],
    sites: ['ALDER'],
    timeZone: 'America/Chicago',
  },
  {
    email: 'dispatcher@fishplate.example',
    name: 'Wes Tallgren',
    organisation: 'QUERNWICK',
    roles: ['dispatcher'],
    sites: ['ALDER', 'CAIRN', 'BITTERN'],
    timeZone: 'America/Chicago',
  },
];
