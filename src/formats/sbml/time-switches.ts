/**
 * Laws that differ before and after a given time. Between such times rates are constant, so waiting times stay exponential:
 * each comparison of the time with a constant becomes a parameter, 0 before and 1 after, which a timed change switches.
 */
import type { ChangeDocument, ParameterDocument } from '@/domain/network/document.ts';
import type { Expression } from '@/domain/network/expression.ts';
import { mapNodes, symbolsOf } from '@/domain/network/expression-leaves.ts';
import { printExpression } from '@/domain/network/print-expression.ts';
import { binary, number } from './mathml-operators.ts';
import { timeId } from './read-mathml.ts';
import type { StartValues } from './read-quantities.ts';
import type { SbmlReading } from './sbml-reading.ts';
import type { XmlElement } from './xml-tree.ts';

interface TimeSwitch {
  id: string;
  /** When it goes from 0 to 1, in the document's terms. */
  moment: Expression;
  /** Where it was first met. */
  element: XmlElement;
}

/** Elements whose expressions may compare the time; what is worked out once or at an event may not. */
const suitable: ReadonlySet<string> = new Set(['kineticLaw', 'assignmentRule']);

const refusal =
  'The symbol “time” may stand in laws and rules only, compared with a constant, as in piecewise(k1, time < 5, k2). With rates that drift in time the waiting times are no longer exponential.';

export class TimeSwitches {
  readonly #reading: SbmlReading;
  readonly #freeId: (wanted: string) => string;
  /** By the text of their moment: laws that change at one time share a switch. */
  readonly #switches = new Map<string, TimeSwitch>();

  constructor(reading: SbmlReading, freeId: (wanted: string) => string) {
    this.#reading = reading;
    this.#freeId = freeId;
  }

  /**
   * The expression (in the document's terms) with switches in place of comparisons of the time with something else. Any other
   * use of the time is refused at `element`. `local` lists parameters known only there, of which no change may speak.
   */
  putInto(expression: Expression, element: XmlElement, local: ReadonlySet<string>): Expression {
    if (!symbolsOf(expression).has(timeId)) return expression;
    const switched = suitable.has(element.name)
      ? mapNodes(expression, (node) => this.#comparison(node, element, local) ?? node)
      : expression;
    if (!symbolsOf(switched).has(timeId)) return switched;
    this.#reading.refuse(element, 'symbol_time', refusal);
    return number(0);
  }

  /** When the switch with this id goes on; null when it is no switch. */
  momentOf(id: string): Expression | null {
    return [...this.#switches.values()].find((one) => one.id === id)?.moment ?? null;
  }

  /** `changes` says whether a name stands for, or depends on, a count. */
  rows(
    start: StartValues,
    changes: (id: string) => boolean,
  ): { parameters: ParameterDocument[]; changes: ChangeDocument[] } {
    const switches = [...this.#switches.values()].filter((one) => this.#isConstant(one, start, changes));
    for (const { id, moment, element } of switches) {
      this.#reading.inform(
        element,
        'time_switch',
        `Comparisons of the time with ${printExpression(moment)} were read as the parameter ${id}, which a timed change sets from 0 to 1.`,
      );
    }
    return {
      parameters: switches.map(({ id, moment }) => ({
        id,
        name: `1 from time ${printExpression(moment)} on`,
        value: start(id),
      })),
      changes: switches
        .filter(({ id }) => start(id) === 0)
        .map(({ id, moment }) => ({
          id: this.#freeId(`switch_${id}`),
          when: { kind: 'time', time: printExpression(moment) },
          assignments: [{ variable: id, expression: '1' }],
        })),
    };
  }

  #isConstant({ id, moment, element }: TimeSwitch, start: StartValues, changes: (id: string) => boolean): boolean {
    if ([...symbolsOf(moment)].some(changes)) {
      this.#reading.refuse(
        element,
        'symbol_time',
        `The time is compared with ${printExpression(moment)}, which changes during the run; it must be constant.`,
      );
      return false;
    }
    return !Number.isNaN(start(id));
  }

  /** time ≥ c, and what says the same: the switch of c; time < c: its opposite. At the moment itself nothing fires. */
  #comparison(node: Expression, element: XmlElement, local: ReadonlySet<string>): Expression | null {
    if (node.kind !== 'binary') return null;
    const isOrder = ['less', 'lessOrEqual', 'greater', 'greaterOrEqual'].includes(node.operator);
    const [left, right] = [isTime(node.left), isTime(node.right)];
    if (!isOrder || left === right) return null;
    const moment = left ? node.right : node.left;
    if ([...symbolsOf(moment)].some((id) => id === timeId || local.has(id))) return null;
    const isAfter = node.operator.startsWith('greater') === left;
    return binary('equal', { kind: 'symbol', id: this.#switchAt(moment, element) }, number(isAfter ? 1 : 0));
  }

  #switchAt(moment: Expression, element: XmlElement): string {
    const text = printExpression(moment);
    const known = this.#switches.get(text);
    if (known !== undefined) return known.id;
    const id = this.#freeId(`after_${text.replace(/[^A-Za-z0-9]+/g, '_').slice(0, 40)}`);
    this.#switches.set(text, { id, moment, element });
    return id;
  }
}

const isTime = (node: Expression): boolean => node.kind === 'symbol' && node.id === timeId;
