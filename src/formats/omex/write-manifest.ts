/** Writes the manifest that makes a zip a COMBINE archive (OMEX). */

export interface ManifestEntry {
  /** Path inside the archive, such as `results/summary.csv`. */
  path: string;
  /** URI of the format, from `omexFormats`. */
  format: string;
  /** The entry to open first. */
  master?: boolean;
}

export const omexFormats = {
  omex: 'http://identifiers.org/combine.specifications/omex',
  manifest: 'http://identifiers.org/combine.specifications/omex-manifest',
  sbml: 'http://identifiers.org/combine.specifications/sbml.level-3.version-2',
  sedml: 'http://identifiers.org/combine.specifications/sed-ml.level-1.version-4',
  csv: 'http://purl.org/NET/mediatypes/text/csv',
  json: 'http://purl.org/NET/mediatypes/application/json',
  parquet: 'http://purl.org/NET/mediatypes/application/vnd.apache.parquet',
  pdf: 'http://purl.org/NET/mediatypes/application/pdf',
  svg: 'http://purl.org/NET/mediatypes/image/svg+xml',
  text: 'http://purl.org/NET/mediatypes/text/plain',
} as const;

const escaped: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' };
const attribute = (text: string): string => text.replaceAll(/[&<>"]/g, (character) => escaped[character]!);

/** `entries` are all files but the manifest, which lists the archive and itself first, as the specification wants. */
export function writeManifest(entries: readonly ManifestEntry[]): string {
  const line = ({ path, format, master }: ManifestEntry) =>
    `  <content location="${attribute(path)}" format="${attribute(format)}"${master ? ' master="true"' : ''}/>`;
  return [
    '<?xml version="1.0" encoding="UTF-8"?>',
    `<omexManifest xmlns="${omexFormats.manifest}">`,
    line({ path: '.', format: omexFormats.omex }),
    line({ path: './manifest.xml', format: omexFormats.manifest }),
    ...entries.map((entry) => line({ ...entry, path: `./${entry.path}` })),
    '</omexManifest>',
    '',
  ].join('\n');
}
