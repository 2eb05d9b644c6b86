import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { Figures } from '../../core/index.js';
import { figureAt } from './columns.js';
import { FRONT_FORMAT } from './contract.js';
import { fileError, isSystemError, UserError } from './user-error.js';

/** A design of a finished run in the figures of its goal. */
export interface FrontFilePoint {
  /** File of the design, relative to the run directory. */
  readonly design: string;
  readonly level: number;
  readonly brightness: number;
  readonly impurity: number;
}

/** What front.json of a finished run says. */
export interface FrontFile {
  readonly directory: string;
  readonly title: string;
  readonly hash: string;
  readonly version: string;
  /** Paths of the figures of the goal, such as `collected.multiphoton`. */
  readonly impurity: string;
  readonly brightness: string;
  /** Path of the figure on a third axis; null for none. */
  readonly third: string | null;
  /** Whether the signal stands behind a filter; null without points. */
  readonly filtered: boolean | null;
  /** How phonons were treated, each method once. */
  readonly phonons: readonly string[];
  /** By brightness. */
  readonly points: readonly FrontFilePoint[];
}

interface ContentPoint {
  readonly level: number;
  /** Bound of a third axis; null or left out: none. */
  readonly slice?: number | null;
  readonly design: string;
  readonly figures: Figures;
}

/** The part of front.json that is read back. */
export interface Content {
  readonly format: string;
  readonly version: string;
  readonly study: { readonly title: string; readonly hash: string };
  readonly goal: {
    readonly impurity: string;
    readonly brightness: string;
    readonly third?: { readonly figure: string } | null;
  };
  readonly points: readonly ContentPoint[];
  readonly best: ContentPoint | null;
}

async function textOf(directory: string, path: string): Promise<string> {
  try {
    return await readFile(path, 'utf8');
  } catch (error) {
    if (isSystemError(error) && error.code === 'ENOENT') {
      throw new UserError(
        `${directory}: holds no finished run (${path} is missing); pulsewright optimize … --out ${directory} makes or finishes one`,
      );
    }
    throw fileError(error, path);
  }
}

function isContent(value: unknown): value is Content {
  if (value === null || typeof value !== 'object') return false;
  const { version, study, goal, points, best } = value as Record<string, unknown>;
  const texts = (node: unknown, ...keys: string[]) =>
    node !== null &&
    typeof node === 'object' &&
    keys.every((key) => typeof (node as Record<string, unknown>)[key] === 'string');
  const isPoint = (point: unknown) =>
    texts(point, 'design') &&
    typeof (point as Content['points'][0]).level === 'number' &&
    typeof (point as Content['points'][0]).figures?.phonons?.method === 'string';
  return (
    typeof version === 'string' &&
    texts(study, 'title', 'hash') &&
    texts(goal, 'impurity', 'brightness') &&
    Array.isArray(points) &&
    points.every(isPoint) &&
    (best === null || best === undefined || isPoint(best))
  );
}

function contentOf(text: string, path: string): Content {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch {
    throw new UserError(`${path}: is no JSON document; needs ${FRONT_FORMAT}`);
  }
  const format = (value as Partial<Content> | null)?.format;
  if (format !== FRONT_FORMAT) {
    const found = typeof format === 'string' ? `the format ${format.slice(0, 80)}` : 'no format';
    throw new UserError(`${path}: has ${found}; this version reads ${FRONT_FORMAT}`);
  }
  if (!isContent(value)) throw new UserError(`${path}: is damaged; --resume of its run writes it anew`);
  return { ...value, best: value.best ?? null };
}

/**
 * What front.json of a finished run says.
 * @throws UserError when there is none, or one of another format
 */
export async function frontContent(directory: string): Promise<Content> {
  const path = join(directory, 'front.json');
  return contentOf(await textOf(directory, path), path);
}

/**
 * Reads the front of a finished run, of one with a third axis the slice without a bound; nothing is evaluated again.
 * @throws UserError when there is none, or one of another format
 */
export async function readFront(directory: string): Promise<FrontFile> {
  const { study, goal, version, points } = await frontContent(directory);
  const open = points.filter(({ slice }) => (slice ?? null) === null);
  const read = open.flatMap(({ design, level, figures }): FrontFilePoint[] => {
    const [brightness, impurity] = [figureAt(figures, goal.brightness), figureAt(figures, goal.impurity)];
    return brightness === null || impurity === null ? [] : [{ design, level, brightness, impurity }];
  });
  return {
    directory,
    version,
    ...{ title: study.title, hash: study.hash, impurity: goal.impurity, brightness: goal.brightness },
    third: goal.third?.figure ?? null,
    filtered: points.length === 0 ? null : points[0].figures.filtered !== null,
    phonons: [...new Set(points.map(({ figures }) => figures.phonons.method))].sort(),
    points: read.sort((a, b) => a.brightness - b.brightness),
  };
}
