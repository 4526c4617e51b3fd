// What a TypeScript program says with the generated types, and what a server answers to it.
// It is compiled beside `burntally.ts`, the generated client, and `examples.ts`, the contract's examples as typed
// values; run with a server's address it prints what was answered, by operation.

import createClient from "openapi-fetch";

import type { Budget, Design, Finding, Leg, Location, LocationAnswer, paths, Problem, Transfer } from "./burntally.ts";
import * as examples from "./examples.ts";

declare const process: { argv: string[]; stdout: { write(text: string): void } };

// A quantity is a number, or a text with its unit.
const written: Transfer["time_limit"][] = [5400, "90 min", null, undefined];
const place: Location = { kind: "orbit", body: "earth", altitude: "400 km" };
const stated: Leg = { kind: "flyby", delta_v: "12 m/s", splits: 2 };
const severities: Finding["severity"][] = ["error", "warning", "note"];

// @ts-expect-error a leg of no known kind
const unknown: Leg = { kind: "leap", delta_v: 12 };
// @ts-expect-error a field that the kind does not have
const misplaced: Leg = { kind: "flyby", delta_v: 12, periapsis: 60e3 };
// @ts-expect-error a site without its latitude
const incomplete: Location = { kind: "site", body: "earth" };
// @ts-expect-error a choice that there is none of
const unheard: Transfer["strategy"] = "three_burns";

/** Kinds narrow: each branch knows its own fields, and none is forgotten. */
function heightOf(location: LocationAnswer): number | undefined {
  switch (location.kind) {
    case "site":
      return location.altitude;
    case "orbit":
      return location.altitude ?? location.periapsis;
    case "hyperbola":
      return location.periapsis;
    default:
      return location satisfies never;
  }
}

/** Give the answer, which the types allow only where there is no problem. */
function told<Answer>(reply: { data?: Answer; error?: Problem; response: Response }): Answer {
  if (reply.data === undefined) {
    throw new Error(`${reply.response.status}: ${reply.error?.title}`);
  }
  return reply.data;
}

function problemOf(reply: { data?: Budget; error?: Problem }): Problem {
  if (reply.error === undefined) {
    throw new Error("this was to be refused");
  }
  return reply.error;
}

const tug = examples.create_budget_tug;
const unreadable: Design = { ...tug, vehicle: { ...tug.vehicle, payloads: [{ name: "relay", mass: "7 s" }] } };
const contradicting: Design = { ...tug, mission: { ...tug.mission, legs: [{ ...stated, paid_by: ["nobody"] }] } };

const client = createClient<paths>({ baseUrl: process.argv[2] ?? "" });
const path = { name: "earth" };

const budget = told(await client.POST("/v1/budgets", { body: tug }));
const end: LocationAnswer | undefined = budget.branches[0]?.end;

const answers = {
  create_budget: budget,
  compute_performance: told(await client.POST("/v1/performance", { body: examples.compute_performance_lifter })),
  plan_transfer: told(await client.POST("/v1/transfers", { body: examples.plan_transfer_raise })),
  list_bodies: told(await client.GET("/v1/bodies")),
  get_body: told(await client.GET("/v1/bodies/{name}", { params: { path } })),
  list_rules: told(await client.GET("/v1/rules")),
  get_rules: told(await client.GET("/v1/rules/{name}", { params: { path: { name: "esa-2012" } } })),
};
const problems = {
  unreadable: problemOf(await client.POST("/v1/budgets", { body: unreadable })),
  contradicting: problemOf(await client.POST("/v1/budgets", { body: contradicting })),
};
const height = end && heightOf(end);
process.stdout.write(JSON.stringify({ answers, problems, height }));
