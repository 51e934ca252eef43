/** Computes the front page's figure anew and stores it beside the page's components: `tsx src/commands/landing-figure.ts`. */
import { writeFile } from 'node:fs/promises';
import path from 'node:path';
import { wardOutbreak } from '@db/seeds/demo-models.ts';
import { computeWardFigure } from '@/components/landing/compute-ward-figure.ts';
import { projectRoot } from '@/server/project-root.ts';

const figure = await computeWardFigure(wardOutbreak.network);
const file = path.join(projectRoot, 'src/components/landing/ward-figure.json');
await writeFile(file, `${JSON.stringify(figure)}\n`);
console.log(`${figure.replicates} replicates; ${figure.smallOutbreaks} small outbreaks.`);
