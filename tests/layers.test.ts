import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { dirname, join, relative } from 'node:path';
import ts from 'typescript';
import { describe, expect, test } from 'vitest';

/**
 * The import rule as data. A layer may import itself and what it names; `types` only as types; `packages` by name, and
 * `node:` for Node's own modules. Anything not named is forbidden.
 */
interface Layer {
  readonly imports: readonly string[];
  readonly types?: readonly string[];
  readonly packages?: readonly string[];
  /** Files outside src and renderer it may read, as data. */
  readonly data?: readonly string[];
}

const BELOW_PLANNING = ['src/base', 'src/physics', 'src/metrology', 'src/voxel', 'src/voxel/kernels'];
const BELOW_RUN = [...BELOW_PLANNING, 'src/planning', 'src/picture', 'src/formats'];

const LAYERS: Readonly<Record<string, Layer>> = {
  'src/base': { imports: [] },
  'src/physics': { imports: ['src/base'] },
  'src/metrology': { imports: ['src/base'] },
  'src/voxel/kernels': { imports: ['src/base'] },
  'src/voxel': { imports: ['src/base', 'src/physics', 'src/voxel/kernels'] },
  'src/planning': { imports: BELOW_PLANNING },
  'src/picture': { imports: [...BELOW_PLANNING, 'src/planning'] },
  'src/formats': {
    imports: [...BELOW_PLANNING, 'src/planning'],
    packages: ['zod', 'papaparse', 'fast-png', '@resvg/resvg-wasm', 'svg-pathdata'],
    data: ['resources'],
  },
  'src/run': { imports: BELOW_RUN, data: ['package.json'] },
  'src/host': { imports: ['src/base'], packages: ['node:', 'vite'] },
  'src/cli': {
    imports: [...BELOW_RUN, 'src/run', 'src/host'],
    packages: ['node:', 'commander', 'cli-progress'],
  },
  'src/desktop': { imports: ['src/base', 'src/host'], packages: ['node:', 'electron'] },
  renderer: {
    imports: ['src/run', 'src/base', 'src/physics', 'src/metrology'],
    types: ['src/voxel', 'src/voxel/kernels', 'src/planning', 'src/formats', 'src/desktop'],
    packages: ['vue', 'pinia', 'regl', 'gl-matrix', 'uplot'],
  },
  'renderer/worker': { imports: ['src/run'] },
};

/** Layers without an environment: no clock, no chance, no console, no place of their own. */
const PURE = [
  'src/base',
  'src/physics',
  'src/metrology',
  'src/voxel/kernels',
  'src/voxel',
  'src/planning',
  'src/picture',
];
/** Layers that must give the same bits on every host, so that only exactly rounded functions may be called. */
const SAME_BITS = ['src/base', 'src/physics', 'src/voxel/kernels', 'src/voxel'];
/** Exactly rounded, or exact, by ECMA-262; constants are values of the standard. */
const EXACT_MATH = [
  'abs',
  'sqrt',
  'min',
  'max',
  'floor',
  'round',
  'ceil',
  'trunc',
  'sign',
  'imul',
  'clz32',
  'fround',
  'PI',
  'E',
  'LN2',
  'LN10',
  'LOG2E',
  'LOG10E',
  'SQRT2',
  'SQRT1_2',
];

/** Everything the top level may hold; what .gitignore names is made and not kept. */
const TOP_LEVEL = [
  '.biome.json',
  '.ci',
  '.git',
  '.gitattributes',
  '.github',
  '.gitignore',
  '.npmrc',
  '.editorconfig',
  'CHANGELOG.md',
  'DEVELOPERS.md',
  'LICENSE',
  'README.md',
  'electron-builder.yml',
  'package-lock.json',
  'package.json',
  'renderer',
  'resources',
  'src',
  'tests',
  'tsconfig.json',
];

/** Configuration that stands in a layer's parent folder and belongs to no layer. */
const OUTSIDE = ['src/vite.config.ts', 'renderer/vite.config.ts'];

const names = Object.keys(LAYERS).sort((a, b) => b.length - a.length);

/** The layer a path belongs to: the longest folder that it is in. */
function layerOf(path: string): string | undefined {
  return names.find((name) => path.startsWith(`${name}/`));
}

function filesUnder(folder: string): string[] {
  return readdirSync(folder).flatMap((name) => {
    const path = join(folder, name);
    if (statSync(path).isDirectory()) return filesUnder(path);
    return /\.(ts|mts|mjs|js|vue)$/.test(name) ? [path] : [];
  });
}

interface Import {
  readonly specifier: string;
  readonly typeOnly: boolean;
}

/** A source file's script: all of it, or what a component has between its script tags. */
function scriptOf(path: string, text: string): string {
  if (!path.endsWith('.vue')) return text;
  return [...text.matchAll(/<script[^>]*>([\s\S]*?)<\/script>/g)].map((match) => match[1]).join('\n');
}

function parse(path: string, text: string): ts.SourceFile {
  const kind = /\.m?js$/.test(path) ? ts.ScriptKind.JS : ts.ScriptKind.TS;
  return ts.createSourceFile(path, scriptOf(path, text), ts.ScriptTarget.ESNext, true, kind);
}

function isTypeOnly(node: ts.ImportDeclaration | ts.ExportDeclaration): boolean {
  if (ts.isExportDeclaration(node)) return node.isTypeOnly;
  const clause = node.importClause;
  if (!clause) return false;
  if (clause.phaseModifier === ts.SyntaxKind.TypeKeyword) return true;
  const bound = clause.namedBindings;
  return !clause.name && !!bound && ts.isNamedImports(bound) && bound.elements.every((element) => element.isTypeOnly);
}

/** Every import of a file: declarations, re-exports, import() and require(), types in import('...'). */
function importsOf(file: ts.SourceFile): Import[] {
  const found: Import[] = [];
  const text = (node: ts.Node | undefined) => (node && ts.isStringLiteralLike(node) ? node.text : undefined);
  const visit = (node: ts.Node): void => {
    let specifier: string | undefined;
    let typeOnly = false;
    if (ts.isImportDeclaration(node) || ts.isExportDeclaration(node)) {
      specifier = text(node.moduleSpecifier);
      typeOnly = isTypeOnly(node);
    } else if (ts.isImportTypeNode(node) && ts.isLiteralTypeNode(node.argument)) {
      specifier = text(node.argument.literal);
      typeOnly = true;
    } else if (ts.isCallExpression(node)) {
      const callee = node.expression;
      const loads =
        callee.kind === ts.SyntaxKind.ImportKeyword || (ts.isIdentifier(callee) && callee.text === 'require');
      if (loads) specifier = text(node.arguments[0]);
    }
    if (specifier !== undefined) found.push({ specifier, typeOnly });
    ts.forEachChild(node, visit);
  };
  visit(file);
  return found;
}

/** Path of the file an import names, from the top level; undefined for a package. */
function target(from: string, specifier: string): string | undefined {
  const bare = specifier.replace(/\?.*$/, '');
  if (bare.startsWith('#src/')) return `src/${bare.slice(5)}`;
  return bare.startsWith('.') ? relative('.', join(dirname(from), bare)) : undefined;
}

const short = (path: string) => path.replace(/^src\//, '').replace(/\.(ts|mjs|vue)$/, '');

function isAllowedPackage(specifier: string, layer: Layer): boolean {
  const { packages = [] } = layer;
  return packages.some((name) =>
    name.endsWith(':') ? specifier.startsWith(name) : specifier === name || specifier.startsWith(`${name}/`),
  );
}

/** What an import breaks, as `physics/p.ts -> ../run/r`; null when it breaks nothing. */
function breach(path: string, { specifier, typeOnly }: Import): string | null {
  const name = layerOf(path) as string;
  const layer = LAYERS[name] as Layer;
  const to = target(path, specifier);
  const said = `${path.replace(/^src\//, '')} -> ${specifier}`;
  if (to === undefined) return isAllowedPackage(specifier, layer) ? null : `${said} (package)`;
  const other = layerOf(to);
  if (other === name) return specifier.startsWith('#src/') ? `${said} (write it relative within ${short(name)})` : null;
  if (other === undefined) return layer.data?.some((root) => to === root || to.startsWith(`${root}/`)) ? null : said;
  if (layer.imports.includes(other)) return null;
  return typeOnly && layer.types?.includes(other) ? null : said;
}

/** Uses of what a pure layer has not, or of functions that are not exact, as `file: Math.exp`. */
function foreignUses(path: string, file: ts.SourceFile): string[] {
  const layer = layerOf(path) as string;
  const uses: string[] = [];
  const forbidden = new Set(['Date', 'console', 'performance', 'process', 'globalThis', 'Intl', 'setTimeout', 'fetch']);
  const visit = (node: ts.Node): void => {
    if (ts.isPropertyAccessExpression(node) && ts.isIdentifier(node.expression) && node.expression.text === 'Math') {
      const name = node.name.text;
      const inexact = SAME_BITS.includes(layer) && !EXACT_MATH.includes(name);
      if (name === 'random' || inexact) uses.push(`${path}: Math.${name}`);
    }
    const inName = ts.isPropertyAccessExpression(node.parent) && node.parent.name === node;
    if (ts.isIdentifier(node) && forbidden.has(node.text) && !inName && !ts.isPropertyAssignment(node.parent)) {
      uses.push(`${path}: ${node.text}`);
    }
    ts.forEachChild(node, visit);
  };
  ts.forEachChild(file, visit);
  return uses;
}

const sources = ['src', 'renderer']
  .filter((folder) => existsSync(folder))
  .flatMap(filesUnder)
  .map((path) => path.replaceAll('\\', '/'));
const parsed = new Map(sources.map((path) => [path, parse(path, readFileSync(path, 'utf8'))]));

describe('the import rule', () => {
  // Every source file is in a layer, so none escapes the rule.
  test('covers every file', () => {
    const stray = sources.filter((path) => layerOf(path) === undefined && !OUTSIDE.includes(path));
    expect(stray).toEqual([]);
  });

  // Import only from the left: base <- physics, metrology, kernels <- voxel <- planning <- picture, formats <- run <- hosts.
  test('holds for every import', () => {
    const breaches = [...parsed].flatMap(([path, file]) =>
      layerOf(path) === undefined ? [] : importsOf(file).map((one) => breach(path, one)),
    );
    expect(breaches.filter((found) => found !== null)).toEqual([]);
  });

  // The layers are a partial order: nobody is allowed to import one that is allowed to import them.
  test('has no circle', () => {
    const circles = Object.entries(LAYERS).flatMap(([name, { imports }]) =>
      imports.filter((other) => LAYERS[other]?.imports.includes(name)).map((other) => `${name} <-> ${other}`),
    );
    expect(circles).toEqual([]);
  });

  // The rule catches what it is for, or the tests above prove nothing; the message names file and import.
  test('catches a breach', () => {
    const reach = (path: string, text: string) => importsOf(parse(path, text)).map((one) => breach(path, one));
    expect(reach('src/physics/p.ts', "import { r } from '../run/r';")).toEqual(['physics/p.ts -> ../run/r']);
    expect(reach('src/base/b.ts', "export { z } from 'zod';")).toEqual(['base/b.ts -> zod (package)']);
    expect(reach('src/voxel/v.ts', "const x = await import('#src/planning/verdict.ts');")).toEqual([
      'voxel/v.ts -> #src/planning/verdict.ts',
    ]);
    expect(reach('renderer/p.vue', "<script setup>import type { V } from '#src/voxel/v.ts';</script>")).toEqual([null]);
    expect(reach('renderer/p.vue', "<script setup>import { v } from '#src/voxel/v.ts';</script>")).toEqual([
      'renderer/p.vue -> #src/voxel/v.ts',
    ]);
    expect(reach('src/formats/f.ts', "import a from '../../resources/a.json' with { type: 'json' };")).toEqual([null]);
    expect(reach('src/run/r.ts', "import a from '../../resources/a.json' with { type: 'json' };")).toEqual([
      'run/r.ts -> ../../resources/a.json',
    ]);
  });
});

describe('the pure layers', () => {
  // No clock, no chance, no console; and where bits must be equal on every host, none of the host's own functions.
  test('use nothing of the host', () => {
    const uses = [...parsed].flatMap(([path, file]) =>
      PURE.includes(layerOf(path) ?? '') ? foreignUses(path, file) : [],
    );
    expect(uses).toEqual([]);
  });

  // The check catches what it is for.
  test('would be caught using it', () => {
    const uses = (path: string, text: string) => foreignUses(path, parse(path, text));
    expect(uses('src/voxel/v.ts', 'const x = Math.exp(1) + Math.sqrt(2);')).toEqual(['src/voxel/v.ts: Math.exp']);
    expect(uses('src/picture/p.ts', 'const x = Math.exp(1) + Math.random() + Date.now();')).toEqual([
      'src/picture/p.ts: Math.random',
      'src/picture/p.ts: Date',
    ]);
  });
});

describe('the top level', () => {
  // A newcomer finds the right room in a minute: nothing lies about in the hall.
  test('holds only what it may', () => {
    const ignored = readFileSync('.gitignore', 'utf8')
      .split('\n')
      .map((line) => line.trim().replace(/\/$/, ''))
      .filter((line) => line !== '');
    const matches = (name: string, pattern: string) =>
      pattern.startsWith('*') ? name.endsWith(pattern.slice(1)) : name === pattern;
    const foreign = readdirSync('.').filter(
      (name) => !TOP_LEVEL.includes(name) && !ignored.some((pattern) => matches(name, pattern)),
    );
    expect(foreign).toEqual([]);
  });
});
