// A tool as its author would write it against the generated types: what does the intake draw, and may it be believed?
import createClient from "openapi-fetch";
import type { components, paths } from "./contract.js";

// Answers are read as JSON; other media types of the same routes have types of their own.
type Layout = components["schemas"]["Layout"];
type Element = NonNullable<Layout["elements"]>[number];

type Media = "application/json" | "application/problem+json";

declare const process: { argv: string[] };

// The kind tells the types apart; one that is forgotten does not compile.
function describe(element: Element): string {
  switch (element.kind) {
    case "sink":
    case "source":
      return `${element.name} at ${element.at.join(", ")}`;
    case "line-sink":
    case "line-source":
      return `${element.name} from ${element.from.join(", ")} to ${element.to.join(", ")}`;
    case "vortex":
      return `${element.name} turns ${element.circulation}`;
    case "doublet":
      return `${element.name} with moment ${element.moment.join(", ")}`;
    default: {
      const forgotten: never = element;
      return forgotten;
    }
  }
}

const layout = {
  depth: 4,
  ambient: { velocity: [0.1, 0] },
  elements: [
    { kind: "sink", name: "intake", at: [0, 0], discharge: 2 },
    { kind: "source", name: "outfall", at: [3, 0], discharge: { value: 2, unit: "m3/s" } },
  ],
} satisfies Layout;

const client = createClient<paths, Media>({ baseUrl: process.argv[2] ?? "" });

const traced = await client.POST("/v1/withdrawal/trace", { body: { layout } });
if (traced.error !== undefined) throw new Error(traced.error.title);
const [intake] = traced.data.result.intakes;
if (intake === undefined) throw new Error("no intake in the answer");

// Exactly one way of saying where: another one beside it does not compile.
const sampled = await client.POST("/v1/field/sample", { body: { layout, at: { x: [5], y: [0] } } });
if (sampled.error !== undefined) throw new Error(sampled.error.title);

const refused = await client.POST("/v1/field/sample", { body: { layout: { depth: 0 }, at: { x: [5], y: [0] } } });
if (refused.error === undefined) throw new Error("a depth of zero was accepted");

console.log(
  JSON.stringify({
    elements: layout.elements.map(describe),
    recirculation: intake.recirculation_share,
    warnings: traced.data.warnings.map((warning) => warning.code),
    u: sampled.data.result.u,
    refusal: [refused.error.type, (refused.error.errors ?? []).map((error) => error.pointer)],
  }),
);
