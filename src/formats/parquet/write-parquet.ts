/** Writes a table as Apache Parquet, a row group at a time, so that pandas and R open it in one line. */
import { ByteWriter, ParquetWriter, schemaFromColumnData } from 'hyparquet-writer';

export interface ParquetColumn {
  name: string;
  type: 'INT32' | 'DOUBLE';
}

/** The file's bytes in pieces. `groups` gives the values of each row group, column by column. */
export function* parquetPieces(
  columns: ParquetColumn[],
  groups: Iterable<(number[] | Float64Array)[]>,
): Iterable<Uint8Array> {
  const withData = (group: (number[] | Float64Array)[]) =>
    columns.map(({ name, type }, i) => ({ name, type, data: Array.from(group[i]!), nullable: false }));
  const schema = schemaFromColumnData({ columnData: withData(columns.map(() => [])) });
  const writer = new ByteWriter();
  const parquet = new ParquetWriter({ writer, schema, codec: 'SNAPPY', createdBy: 'Burette' });
  const taken = (): Uint8Array => {
    const bytes = new Uint8Array(writer.buffer.slice(0, writer.index));
    writer.index = 0;
    return bytes;
  };
  for (const group of groups) {
    parquet.write({
      columnData: withData(group).map(({ name, data }) => ({ name, data })),
      rowGroupSize: group[0]!.length,
    });
    yield taken();
  }
  parquet.finish();
  yield taken();
}
