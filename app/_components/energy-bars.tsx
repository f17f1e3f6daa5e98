import { scaleLinear } from 'd3-scale';
import type { SiteDay } from '../../lib/http/contract/rest.ts';
import { ChartFrame, markClass } from './chart-frame.tsx';
import { longDate } from './date-words.ts';
import styles from './energy-bars.module.css';
import { plain, significant } from './figures.ts';

const LEFT = 250;
const RIGHT = 820;
const ROW = 34;

interface Flux {
  readonly symbol: string;
  readonly name: string;
  /** positive towards the surface for radiation, away from it for λET and H */
  readonly value: number;
  readonly gain: boolean;
}

/** The day's energy at the reference surface: what arrives, what leaves as long waves, what evaporates water and what warms the air. */
export function EnergyBars({ day }: { day: SiteDay }) {
  const fluxes = fluxesOf(day);
  const values = fluxes.map((flux) => flux.value).filter(Number.isFinite);
  if (values.length === 0) return <p>No energy budget on {longDate(day.date)}: the site has no temperature that day.</p>;
  const x = scaleLinear()
    .domain([Math.min(0, ...values), Math.max(0, ...values)])
    .nice()
    .range([LEFT, RIGHT]);
  const bottom = 14 + fluxes.length * ROW;
  return (
    <ChartFrame
      id="energy"
      title={`Energy budget of ${longDate(day.date)}, MJ m⁻² d⁻¹`}
      description={fluxes.map((flux) => `${flux.name} ${plain(flux.value, 2)}`).join('; ')}
      width={960}
      height={bottom + 40}
      below={<Closure day={day} />}
    >
      {fluxes.map((flux, at) => (
        <FluxBar key={flux.symbol} flux={flux} y={10 + at * ROW} x={x} />
      ))}
      <line className={markClass('quiet')} x1={x(0)} x2={x(0)} y1={4} y2={bottom} />
      {x.ticks(6).map((tick) => (
        <text key={tick} className={styles.tick} x={x(tick)} y={bottom + 18} textAnchor="middle">
          {plain(tick, 0)}
        </text>
      ))}
    </ChartFrame>
  );
}

function FluxBar({ flux, y, x }: { flux: Flux; y: number; x: (value: number) => number }) {
  if (!Number.isFinite(flux.value)) return null;
  const [from, to] = [Math.min(x(0), x(flux.value)), Math.max(x(0), x(flux.value))];
  return (
    <g>
      <text x={0} y={y + 16}>
        {flux.symbol}: {flux.name}
      </text>
      <rect className={flux.gain ? styles.gain : styles.use} x={from} y={y + 2} width={Math.max(1, to - from)} height={20} />
      <text className={styles.value} x={flux.value < 0 ? from - 6 : to + 6} y={y + 16} textAnchor={flux.value < 0 ? 'end' : 'start'}>
        {flux.value > 0 ? '+' : ''}
        {plain(flux.value, 2)}
      </text>
    </g>
  );
}

function fluxesOf(day: SiteDay): Flux[] {
  const of = (value: number | null) => value ?? Number.NaN;
  return [
    { symbol: 'Rns', name: 'net short waves in', value: of(day.net_shortwave_mj_m2_d), gain: true },
    { symbol: '−Rnl', name: 'net long waves out', value: -of(day.net_longwave_mj_m2_d), gain: true },
    { symbol: 'Rn', name: 'net radiation', value: of(day.net_radiation_mj_m2_d), gain: true },
    { symbol: 'λET', name: 'evaporating water', value: of(day.latent_heat_mj_m2_d), gain: false },
    { symbol: 'H', name: 'warming the air (− cools it)', value: of(day.sensible_heat_mj_m2_d), gain: false },
  ];
}

function Closure({ day }: { day: SiteDay }) {
  const [rns, rnl, rn] = [day.net_shortwave_mj_m2_d, day.net_longwave_mj_m2_d, day.net_radiation_mj_m2_d];
  return (
    <div className="formula">
      <div>
        Rn = Rns − Rnl = {significant(rns, 4)} − {significant(rnl, 4)} = {significant(rn, 4)} MJ m⁻² d⁻¹{' '}
        <span className="source">FAO-56 Eq. 40</span>
      </div>
      <div>
        Rn = G + λET + H, G = 0 over a day: {significant(day.latent_heat_mj_m2_d, 4)} + {significant(day.sensible_heat_mj_m2_d, 4)} ={' '}
        {significant((day.latent_heat_mj_m2_d ?? Number.NaN) + (day.sensible_heat_mj_m2_d ?? Number.NaN), 4)} MJ m⁻² d⁻¹{' '}
        <span className="source">FAO-56 Eq. 1 and 42</span>
      </div>
    </div>
  );
}
