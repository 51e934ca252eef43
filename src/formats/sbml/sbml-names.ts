/** Namespaces and versions of SBML, and which of them are read. */
import type { XmlElement } from './xml-tree.ts';

export const mathmlNamespace = 'http://www.w3.org/1998/Math/MathML';
/** Marks in annotations what SBML has no word for, so that our own exports read back as they were. */
export const ownNamespace = 'urn:burette:network:1';

export interface SbmlVersion {
  level: 2 | 3;
  version: number;
}

const level3 = /^http:\/\/www\.sbml\.org\/sbml\/level3\/version([12])\/core$/;
const level2 = /^http:\/\/www\.sbml\.org\/sbml\/level2(?:\/version([2345]))?$/;
const level1 = /^http:\/\/www\.sbml\.org\/sbml\/level1$/;

/** The namespace of the version that is written. */
export const writtenNamespace = 'http://www.sbml.org/sbml/level3/version2/core';

/** Level and version by the root's namespace, or why the file cannot be read. */
export function sbmlVersionOf(root: XmlElement): SbmlVersion | { code: string; message: string } {
  if (root.name !== 'sbml')
    return { code: 'not_sbml', message: `The outermost element is <${root.name}>, not <sbml>.` };
  if (level1.test(root.namespace)) {
    return {
      code: 'old_level',
      message: 'SBML Level 1 is not read; save the model as Level 3 Version 2 (or Level 2).',
    };
  }
  const third = level3.exec(root.namespace);
  const second = level2.exec(root.namespace);
  if (third === null && second === null) {
    const namespace = root.namespace === '' ? 'no namespace' : `the namespace “${root.namespace.slice(0, 200)}”`;
    return {
      code: 'unknown_namespace',
      message: `<sbml> has ${namespace}; SBML Level 3 Versions 1 and 2 and Level 2 are read.`,
    };
  }
  const found: SbmlVersion =
    third !== null ? { level: 3, version: Number(third[1]) } : { level: 2, version: Number(second![1] ?? 1) };
  const [level, version] = [root.attributes.get('level'), root.attributes.get('version')];
  if (level !== String(found.level) || version !== String(found.version)) {
    const message = `<sbml> says level ${level ?? 'nothing'} version ${version ?? 'nothing'}, but its namespace is that of Level ${found.level} Version ${found.version}.`;
    return { code: 'version_mismatch', message };
  }
  return found;
}
