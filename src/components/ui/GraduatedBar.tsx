/** The graduated column lying down: a thin bar for phones, with the same scale, patterns and words. */
import { useId } from 'react';
import { creditsText } from './amounts-text.ts';
import { columnScale, heightOnScale } from './column-scale.ts';
import { columnWords, type ColumnLevels } from './column-words.ts';

const percent = (share: number): string => `${(100 * share).toFixed(3)}%`;

export function GraduatedBar({ className = '', ...levels }: ColumnLevels & { className?: string }) {
  const pattern = `held${useId().replace(/\W/g, '')}`;
  const { availableMicrocredits: available, heldMicrocredits: held, quote, shareLeftMicrocredits: shareLeft } = levels;
  const scale = columnScale(available + held);
  const share = (microcredits: number): number => heightOnScale(microcredits, scale);
  const at = (microcredits: number): string => percent(share(microcredits));
  const majors = Math.round(scale.topMicrocredits / scale.majorMicrocredits);
  return (
    <svg
      role="img"
      aria-label={columnWords(levels)}
      width="100%"
      height="30"
      className={`overflow-visible ${className}`}
    >
      <defs>
        <pattern id={pattern} width="5" height="5" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
          <rect width="5" height="5" className="fill-panel" />
          <path d="M1 0v5" className="stroke-bromo" strokeWidth="1.5" />
        </pattern>
      </defs>
      <rect y="3" width="100%" height="12" className="fill-panel" />
      <rect y="3" width={at(available)} height="12" className="fill-liquid" />
      {held > 0 && (
        <rect
          x={at(available)}
          y="3"
          width={percent(share(available + held) - share(available))}
          height="12"
          fill={`url(#${pattern})`}
        />
      )}
      {available + held > 0 && (
        <line
          x1={at(available + held)}
          x2={at(available + held)}
          y1="3"
          y2="15"
          className="stroke-bromo"
          strokeWidth="1.5"
        />
      )}
      <g aria-hidden="true">
        {Array.from({ length: majors * 5 + 1 }, (_, index) => {
          const x = percent(index / (majors * 5));
          const isMajor = index % 5 === 0;
          const last = index === majors * 5;
          return (
            <g key={index}>
              <line
                x1={x}
                x2={x}
                y1={isMajor ? 7 : 11}
                y2={isMajor ? 17 : 15}
                className={isMajor ? 'stroke-ink' : 'stroke-edge'}
              />
              {isMajor && (
                <text
                  x={x}
                  y="28"
                  textAnchor={index === 0 ? 'start' : last ? 'end' : 'middle'}
                  className="fill-soft text-[10px]"
                >
                  {creditsText((index / 5) * scale.majorMicrocredits)}
                </text>
              )}
            </g>
          );
        })}
      </g>
      <line x1="0" x2="100%" y1="3" y2="3" className="stroke-ink" />
      <line x1="0" x2="100%" y1="15" y2="15" className="stroke-ink" />
      {typeof shareLeft === 'number' && (
        <line
          x1={at(Math.max(0, available - shareLeft))}
          x2={at(available)}
          y1="0.5"
          y2="0.5"
          className="stroke-ink"
          strokeWidth="2"
        />
      )}
      {quote && (
        <>
          <line
            x1={at(available - quote.highMicrocredits)}
            x2={at(available - quote.highMicrocredits)}
            y1="0"
            y2="18"
            className="stroke-phenol"
            strokeDasharray="2 3"
          />
          <line
            x1={at(available - quote.expectedMicrocredits)}
            x2={at(available - quote.expectedMicrocredits)}
            y1="0"
            y2="18"
            className="stroke-phenol"
            strokeWidth="2.6"
          />
        </>
      )}
    </svg>
  );
}
