/** The document against the route files, and against what OpenAPI 3.1 demands of a document (OpenAPI Specification 3.1.0, sections 4.8.8 to 4.8.24). */
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { openApiDocument } from '../../lib/http/openapi.ts';
import { describeApi, describeSchemas } from '../../lib/http/openapi-text.ts';

const document = openApiDocument() as {
  openapi: string;
  paths: Record<
    string,
    Record<string, { operationId: string; parameters: { in: string; name: string; required: boolean }[]; responses: object }>
  >;
  components: { schemas: Record<string, object> };
};

function routeFiles(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) =>
    entry.isDirectory() ? routeFiles(join(folder, entry.name)) : entry.name === 'route.ts' ? [join(folder, entry.name)] : [],
  );
}

/** Path and methods of a route file; the tile's own extension is part of its last segment. */
function callsOf(file: string): string[] {
  const path = file
    .replace(/^app/, '')
    .replace(/\/route\.ts$/, '')
    .replace(/\[(\w+)\]/g, '{$1}')
    .replace(/(\/tiles\/.*\{y\})$/, '$1.mvt');
  const methods = readFileSync(file, 'utf8').matchAll(/export (?:const|async function|\{) ?(GET|POST|PATCH|DELETE|PUT)/g);
  return [...methods].map((match) => `${match[1]} ${path}`);
}

describe('openApiDocument', () => {
  it('has every call of a route file, and no other', () => {
    const inDocument = Object.entries(document.paths).flatMap(([path, methods]) =>
      Object.keys(methods).map((method) => `${method.toUpperCase()} ${path}`),
    );
    // the file that answers every other address with 404 is no call
    const inFiles = routeFiles('app/api/v1')
      .filter((file) => !file.includes('[[...rest]]'))
      .flatMap(callsOf);
    expect(inFiles.length).toBeGreaterThan(50);
    expect(inDocument.sort()).toEqual(inFiles.sort());
  });

  it('declares each parameter of a path, as required', () => {
    for (const [path, methods] of Object.entries(document.paths)) {
      const named = [...path.matchAll(/\{(\w+)\}/g)].map((match) => match[1]).sort();
      for (const operation of Object.values(methods)) {
        const declared = operation.parameters.filter((parameter) => parameter.in === 'path');
        expect(declared.map((parameter) => parameter.name).sort(), path).toEqual(named);
        expect(
          declared.every((parameter) => parameter.required),
          path,
        ).toBe(true);
      }
    }
  });

  it('gives each operation an id of its own', () => {
    const ids = Object.values(document.paths).flatMap((methods) => Object.values(methods).map((operation) => operation.operationId));
    expect(new Set(ids).size).toBe(ids.length);
  });

  it('resolves every reference', () => {
    const references = [...JSON.stringify(document).matchAll(/"\$ref":"#\/components\/schemas\/([^"]+)"/g)].map((match) => match[1]);
    expect(references.length).toBeGreaterThan(50);
    for (const name of references) expect(Object.keys(document.components.schemas)).toContain(name);
  });

  it('answers every refusal with problem details', () => {
    for (const methods of Object.values(document.paths)) {
      for (const operation of Object.values(methods)) {
        const refusals = Object.entries(operation.responses as Record<string, { content?: object }>).filter(
          ([status]) => Number(status) >= 400,
        );
        expect(refusals.length).toBeGreaterThan(3);
        for (const [, response] of refusals) expect(Object.keys(response.content ?? {})).toEqual(['application/problem+json']);
      }
    }
  });

  it('can be put in words for the page', () => {
    const groups = describeApi();
    const runs = groups
      .find((group) => group.name === 'Runs')
      ?.operations.find((operation) => operation.path === '/api/v1/runs/{id}/parcels');
    expect(runs?.parameters.map((parameter) => parameter.name)).toEqual([
      'id',
      'period',
      'from',
      'to',
      'parcel',
      'reach',
      'crop',
      'limit',
      'cursor',
      'units',
    ]);
    expect(runs?.answers.find((answer) => answer.status === '200')?.type).toBe('ParcelPeriodPage');
    expect(
      describeSchemas()
        .find((schema) => schema.id === 'Run')
        ?.members.map((member) => member.name),
    ).toContain('progress');
  });
});
