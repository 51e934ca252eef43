/**
 * Credits as a vertical graduated column: liquid is available, hatched is held, the pink meniscus is where the level
 * would be after the quote on screen, a bracket is what is left of a member's share. Heights are percentages given as
 * attributes, so that it fills any height without script and within a strict content security policy.
 */
import { useId } from 'react';
import { creditsText } from './amounts-text.ts';
import { columnScale, heightOnScale, type ColumnScale } from './column-scale.ts';
import { columnWords, type ColumnLevels } from './column-words.ts';

export interface GraduatedColumnProps extends ColumnLevels {
  /** `rail`: the page's left edge; `large`: on the credits page. */
  size?: 'rail' | 'large';
  className?: string;
}

interface Glass {
  left: number;
  right: number;
  major: number;
  minor: number;
  label: number;
  text: string;
}
const glasses: Record<'rail' | 'large', Glass> = {
  rail: { left: 16, right: 42, major: 22, minor: 8, label: 50, text: 'text-[11px]' },
  large: { left: 28, right: 76, major: 34, minor: 14, label: 88, text: 'text-[13px]' },
};

const percent = (share: number): string => `${(100 * (1 - share)).toFixed(3)}%`;

/** The element fills its box; leave about 2 rem of free room below it for the tip. */
export function GraduatedColumn({ size = 'rail', className = '', ...levels }: GraduatedColumnProps) {
  const pattern = `held${useId().replace(/\W/g, '')}`;
  const { availableMicrocredits: available, heldMicrocredits: held, quote, shareLeftMicrocredits: shareLeft } = levels;
  const scale = columnScale(available + held);
  const glass = glasses[size];
  const wide = glass.right - glass.left;
  const middle = wide / 2;
  const at = (microcredits: number): string => percent(heightOnScale(microcredits, scale));
  const tip = `M${glass.left} 0q0 ${wide / 3} ${middle - 4} ${wide / 2.4}v15h8v-15q${middle - 4} -${wide / 12} ${middle - 4} -${wide / 2.4}`;
  const after = quote ? available - quote.expectedMicrocredits : null;

  return (
    <svg
      role="img"
      aria-label={columnWords(levels)}
      className={`overflow-visible ${className}`}
      width="100%"
      height="100%"
    >
      <defs>
        <pattern id={pattern} width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
          <rect width="6" height="6" className="fill-panel" />
          <path d="M1 0v6" className="stroke-bromo" strokeWidth="1.6" />
        </pattern>
      </defs>
      <rect x={glass.left} y="0" width={wide} height="100%" className="fill-panel" />
      <svg y="100%" className="overflow-visible">
        <path d={tip} className={available > 0 ? 'fill-liquid' : 'fill-panel'} />
      </svg>
      <rect
        x={glass.left}
        y={at(available)}
        width={wide}
        height={`${(100 * heightOnScale(available, scale)).toFixed(3)}%`}
        className="fill-liquid"
      />
      {held > 0 && (
        <rect
          x={glass.left}
          y={at(available + held)}
          width={wide}
          height={`${(100 * (heightOnScale(available + held, scale) - heightOnScale(available, scale))).toFixed(3)}%`}
          fill={`url(#${pattern})`}
        />
      )}
      {available + held > 0 && (
        <svg y={at(available + held)} className="overflow-visible">
          <path d={`M${glass.left} -2q${middle} 7 ${wide} 0`} className="fill-panel stroke-bromo" strokeWidth="1.5" />
        </svg>
      )}
      <Graduation scale={scale} glass={glass} />
      <line x1={glass.left} x2={glass.left} y1="0" y2="100%" className="stroke-ink" strokeWidth="1.4" />
      <line x1={glass.right} x2={glass.right} y1="0" y2="100%" className="stroke-ink" strokeWidth="1.4" />
      <svg y="100%" className="overflow-visible">
        <path d={tip} className="fill-none stroke-ink" strokeWidth="1.4" />
      </svg>
      {typeof shareLeft === 'number' && (
        <Bracket x={glass.left - 5} from={at(available)} to={at(Math.max(0, available - shareLeft))} />
      )}
      {quote && after !== null && (
        <>
          <line
            x1={glass.left - 7}
            x2={glass.right + 7}
            y1={at(available - quote.highMicrocredits)}
            y2={at(available - quote.highMicrocredits)}
            className="stroke-phenol"
            strokeWidth="1.2"
            strokeDasharray="2 3"
          />
          <svg y={at(after)} className="overflow-visible">
            <path
              d={`M${glass.left - 7} 0h7q${middle} 8 ${wide} 0h7`}
              className="fill-none stroke-phenol"
              strokeWidth="2.6"
            />
          </svg>
        </>
      )}
    </svg>
  );
}

/** Marks and their labels; the half division is longer than the others, as on glass. */
function Graduation({ scale, glass }: { scale: ColumnScale; glass: Glass }) {
  const step = scale.majorMicrocredits / scale.minorsPerMajor;
  const count = Math.round(scale.topMicrocredits / step);
  return (
    <g aria-hidden="true">
      {Array.from({ length: count + 1 }, (_, index) => {
        const y = percent(index / count);
        const isMajor = index % scale.minorsPerMajor === 0;
        const isHalf = index % (scale.minorsPerMajor / 2) === 0;
        const length = isMajor ? glass.major : isHalf ? glass.minor * 1.5 : glass.minor;
        return (
          <g key={index}>
            <line
              x1={glass.right - length + (isMajor ? 5 : 0)}
              x2={glass.right + (isMajor ? 5 : 0)}
              y1={y}
              y2={y}
              className={isMajor ? 'stroke-ink' : 'stroke-edge'}
              strokeWidth={isMajor ? 1.3 : 1}
            />
            {isMajor && (
              <text x={glass.label} y={y} dy="0.35em" className={`fill-soft ${glass.text}`}>
                {creditsText((index / scale.minorsPerMajor) * scale.majorMicrocredits)}
              </text>
            )}
          </g>
        );
      })}
    </g>
  );
}

function Bracket({ x, from, to }: { x: number; from: string; to: string }) {
  return (
    <g className="stroke-ink" strokeWidth="1.5" aria-hidden="true">
      <line x1={x} x2={x} y1={from} y2={to} />
      <line x1={x} x2={x + 4} y1={from} y2={from} />
      <line x1={x} x2={x + 4} y1={to} y2={to} />
    </g>
  );
}
