import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { decodeFrame } from "#shared/api/frame.ts";
import { ERROR_HEADER, ROUTES, type RouteName, TOKEN_HEADER } from "#shared/api/routes.ts";
import type { ErrorBody } from "#shared/errors.ts";
import { type SamplePorts, SECRET, samplePorts } from "#test/contract/sample-ports.ts";
import { REFUSED, sampleRequests } from "#test/contract/sample-requests.ts";
import type { OpenShell, Sending, Shell } from "#test/contract/shells.ts";
import { SPECIMEN } from "#test/main/node/sample-library.ts";
import { samplePng } from "#test/main/node/study/sample-png.ts";

const JSON_TYPE = { "content-type": "application/json" };

/** What every shell must do alike. */
export function contractSuite(name: string, open: OpenShell): void {
  describe(`requests by ${name}`, () => {
    let sample: SamplePorts;
    let shell: Shell;
    const faults: unknown[] = [];
    beforeEach(async () => {
      faults.length = 0;
      sample = await samplePorts();
      shell = await open(sample.ports, (error) => void faults.push(error));
    });
    afterEach(async () => {
      await shell.close();
      await sample.close();
    });
    const post = (target: string, body: unknown, more: Sending = {}) =>
      shell.send(target, { method: "POST", body: JSON.stringify(body), headers: JSON_TYPE, ...more });

    it("serves the page's files with their types and a strict content policy", async () => {
      for (const [target, type] of [
        ["/", "text/html; charset=utf-8"],
        ["/index.html", "text/html; charset=utf-8"],
        ["/assets/page-1a2b.js", "text/javascript; charset=utf-8"],
        ["/assets/page-1a2b.css", "text/css; charset=utf-8"],
      ] as const) {
        const answer = await shell.send(target);
        expect([target, answer.status, answer.headers.get("content-type")]).toEqual([target, 200, type]);
        expect(answer.headers.get("x-content-type-options")).toBe("nosniff");
        expect(answer.headers.get("referrer-policy")).toBe("no-referrer");
        expectStrictPolicy(answer.headers.get("content-security-policy"));
        expect((await answer.arrayBuffer()).byteLength).toBe(Number(answer.headers.get("content-length")));
      }
    });

    it("answers HEAD as GET without a body, and opens no event stream for it", async () => {
      for (const target of ["/", "/assets/page-1a2b.js", "/api/hello", "/api/events?window=w1"]) {
        const head = await shell.send(target, { method: "HEAD" });
        expect([target, head.status]).toEqual([target, 200]);
        expect((await head.arrayBuffer()).byteLength).toBe(0);
      }
      const [head, get] = [await shell.send("/", { method: "HEAD" }), await shell.send("/")];
      for (const key of ["content-type", "content-length", "content-security-policy"]) {
        expect(head.headers.get(key)).toBe(get.headers.get(key));
      }
      await get.arrayBuffer();
      expect(sample.seen).toEqual([]);
    });

    it("answers 405 with the allowed methods where the address exists under others", async () => {
      for (const [method, target, allow] of [
        ["POST", "/", "GET, HEAD"],
        ["DELETE", "/assets/page-1a2b.js", "GET, HEAD"],
        ["POST", "/api/shelf", "GET, HEAD"],
        ["GET", "/api/engine/section", "POST"],
        ["PUT", `/api/specimens/${SPECIMEN}`, "GET, HEAD, PATCH, DELETE"],
        ["OPTIONS", "/api/intake", "POST"],
      ] as const) {
        const answer = await shell.send(target, { method });
        expect([target, answer.status, answer.headers.get("allow")]).toEqual([target, 405, allow]);
        expect(await errorOf(answer)).toMatchObject({ tag: "bad-request" });
      }
    });

    it("answers 404 with a tag for what is not there", async () => {
      for (const target of [
        "/none.html",
        "/assets/",
        "/assets",
        "/api",
        "/api/none",
        "/api/specimens/none",
        "/api/passes/none/none/log",
      ]) {
        const answer = await shell.send(target);
        expect([target, answer.status >= 400 && answer.status < 405]).toEqual([target, true]);
        expect((await errorOf(answer)).tag).toMatch(/not-found|bad-request/);
      }
    });

    it("gives no file outside the page's folder, whatever form the path takes", async () => {
      for (const target of [
        "/../secret.html",
        "/%2e%2e/secret.html",
        "/..%2fsecret.html",
        "/assets/..%2f..%2fsecret.html",
        "/%2e%2e%2fsecret.html",
        "/..%5csecret.html",
        "/..\\secret.html",
        "/%5c..%5csecret.html",
        "/assets/%2e%2e/%2e%2e/secret.html",
        "/....//secret.html",
        "//secret.html",
        "/%2fsecret.html",
        "/%252e%252e%252fsecret.html",
        "/index.html%00.js",
        "/%00",
        "/C:%5csecret.html",
        "/c:/secret.html",
        "/way-out.html",
        "/way-up/secret.html",
        "/%ff%fe",
        "/%",
        `/${"a/".repeat(2000)}x.html`,
      ]) {
        const answer = await shell.send(target);
        const text = await answer.text();
        expect([target, answer.status >= 400 && answer.status < 500]).toEqual([target, true]);
        expect(text).not.toContain(SECRET);
      }
      expect(faults).toEqual([]);
    });

    it("serves no ranges: a range asked for gets the whole file", async () => {
      const answer = await shell.send("/assets/page-1a2b.js", { headers: { range: "bytes=0-2" } });
      expect(answer.status).toBe(200);
      expect(answer.headers.get("accept-ranges")).toBeNull();
      expect(await answer.text()).toBe("export {};");
    });

    it("refuses another host, another origin and other sites' requests, and never opens itself to other origins", async () => {
      for (const [headers, status] of [
        [{ host: "localhost:80" }, 421],
        [{ host: "evil.example" }, 421],
        [{ host: `${new URL(shell.origin).hostname}.evil.example` }, 421],
        [{ host: `${new URL(shell.origin).hostname}:1` }, 421],
        [{ origin: "https://evil.example" }, 403],
        [{ origin: "null" }, 403],
        [{ origin: `${shell.origin}.evil.example` }, 403],
        [{ "sec-fetch-site": "cross-site" }, 403],
        [{ "sec-fetch-site": "same-site" }, 403],
      ] as const) {
        for (const target of ["/api/shelf", "/api/hello"]) {
          const answer = await shell.send(target, { headers });
          expect([headers, answer.status]).toEqual([headers, status]);
          expect(await errorOf(answer)).toMatchObject({ tag: "token-refused" });
          expect(answer.headers.get("access-control-allow-origin")).toBeNull();
        }
      }
      const own = await shell.send("/api/hello", { headers: { origin: shell.origin, "sec-fetch-site": "same-origin" } });
      expect(own.status).toBe(200);
      expect(own.headers.get("access-control-allow-origin")).toBeNull();
    });

    it("answers every route, and refuses every route without the run's token where one is needed", async () => {
      const { epoch, head } = await sample.ports.library.readLog(SPECIMEN, sample.pass, 0);
      for (const [route, request] of Object.entries(sampleRequests(sample.pass, { epoch, head }, sample.job, sample.study))) {
        const { method, path } = ROUTES[route as RouteName];
        const target = path.replace(/:([a-z]+)/g, (_, key: string) => request.path![key]!) + (request.query ?? "");
        const body = request.body === undefined ? {} : { body: JSON.stringify(request.body) };
        if (shell.needsToken) {
          for (const token of ["", "a-token-of-this-ruN", "a-token-of-this-run-", "a"]) {
            const refused = await shell.send(target, { method, ...body, headers: { [TOKEN_HEADER]: token } });
            expect([route, token, refused.status]).toEqual([route, token, 401]);
            expect((await errorOf(refused)).tag).toBe("token-refused");
          }
        }
        const answer = await shell.send(target, { method, ...body, headers: JSON_TYPE });
        const expected = REFUSED[route as RouteName];
        const found = answer.headers.get(ERROR_HEADER) ?? undefined;
        expect([route, found]).toEqual([route, expected]);
        // A superseded request is no failure: a browser would log every status from 400 as one.
        expect([route, answer.ok]).toEqual([route, expected === undefined || expected === "superseded"]);
        if (expected !== undefined) expect((await errorOf(answer)).tag).toBe(expected);
        await answer.body?.cancel().catch(() => undefined);
      }
      expect(faults).toEqual([]);
    });

    it("keeps a still picture without what programs write into it, and gives it back", async () => {
      const target = `/api/studies/${sample.study.study}/pictures`;
      const answer = await shell.send(target, { method: "POST", body: samplePng("made by somebody") });
      const { picture } = (await answer.json()) as { picture: string };
      const kept = await shell.send(`${target}/${picture}`);
      expect(kept.headers.get("content-type")).toBe("image/png");
      expect(Buffer.from(await kept.arrayBuffer())).toEqual(Buffer.from(samplePng()));
      const tooBig = await shell.send(target, { method: "POST", body: new Uint8Array(4 * 1024 * 1024 + 1) });
      expect([tooBig.status, (await errorOf(tooBig)).tag]).toEqual([400, "bad-request"]);
    });

    it("hands the engine what was asked and gives its frames back byte for byte", async () => {
      const { section } = sampleRequests(sample.pass, { epoch: "", head: { seq: 0, hash: "" } }, sample.job);
      const answer = await post("/api/engine/section", section.body);
      expect(sample.asked.get("section")).toEqual(section.body);
      const frame = decodeFrame<{ width: number }>(new Uint8Array(await answer.arrayBuffer()));
      expect(frame.header.width).toBe(2);
      expect([...frame.body]).toEqual([7, 8, 9, 10]);
    });

    it("refuses bodies that are no JSON or have another shape, naming the place", async () => {
      const { section, startIntake } = sampleRequests(sample.pass, { epoch: "", head: { seq: 0, hash: "" } }, sample.job);
      const wrong = (body: object, change: object) => JSON.stringify({ ...body, ...change });
      for (const [target, body, where] of [
        ["/api/engine/section", "{", "body"],
        ["/api/engine/section", "", "body.ticket"],
        ["/api/engine/section", "[]", "body"],
        ["/api/engine/section", wrong(section.body!, { slabMm: null }), "body.slabMm"],
        ["/api/engine/section", wrong(section.body!, { slabMm: -1 }), "body.slabMm"],
        ["/api/engine/section", wrong(section.body!, { slabMode: "sum" }), "body.slabMode"],
        ["/api/engine/section", wrong(section.body!, { more: 1 }), "body.more"],
        ["/api/engine/section", wrong(section.body!, { specimen: "../x" }), "body.specimen"],
        ["/api/engine/section", JSON.stringify(section.body).replace('"width":2', '"width":100000'), "body.plane.width"],
        ["/api/engine/section", JSON.stringify(section.body).replace('"width":2', '"width":1e999'), "body.plane.width"],
        ["/api/intake", wrong(startIntake.body!, { spacing: [0.04, 0, 0.04] }), "body.spacing[1]"],
        ["/api/intake", wrong(startIntake.body!, { spacing: [0.04] }), "body.spacing"],
        ["/api/intake", wrong(startIntake.body!, { name: "two\nlines" }), "body.name"],
        [`/api/specimens/${SPECIMEN}/passes`, JSON.stringify({ annotator: "" }), "body.annotator"],
        [`/api/passes/${SPECIMEN}/${sample.pass}/branches`, JSON.stringify({ lines: ["a\nb"], name: "n" }), "body.lines[0]"],
      ] as const) {
        const answer = await shell.send(target, { method: "POST", body, headers: JSON_TYPE });
        const error = await errorOf(answer);
        expect([target, answer.status, error.tag]).toEqual([target, 400, "bad-request"]);
        expect((error.fields as { where: string }).where.startsWith(where), `${error.message} (${where})`).toBe(true);
      }
      expect(faults).toEqual([]);
    });

    it("refuses a body over the limit", async () => {
      const big = new Uint8Array(16 * 1024 * 1024 + 1).fill(32);
      const answer = await shell.send("/api/scans/look", { method: "POST", body: big });
      expect(answer.status).toBe(400);
      expect((await errorOf(answer)).message).toMatch(/too large/);
    });

    it("answers a fault of the program with a tag alone, and reports it inside", async () => {
      const answer = await post("/api/scans/look", { path: "/fault" });
      expect(answer.status).toBe(500);
      const text = await answer.text();
      expect(JSON.parse(text)).toMatchObject({ tag: "internal" });
      for (const told of ["secret", "/home", ".ts", "Error:"]) expect(text).not.toContain(told);
      expect(faults).toHaveLength(1);
    });

    it("streams events as lines, begins with a beat and the jobs, and notices when the page goes", async () => {
      const gone = new AbortController();
      const answer = await shell.send("/api/events?window=w7", { signal: gone.signal });
      expect(answer.headers.get("content-type")).toContain("application/jsonl");
      const lines = linesOf(answer);
      expect(await lines.next()).toMatchObject({ value: { event: "beat" } });
      expect(await lines.next()).toMatchObject({ value: { event: "job", job: { id: sample.job, state: "done" } } });
      expect(sample.seen).toEqual(["w7"]);
      expect(sample.left).toEqual([]);
      gone.abort();
      await expect.poll(() => sample.left).toEqual(["w7"]);
    });

    it("gives an export without a path as a download, with what the format loses", async () => {
      const body = { specimen: SPECIMEN, pass: sample.pass, format: "tables" };
      const answer = await post("/api/export", body);
      expect(answer.headers.get("content-type")).toBe("application/zip");
      expect(answer.headers.get("content-disposition")).toBe("attachment; filename*=UTF-8''HB-07%20%C3%BCber.zip");
      expect(JSON.parse(decodeURIComponent(answer.headers.get("x-tautline-lost")!))).toEqual(["pins"]);
      expect([...new Uint8Array(await answer.arrayBuffer())]).toEqual([1, 2, 3]);
      const written = await post("/api/export", { ...body, path: "/out" });
      expect(await written.json()).toEqual({ written: ["/out"], lost: [] });
    });
  });
}

async function errorOf(answer: Response): Promise<ErrorBody> {
  return (await answer.json()) as ErrorBody;
}

function expectStrictPolicy(policy: string | null): void {
  const rules = new Map((policy ?? "").split("; ").map((rule) => [rule.split(" ")[0]!, rule.split(" ").slice(1)]));
  expect(rules.get("default-src")).toEqual(["'none'"]);
  expect(rules.get("script-src")).toEqual(["'self'"]);
  expect(rules.get("connect-src")).toEqual(["'self'"]);
  expect(rules.get("base-uri")).toEqual(["'none'"]);
  expect(rules.get("frame-ancestors")).toEqual(["'none'"]);
  expect(policy).not.toMatch(/unsafe|\*|https?:|data:|blob:/);
}

async function* linesOf(answer: Response): AsyncGenerator<unknown> {
  const decoder = new TextDecoder();
  let rest = "";
  for await (const piece of answer.body! as unknown as AsyncIterable<Uint8Array>) {
    rest += decoder.decode(piece, { stream: true });
    const lines = rest.split("\n");
    rest = lines.pop()!;
    for (const line of lines) yield JSON.parse(line);
  }
}
