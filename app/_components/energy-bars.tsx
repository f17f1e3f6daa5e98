import { scaleLinear } from 'd3-scale';
import type { SiteBudget } from '../../lib/http/answers/weather-hours.ts';
import { ChartFrame } from './chart-frame.tsx';
import { DataTable } from './data-table.tsx';
import { longDate } from './date-words.ts';
import styles from './energy-bars.module.css';
import { plain } from './figures.ts';

const LEFT = 60;
const RIGHT = 940;
const BAR = 46;
const GAP = 26;
/** Narrowest part of a bar that has room for its own label. */
const LABEL_ROOM = 74;

interface Part {
  readonly symbol: string;
  readonly name: string;
  readonly value: number;
  readonly look: string;
}

const LOOKS: Readonly<Record<string, string>> = {
  Rns: styles.sun,
  Rnl: styles.sky,
  G: styles.soil,
  λE: styles.water,
  H: styles.air,
};

/** The day's energy at the reference surface as a balance: what comes in over what goes out, both of one length. */
export function EnergyBars({ budget }: { budget: SiteBudget }) {
  const { incoming, outgoing } = sidesOf(budget);
  if (incoming.length === 0) return <p>No energy budget on {longDate(budget.date)}: the site has no temperature that day.</p>;
  const total = Math.max(sumOf(incoming), sumOf(outgoing));
  const x = scaleLinear().domain([0, total]).nice().range([LEFT, RIGHT]);
  const bottom = 2 * BAR + GAP + 30;
  return (
    <ChartFrame
      id="energy"
      title={`Energy budget of ${longDate(budget.date)}, ${budget.method.name}`}
      description={`In: ${wordsOf(incoming)}. Out: ${wordsOf(outgoing)}. All in MJ m⁻² d⁻¹.`}
      width={960}
      height={bottom + 44}
      narrowest={560}
    >
      <Bar name="In" parts={incoming} y={4} x={x} />
      <Bar name="Out" parts={outgoing} y={4 + BAR + GAP} x={x} />
      <line className={styles.axis} x1={LEFT} x2={RIGHT} y1={bottom} y2={bottom} />
      {x.ticks(8).map((tick) => (
        <g key={tick} transform={`translate(${x(tick)} ${bottom})`}>
          <line className={styles.axis} y2={5} />
          <text className={styles.tick} y={18} textAnchor="middle">
            {plain(tick, 0)}
          </text>
        </g>
      ))}
      <text className={styles.tick} x={RIGHT} y={bottom + 36} textAnchor="end">
        MJ m⁻² d⁻¹
      </text>
    </ChartFrame>
  );
}

/** What comes to the surface and what leaves it; a flux against its usual direction changes sides. */
export function sidesOf({ fluxes }: Pick<SiteBudget, 'fluxes'>): { incoming: Part[]; outgoing: Part[] } {
  const incoming: Part[] = [];
  const outgoing: Part[] = [];
  for (const { symbol, name, mj_m2_d: value } of fluxes) {
    if (value === null) return { incoming: [], outgoing: [] };
    if (symbol === 'Rn' || value === 0) continue;
    const comes = (symbol === 'Rns') === value > 0;
    (comes ? incoming : outgoing).push({ symbol, name: turned(symbol, value) ?? name, value: Math.abs(value), look: LOOKS[symbol] });
  }
  return { incoming, outgoing };
}

function turned(symbol: string, value: number): string | null {
  if (value > 0) return null;
  if (symbol === 'H') return 'Sensible heat brought by the air';
  return symbol === 'G' ? 'Heat out of the soil' : null;
}

function sumOf(parts: readonly Part[]): number {
  return parts.reduce((sum, part) => sum + part.value, 0);
}

function wordsOf(parts: readonly Part[]): string {
  return parts.map((part) => `${part.symbol} ${plain(part.value, 2)}`).join(', ');
}

function Bar({ name, parts, y, x }: { name: string; parts: readonly Part[]; y: number; x: (value: number) => number }) {
  let before = 0;
  return (
    <g>
      <text className={styles.value} x={0} y={y + BAR / 2} dy="0.35em">
        {name}
      </text>
      {parts.map((part) => {
        const [from, to] = [x(before), x(before + part.value)];
        before += part.value;
        return (
          <g key={part.symbol}>
            <rect className={part.look} x={from} y={y} width={Math.max(1, to - from)} height={BAR}>
              <title>{`${part.name}: ${plain(part.value, 2)} MJ m⁻² d⁻¹`}</title>
            </rect>
            {to - from >= LABEL_ROOM ? (
              <g>
                <rect className={styles.plate} x={(from + to) / 2 - 35} y={y + BAR / 2 - 11} width={70} height={22} rx={3} />
                <text className={styles.value} x={(from + to) / 2} y={y + BAR / 2} dy="0.35em" textAnchor="middle">
                  {part.symbol} {plain(part.value, 2)}
                </text>
              </g>
            ) : (
              <text className={styles.value} x={(from + to) / 2} y={y + BAR + 15} textAnchor="middle">
                {part.symbol} {plain(part.value, 2)}
              </text>
            )}
          </g>
        );
      })}
    </g>
  );
}

/** The budget in three units, and how it closes. */
export function BudgetTable({ budget }: { budget: SiteBudget }) {
  const pick = (symbol: string) => budget.fluxes.find((flux) => flux.symbol === symbol)?.mj_m2_d ?? Number.NaN;
  const [rn, g, latent, sensible] = ['Rn', 'G', 'λE', 'H'].map(pick);
  return (
    <>
      <DataTable
        caption={`Energy budget of ${longDate(budget.date)}`}
        rows={budget.fluxes}
        rowKey={(flux) => flux.symbol}
        columns={[
          {
            key: 'flux',
            head: 'Flux',
            rowHead: true,
            cell: (flux) => (
              <>
                <var>{flux.symbol}</var> {flux.name}
              </>
            ),
          },
          { key: 'mj', head: 'Energy', unit: 'MJ m⁻² d⁻¹', numeric: true, cell: (flux) => plain(flux.mj_m2_d, 2) },
          { key: 'w', head: 'Mean of the day', unit: 'W m⁻²', numeric: true, cell: (flux) => plain(flux.w_m2, 1) },
          { key: 'mm', head: 'As evaporation', unit: 'mm d⁻¹', numeric: true, cell: (flux) => plain(flux.mm, 2) },
        ]}
      />
      {Number.isFinite(rn) ? (
        <p className="small muted">
          Rn = G + λE + H: {plain(g, 2)} + {plain(latent, 2)} + {plain(sensible, 2)} = {plain(rn, 2)} MJ m⁻² d⁻¹ (FAO-56 Eq. 1; G = 0 over a
          day, Eq. 42). 2.45 MJ m⁻² evaporate 1 mm; 1 MJ m⁻² d⁻¹ is 11.57 W m⁻².
        </p>
      ) : null}
    </>
  );
}
