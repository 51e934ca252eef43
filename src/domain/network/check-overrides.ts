/** Checks the values that a scenario or sweep point puts in place of the document's own. */
import type { Overrides, Problem } from './document.ts';
import { countFault } from './check-rows.ts';
import { nearestName } from './identifiers.ts';
import type { ParsedNetwork } from './parse-network.ts';
import { error } from './problems.ts';

/**
 * Parameters are named by id, compartment sizes too, local parameters as `reaction.parameter`; initial counts by
 * species; times by their change. A path is `overrides.parameters.k1` or `overrides.initialCounts.A`.
 */
export function checkOverrides(network: ParsedNetwork, overrides: Overrides): Problem[] {
  const parameters = Object.entries(overrides.parameters ?? {}).flatMap(([id, value]) => {
    const path = `overrides.parameters.${id}`;
    const fault = parameterFault(network, id) ?? valueFault(network, id, value);
    return fault === null ? [] : [error(path, fault.code, fault.message)];
  });
  const counts = Object.entries(overrides.initialCounts ?? {}).flatMap(([id, value]) => {
    const path = `overrides.initialCounts.${id}`;
    const fault = speciesFault(network, id) ?? countFault(value);
    return fault === null ? [] : [error(path, fault.code, fault.message)];
  });
  const times = Object.entries(overrides.changeTimes ?? {}).flatMap(([id, value]) => {
    const path = `overrides.changeTimes.${id}`;
    const fault = changeFault(network, id) ?? timeFault(value);
    return fault === null ? [] : [error(path, fault.code, fault.message)];
  });
  return [...parameters, ...counts, ...times];
}

type Fault = { code: string; message: string } | null;

const assigned = (id: string): Fault => ({
  code: 'assigned_by_rule',
  message: `${id} is worked out by an assignment rule and cannot be overridden.`,
});

function parameterFault({ names, document, ruleOf }: ParsedNetwork, id: string): Fault {
  const kind = names.get(id)?.kind;
  if (kind === 'parameter') return ruleOf.has(id) ? assigned(id) : null;
  if (kind === 'compartment') return null;
  const locals = document.reactions.flatMap(
    (reaction) => reaction.localParameters?.map((local) => `${reaction.id}.${local.id}`) ?? [],
  );
  if (locals.includes(id)) return null;
  if (kind === 'species')
    return { code: 'unknown_parameter', message: `“${id}” is a species; put its count under initialCounts.` };
  const usable = [...names].flatMap(([name, known]) => (known.kind === 'parameter' ? [name] : []));
  const near = nearestName(id, [...usable, ...locals]);
  return {
    code: 'unknown_parameter',
    message: `There is no parameter “${id}”.${near === null ? '' : ` Did you mean ${near}?`}`,
  };
}

function valueFault({ names }: ParsedNetwork, id: string, value: number): Fault {
  if (!Number.isFinite(value)) return { code: 'invalid_value', message: 'A value is a finite number.' };
  if (names.get(id)?.kind === 'compartment' && value <= 0)
    return { code: 'invalid_size', message: 'A size is a number above 0.' };
  return null;
}

function speciesFault({ names, ruleOf, document }: ParsedNetwork, id: string): Fault {
  if (names.get(id)?.kind === 'species') return ruleOf.has(id) ? assigned(id) : null;
  const near = nearestName(
    id,
    document.species.map((species) => species.id),
  );
  return {
    code: 'unknown_species',
    message: `There is no species “${id}”.${near === null ? '' : ` Did you mean ${near}?`}`,
  };
}

function changeFault({ document }: ParsedNetwork, id: string): Fault {
  const changes = document.changes ?? [];
  const change = changes.find((each) => each.id === id);
  if (change?.when.kind === 'time') return null;
  if (change) return { code: 'triggered_change', message: `${id} happens on a condition and has no time.` };
  const near = nearestName(
    id,
    changes.map((each) => each.id),
  );
  return {
    code: 'unknown_change',
    message: `There is no timed change “${id}”.${near === null ? '' : ` Did you mean ${near}?`}`,
  };
}

const timeFault = (value: number): Fault =>
  value >= 0 && value < Infinity ? null : { code: 'invalid_time', message: 'A time is a number from 0 up.' };
