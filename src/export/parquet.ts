import type { Result } from '../result/result.js';
import type { BlockRow, BoatSeries, RaceSeries } from '../result/series.js';
import { toKnots } from '../math/units.js';
import { finite, legColumns } from './columns.js';
import type { Column } from './columns.js';

/**
 * Legs and settled spells of all boats in one Parquet table: `level` says which a row is. A leg's row has the columns
 * of the table of legs; a spell's (a block of settled close-hauled sailing, 30 to 40 s) has its own means under the
 * `steady_` names, without errors.
 */
export async function parquetBytes(result: Result, series: RaceSeries): Promise<Uint8Array> {
  const { parquetWriteBuffer } = await import('hyparquet-writer');
  const columns = parquetColumns(result, series);
  const columnData = columns.map(({ name, type, values }) => ({ name, ...typed(type, values), nullable: true }));
  return new Uint8Array(parquetWriteBuffer({ columnData, createdBy: `legwork ${result.program.version}` }));
}

/** The columns of that table: first all legs, then all spells. */
export function parquetColumns(result: Result, series: RaceSeries): Column[] {
  const legs = legColumns(result);
  const spells = series.boats.flatMap((boat, i) =>
    boat.blocks.map((block) => spellCells(boat, block, result.boats[i]?.sailor ?? boat.name, result)),
  );
  const level: Column = {
    name: 'level',
    type: 'text',
    values: [...legs[0].values.map(() => 'leg'), ...spells.map(() => 'spell')],
  };
  const tack: Column = {
    name: 'tack',
    type: 'text',
    values: [...legs[0].values.map(() => null), ...spells.map((spell) => spell.get('tack') ?? null)],
  };
  const twd: Column = {
    name: 'twd_deg',
    type: 'number',
    values: [...legs[0].values.map(() => null), ...spells.map((spell) => spell.get('twd_deg') ?? null)],
  };
  const rest = legs.map((column) => ({
    ...column,
    values: [...column.values, ...spells.map((spell) => spell.get(column.name) ?? null)],
  }));
  return [level, ...rest, tack, twd];
}

type Cells = Map<string, string | number | null>;

function spellCells(boat: BoatSeries, block: BlockRow, sailor: string, result: Result): Cells {
  const leg = result.boats.find(({ name }) => name === boat.name)?.legs[block.leg];
  const time = (row: number): string => new Date((boat.t0 + row) * 1000).toISOString();
  return new Map<string, string | number | null>([
    ['boat', boat.name],
    ['sailor', sailor],
    ['leg', block.leg + 1],
    ['kind', leg?.kind ?? null],
    ['lap', leg?.lap ?? null],
    ['start', time(block.from)],
    ['end', time(block.to)],
    ['seconds', block.to - block.from],
    ['steady_seconds', block.to - block.from],
    ['steady_gamma_deg', finite(Math.abs(block.gamma))],
    ['steady_speed_kn', finite(toKnots(block.speed))],
    ['steady_vmg_kn', finite(toKnots(block.vmg))],
    ['steady_tws_kn', finite(toKnots(block.tws))],
    ['steady_beta_deg', finite(block.beta)],
    ['tack', block.tack],
    ['twd_deg', finite(block.twd)],
  ]);
}

/** Values in the form the writer wants; empty cells are null. */
function typed(type: Column['type'], values: Column['values']) {
  switch (type) {
    case 'text':
      return { type: 'STRING' as const, data: [...values] };
    case 'time':
      return { type: 'TIMESTAMP' as const, data: values.map((v) => (v === null ? null : new Date(v))) };
    case 'count':
      return { type: 'INT32' as const, data: [...values] };
    case 'number':
      return { type: 'DOUBLE' as const, data: [...values] };
  }
}
