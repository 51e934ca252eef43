/** Documentation as a collection: Markdown under content/docs, in the order of `order`. */
import { defineCollection, z } from 'astro:content';
import { glob } from 'astro/loaders';

const docs = defineCollection({
  loader: glob({ pattern: '*.md', base: './src/content/docs' }),
  schema: z.object({ title: z.string(), summary: z.string(), order: z.number().int() }),
});

export const collections = { docs };
