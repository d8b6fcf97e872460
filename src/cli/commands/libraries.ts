import type { Library } from '#src/formats/library.ts';
import { CommandError, EXIT } from '../exit.ts';
import { columns } from '../table.ts';

/** Lists the libraries, or checks them against their schemas; returns the exit code. */
export async function libraries(options: { readonly check: boolean; readonly json: boolean }): Promise<number> {
  const library = await load();
  const counts = Object.entries(library).map(([name, items]) => [name, items.length] as const);
  if (options.json) {
    const names = Object.entries(library).map(([name, items]) => [name, items.map(nameOf)]);
    process.stdout.write(`${JSON.stringify(options.check ? Object.fromEntries(counts) : Object.fromEntries(names))}\n`);
  } else if (options.check) {
    process.stdout.write(`The libraries hold: ${counts.map(([name, count]) => `${name} ${count}`).join(', ')}.\n`);
  } else {
    process.stdout.write(listing(library));
  }
  return EXIT.done;
}

/** The libraries are part of the program and checked as they are loaded. */
async function load(): Promise<Library> {
  try {
    return (await import('#src/formats/stock-library.ts')).stockLibrary;
  } catch (error) {
    throw new CommandError(
      EXIT.failed,
      `The libraries are not sound.\n${error instanceof Error ? error.message : error}`,
    );
  }
}

const nameOf = (item: { readonly id?: string; readonly grade?: string; readonly method?: string }) =>
  item.id ?? `${item.grade} (${item.method})`;

function listing({ materials, tools, abrasives, grits }: Library): string {
  const part = (title: string, items: readonly { readonly id: string; readonly name: string }[]) =>
    `${title}\n${columns(items.map(({ id, name }) => [id, name]))}\n`;
  const methods = [...new Set(grits.map(({ method }) => method))];
  const grades = methods.map((method) => [
    method,
    grits
      .filter((grit) => grit.method === method)
      .map(({ grade }) => grade)
      .join(' '),
  ]);
  return [
    part('Workpiece materials (workpiece.material)', materials),
    part('Tool materials (tool.material)', tools),
    part('Abrasives (slurry.abrasive)', abrasives),
    `Grades (slurry.grit), by slurry.gritMethod\n${columns(grades)}\n`,
  ].join('\n');
}
