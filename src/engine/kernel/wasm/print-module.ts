/** Prints a module's trees as folded text, for reading and debugging a kernel. */
import type { ModuleBuilder } from './module-builder.ts';
import type { Node } from './node.ts';

const width = 110;

function detailText({ detail }: Node): string {
  switch (detail.kind) {
    case 'i32.const':
    case 'i64.const':
    case 'f64.const':
      return ` ${detail.value}`;
    case 'v128.const':
      return ` i64x2 ${detail.low} ${detail.high}`;
    case 'local':
      return ` $${detail.local.name}_${detail.local.index}`;
    case 'call':
      return ` $${detail.target.name}`;
    case 'branch':
      return ` $${detail.label.name}`;
    case 'branchTable':
      return ` ${[...detail.labels, detail.fallback].map((target) => `$${target.name}`).join(' ')}`;
    case 'block':
    case 'loop':
      return ` $${detail.label.name}`;
    case 'memory':
      return (detail.offset === 0 ? '' : ` offset=${detail.offset}`) + (detail.lane === null ? '' : ` ${detail.lane}`);
    case 'operation':
      return detail.immediates.map((value) => ` ${value}`).join('');
    default:
      return '';
  }
}

function printNode(node: Node, indent: string): string {
  const head = node.name + detailText(node);
  const { detail } = node;
  const parts = node.operands.map((operand) => printNode(operand, `${indent}  `));
  if (detail.kind === 'block' || detail.kind === 'loop')
    parts.push(...detail.body.map((inner) => printNode(inner, `${indent}  `)));
  if (detail.kind === 'if') {
    const inner = `${indent}    `;
    parts.push(`(then\n${detail.body.map((part) => inner + printNode(part, inner)).join('\n')})`);
    if (detail.otherwise.length > 0)
      parts.push(`(else\n${detail.otherwise.map((part) => inner + printNode(part, inner)).join('\n')})`);
  }
  const flat = `(${[head, ...parts].join(' ')})`;
  if (parts.length === 0 || (flat.length + indent.length <= width && !flat.includes('\n'))) return flat;
  return `(${head}\n${parts.map((part) => `${indent}  ${part}`).join('\n')})`;
}

/** The text of every function, in order. */
export function printModule(module: ModuleBuilder): string {
  return module.functions
    .map((builder) => {
      const locals = builder.locals
        .map(
          (local, index) =>
            `(${index < builder.takes.length ? 'param' : 'local'} $${local.name}_${index} ${local.type})`,
        )
        .join(' ');
      const result = builder.gives === 'none' ? '' : ` (result ${builder.gives})`;
      return `(func $${builder.name} ${locals}${result}\n${builder.body.map((node) => `  ${printNode(node, '  ')}`).join('\n')})`;
    })
    .join('\n\n');
}
