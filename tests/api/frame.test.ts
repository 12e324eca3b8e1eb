// What holds for every route: problem details, parsing, answers given once, the description, the client's files.
import { readFileSync } from 'node:fs';
import { mkdir, mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { jsonPointer, problemSchema } from '@halfdeep/contracts';
import { Experiment, RepeatedRequest } from '@halfdeep/store';
import { type Router } from 'express';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { VERSION } from '../../apps/api/src/health/version';
import { openApiPath } from '../../apps/api/src/http/openapi';
import { PASSWORD, script, somebody, startDeskApi, type DeskApi, type Script } from './desk-harness';

let api: DeskApi;
let modeller: Script;
let webFolder: string;
beforeAll(async () => {
  webFolder = await mkdtemp(join(tmpdir(), 'halfdeep-web-'));
  await mkdir(join(webFolder, 'fonts'));
  await writeFile(join(webFolder, 'index.html'), '<!doctype html><title>Halfdeep</title>');
  await writeFile(join(webFolder, 'main-QTHWFMUQ.js'), 'export {};');
  await writeFile(join(webFolder, 'fonts', 'inter.woff2'), 'no font');
  api = await startDeskApi({}, { webFolder });
  modeller = await script(api, await somebody(api, 'modeller', 'modeller'));
});
afterAll(async () => {
  await api.close();
  await rm(webFolder, { recursive: true });
});

describe('problem details', () => {
  it('name every wrong field of a body by its pointer', async () => {
    const answer = await modeller.post('/api/experiments', { question: 'Why?', colour: 'blue' }).expect(422);
    expect(answer.headers['content-type']).toMatch(/^application\/problem\+json/);
    const problem = problemSchema.parse(answer.body);
    expect(problem).toMatchObject({ type: 'about:blank', status: 422, title: 'The request is not right' });
    expect(problem.errors).toContainEqual({
      pointer: '/question',
      detail: 'A question has at least 8 characters.',
    });
    expect(problem.detail).toContain('A question has at least 8 characters (at /question).');
    expect(problem.errors).toHaveLength(2);
  });

  it('escape pointers as RFC 6901 says', () => {
    expect(jsonPointer(['a/b', 0, 'c~d'])).toBe('/a~1b/0/c~0d');
    expect(jsonPointer([])).toBe('');
  });

  it('say that a body is no JSON, is too large, is missing', async () => {
    const send = (body: string) =>
      request(api.server)
        .post('/api/experiments')
        .set('authorization', `Bearer ${modeller.token}`)
        .set('content-type', 'application/json')
        .send(body);
    expect((await send('{"question":').expect(400)).body.detail).toBe('The body is not valid JSON.');
    const large = await send(JSON.stringify({ question: 'x'.repeat(1_100_000) })).expect(413);
    expect(large.body.detail).toContain('larger than');
    await modeller.post('/api/experiments').expect(422);
  });

  it('answer what is not there with 404: an address, a thing, a wrong id with 400', async () => {
    const nowhere = await modeller.get('/api/elsewhere').expect(404);
    expect(nowhere.body.detail).toBe('There is nothing at GET /api/elsewhere.');
    await modeller.get('/api/experiments/7f0e5a1c-9a53-4a3d-9df5-2f7c0f6f6c11').expect(404);
    await modeller.get('/api/experiments/seven').expect(400);
    await modeller.get('/api/runs?pageSize=1000').expect(400);
  });

  it('take an address or a search that is none for the caller’s mistake', async () => {
    const broken = await modeller.get('/api/experiments/%').expect(400);
    expect(broken.body.detail).toContain('%');
    await request(api.server).get('/%').expect(400);
    const unseen = await modeller.get('/api/runs?q=a%00b').expect(400);
    expect(unseen.body.errors).toEqual([
      { pointer: '/q', detail: 'What is searched for is one line, without invisible characters.' },
    ]);
    const question = 'Does a \u0000 in the middle do harm?';
    const made = await modeller.post('/api/experiments', { question, notes: '\u0000' }).expect(422);
    expect((made.body as { errors: { pointer: string }[] }).errors.map(({ pointer }) => pointer)).toEqual([
      '/question',
      '/notes',
    ]);
  });

  it('say in words what belongs in a field, what arrived, and never the value of a text', async () => {
    const body = { email: 'a@desk.example', password: ['hunter'], admin: true };
    const answer = await request(api.server).post('/api/session').send(body).expect(422);
    expect(answer.body.errors).toEqual([
      { pointer: '/password', detail: 'A text belongs here; a list arrived.' },
      { pointer: '', detail: 'Nothing here is called “admin”.' },
    ]);
    expect(answer.body.detail).toContain('So is one more place.');
    expect(answer.text).not.toContain('hunter');
    const paged = await modeller.get('/api/runs?page=0&pageSize=101').expect(400);
    expect((paged.body as { errors: { detail: string }[] }).errors.map(({ detail }) => detail)).toEqual([
      'This must be at least 1; 0 arrived.',
      'This must be at most 100; 101 arrived.',
    ]);
  });

  it('keep what failed inside to the log', async () => {
    const find = Experiment.findByPk.bind(Experiment);
    Experiment.findByPk = () => Promise.reject(new Error('SQLITE_CORRUPT: secret path /srv/x'));
    try {
      const id = '7f0e5a1c-9a53-4a3d-9df5-2f7c0f6f6c11';
      const answer = await modeller.get(`/api/experiments/${id}`).expect(500);
      expect(problemSchema.parse(answer.body).title).toBe('Server error');
      expect(answer.text).not.toContain('SQLITE');
    } finally {
      Experiment.findByPk = find;
    }
  });
});

describe('Idempotency-Key', () => {
  const question = 'Is this asked once?';
  const ask = (key: string, body: object = { question }) =>
    modeller.post('/api/experiments', body).set('idempotency-key', key);

  it('gives a repeated POST the answer of the first, and does it once', async () => {
    const first = await ask('nervous-finger').expect(201);
    const again = await ask('nervous-finger').expect(201);
    expect(again.body).toEqual(first.body);
    expect(await Experiment.count({ where: { question } })).toBe(1);
  });

  it('does it once when both arrive together', async () => {
    const body = { question: 'Do these two arrive together?' };
    const both = await Promise.all([ask('double', body), ask('double', body)]);
    expect(both.map((answer) => answer.status)).toEqual([201, 201]);
    expect(both[0].body).toEqual(both[1].body);
    expect(await Experiment.count({ where: body })).toBe(1);
  });

  it('refuses a key that was used for something else, and one that is none', async () => {
    await ask('reused').expect(201);
    const other = await ask('reused', { question: 'Is this another question?' }).expect(422);
    expect(other.body.detail).toContain('another request');
    await ask('with spaces').expect(400);
  });

  it('is each person’s own, and forgotten after a day', async () => {
    const other = await script(api, await somebody(api, 'other', 'modeller'));
    const body = { question: 'May two people use one key?' };
    await ask('shared', body).expect(201);
    await other.post('/api/experiments', body).set('idempotency-key', 'shared').expect(201);
    expect(await Experiment.count({ where: body })).toBe(2);
    const started = api.clock.now;
    api.clock.now = new Date(started.getTime() + 25 * 3600_000);
    await ask('shared', body).expect(201);
    expect(await Experiment.count({ where: body })).toBe(3);
    expect(await RepeatedRequest.count({ where: { key: 'shared' } })).toBe(1); // old ones are swept
    api.clock.now = started;
  });

  it('keeps nothing of a request that carries a password or brings a token', async () => {
    const { email } = await somebody(api, 'scripted', 'modeller');
    const signIn = () =>
      modeller.post('/api/session?token=1', { email, password: PASSWORD }).set('idempotency-key', 'sign-in');
    const [one, other] = [await signIn().expect(200), await signIn().expect(200)];
    expect(one.body.accessToken).toBeTruthy();
    expect(other.headers['set-cookie']).toHaveLength(3); // signed in, not only told so
    expect(await RepeatedRequest.count({ where: { key: 'sign-in' } })).toBe(0);
  });

  it('does not keep refusals: put right, the same key works', async () => {
    await ask('corrected', { question: 'No?' }).expect(422);
    await ask('corrected', { question: 'Is it right now?' }).expect(201);
  });
});

interface Operation {
  operationId: string;
  summary: string;
  description: string;
  parameters?: { name: string; in: string; required?: boolean; schema: object }[];
  requestBody?: { content: Record<string, unknown> };
  responses: Record<string, { description: string; content?: Record<string, unknown> }>;
}
interface Document {
  openapi: string;
  info: { title: string; version: string };
  paths: Record<string, Record<string, Operation>>;
  components: { schemas: Record<string, object>; securitySchemes: object };
}

describe('the description of the API', () => {
  let document: Document;
  beforeAll(async () => {
    document = (await request(api.server).get('/api/openapi.json').expect(200)).body as Document;
  });
  const operations = () =>
    Object.entries(document.paths).flatMap(([path, methods]) =>
      Object.entries(methods).map(([method, operation]) => ({ path, method, operation })),
    );

  it('lists every route that express has mounted under /api, and nothing else', () => {
    const mounted: string[] = [];
    const walk = (stack: Router['stack']) => {
      for (const layer of stack) {
        if (layer.route)
          for (const method of Object.keys((layer.route as unknown as { methods: object }).methods))
            mounted.push(`${method} ${openApiPath(layer.route.path)}`);
        const inner = (layer.handle as unknown as { stack?: Router['stack'] }).stack;
        if (inner) walk(inner);
      }
    };
    walk((api.app as unknown as { router: Router }).router.stack);
    // The client's pages are the one route outside /api.
    const ofApi = mounted.filter((text) => !text.includes('{*path}'));
    expect(ofApi.length).toBeGreaterThan(25);
    expect(
      operations()
        .map(({ method, path }) => `${method} ${path}`)
        .sort(),
    ).toEqual(ofApi.sort());
  });

  it('is OpenAPI 3.1 in its structure', () => {
    expect(document.openapi).toBe('3.1.0');
    expect(document.info).toMatchObject({ title: 'Halfdeep', version: VERSION });
    const ids = operations().map(({ operation }) => operation.operationId);
    expect(new Set(ids).size).toBe(ids.length);
    for (const { path, operation } of operations()) {
      expect(operation.summary, path).not.toBe('');
      expect(operation.description, path).toMatch(/^Who: /);
      const codes = Object.keys(operation.responses);
      expect(
        codes.some((code) => /^2\d\d$/.test(code)),
        path,
      ).toBe(true);
      for (const { description } of Object.values(operation.responses)) expect(description).not.toBe('');
      const inPath = [...path.matchAll(/\{(\w+)\}/g)].map((match) => match[1]).sort();
      const declared = (operation.parameters ?? []).filter((one) => one.in === 'path');
      expect(declared.map((one) => one.name).sort(), path).toEqual(inPath);
      for (const one of declared) expect(one.required, path).toBe(true);
    }
  });

  it('refers to nothing that it does not contain', () => {
    const references = [...JSON.stringify(document).matchAll(/"\$ref":"#\/components\/schemas\/([^"]+)"/g)].map(
      (match) => match[1],
    );
    expect(references.length).toBeGreaterThan(20);
    for (const name of references) expect(document.components.schemas).toHaveProperty([name]);
    expect(document.components.schemas).toHaveProperty('Setup');
    expect(document.components.schemas).toHaveProperty('Problem');
  });

  it('has the version of package.json', () => {
    const manifest = JSON.parse(readFileSync(new URL('../../package.json', import.meta.url), 'utf8')) as object;
    expect(manifest).toMatchObject({ version: VERSION });
  });
});

describe('health', () => {
  it('says what answers', async () => {
    const { body } = await request(api.server).get('/api/health').expect(200);
    expect(body).toMatchObject({ ok: true, version: VERSION, schema: expect.stringMatching(/^2026\./) });
  });
});

describe('the client’s files', () => {
  it('are kept for ever when their name has a hash, and asked for again otherwise', async () => {
    const script = await request(api.server).get('/main-QTHWFMUQ.js').expect(200);
    expect(script.headers['cache-control']).toBe('public, max-age=31536000, immutable');
    expect((await request(api.server).get('/fonts/inter.woff2').expect(200)).headers['cache-control']).toBe('no-cache');
  });

  it('give the page at every address of the client, and 404 for a file that is not there', async () => {
    for (const path of ['/', '/sign-in', '/runs/7f0e5a1c-9a53-4a3d-9df5-2f7c0f6f6c11?plate=map']) {
      const page = await request(api.server).get(path).set('accept', 'text/html').expect(200);
      expect(page.text).toContain('<title>Halfdeep</title>');
      expect(page.headers['cache-control']).toBe('no-cache');
      expect(page.headers['content-security-policy']).toContain("frame-ancestors 'none'");
    }
    await request(api.server).get('/main-OLDHASH1.js').set('accept', '*/*').expect(404);
    await request(api.server).get('/../package.json').expect(404);
  });

  it('are compressed; slices and streams are not', async () => {
    const { worthCompressing } = await import('../../apps/api/src/app');
    const of = (type: string) => worthCompressing({} as never, { getHeader: () => type } as never);
    expect(of('application/json; charset=utf-8')).toBe(true);
    expect(of('text/event-stream')).toBe(false);
    expect(of('application/octet-stream')).toBe(false);
  });
});
