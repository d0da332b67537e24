import { describe, expect, it } from "vitest";
import { isServerAway, routeUrl, sendRequest } from "#renderer/client/send-request.ts";
import { encodeError, TautlineError } from "#shared/errors.ts";

describe("sending a request", () => {
  it("fills path parameters with their encoded values and appends the query", () => {
    expect(routeUrl("readLog", { params: { specimen: "a/b", pass: "p 1" }, query: { from: "3" } })).toBe(
      "/api/passes/a%2Fb/p%201/log?from=3",
    );
    expect(() => routeUrl("readLog", { params: { specimen: "a" } })).toThrow("pass");
  });

  it("sends the token as a header and the body as JSON", async () => {
    let seen: RequestInit = {};
    const fetch = (_: string, init: RequestInit) => {
      seen = init;
      return Promise.resolve(new Response("{}"));
    };
    await sendRequest(fetch, "secret", "lookAtScan", { body: { path: "/x" } });
    expect(seen.method).toBe("POST");
    expect(seen.headers).toMatchObject({ "x-tautline-token": "secret", "content-type": "application/json" });
    expect(seen.body).toBe('{"path":"/x"}');
  });

  it("throws the server's own error with its tag and fields", async () => {
    const body = encodeError(new TautlineError("not-found", "There is no specimen x.", { what: "specimen", id: "x" }));
    const fetch = () => Promise.resolve(new Response(JSON.stringify(body), { status: 404 }));
    const failure = await sendRequest(fetch, "", "shelf", {}).catch((error: unknown) => error);
    expect(failure).toMatchObject({ tag: "not-found", message: "There is no specimen x.", fields: { id: "x" } });
    expect(isServerAway(failure)).toBe(false);
  });

  it("tells a server that is away from one that answers with an error", async () => {
    const fetch = () => Promise.reject(new TypeError("failed to fetch"));
    const failure = await sendRequest(fetch, "", "shelf", {}).catch((error: unknown) => error);
    expect(isServerAway(failure)).toBe(true);
  });
});
