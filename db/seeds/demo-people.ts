/** The demo's teams, people, clients and project codes: an invented consultancy and a neighbour. */
import type { Role } from '@/domain/teams/permissions.ts';

export interface DemoPerson {
  email: string;
  name: string;
  roles: Role[];
}

export interface DemoTeam {
  slug: string;
  name: string;
  timeZone: string;
  people: DemoPerson[];
  projectCodes: { code: string; client: string; poNumber: string }[];
}

export const tarnFell: DemoTeam = {
  slug: 'tarn-fell',
  name: 'Tarn & Fell Modelling',
  timeZone: 'Europe/London',
  people: [
    { email: 'owner@tarnfell.example', name: 'Maren Tarn', roles: ['owner'] },
    { email: 'finance@tarnfell.example', name: 'Idris Fell', roles: ['finance'] },
    { email: 'modeller@tarnfell.example', name: 'Sunniva Okoro', roles: ['modeller'] },
    { email: 'modeller2@tarnfell.example', name: 'Tomasz Liddell', roles: ['modeller'] },
    { email: 'viewer@tarnfell.example', name: 'Bea Grasmere', roles: ['viewer'] },
  ],
  projectCodes: [
    { code: 'ORRIN-7', client: 'Orrin Bioscience', poNumber: 'PO 22-0417' },
    { code: 'SKERRY-2', client: 'Skerry Ward Trust', poNumber: 'SWT-1189' },
  ],
};

export const kestrelBay: DemoTeam = {
  slug: 'kestrel-bay',
  name: 'Kestrel Bay Systems',
  timeZone: 'Europe/London',
  people: [{ email: 'owner@kestrelbay.example', name: 'Paz Kestrel', roles: ['owner'] }],
  projectCodes: [],
};

export const demoOperator = { email: 'operator@burette.example', name: 'Burette staff' };
