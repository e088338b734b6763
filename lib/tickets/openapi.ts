import { z } from "zod";
import { AddNote, DeskAsk, Reply, UnitCoverAsk } from "./schema";

/** OpenAPI 3.1 of the API, its shapes generated from the zod schemas that check the requests. */
const shape = (s: z.ZodType) => z.toJSONSchema(s, { io: "input", unrepresentable: "any" });

const params = (s: z.ZodObject) =>
  Object.entries(s.shape).map(([name, field]) => ({
    name,
    in: "query",
    required: !(field as z.ZodType).safeParse(undefined).success,
    schema: shape(field as z.ZodType),
  }));
const inPath = (name: string, schema: object) => ({ name, in: "path", required: true, schema });

const problem = {
  description: "Problem details (RFC 9457)",
  content: { "application/problem+json": { schema: { $ref: "#/components/schemas/Problem" } } },
};
const done = (description: string) => ({
  description,
  content: { "application/json": { schema: { type: "object" } } },
});
const number = inPath("number", { type: "integer", minimum: 1 });
const serial = inPath("serial", { type: "string", maxLength: 80 });
const ifMatch = {
  name: "If-Match",
  in: "header",
  required: true,
  schema: { type: "string" },
  description: "ETag of the ticket as it was read",
};
const addText = (id: string, summary: string, body: z.ZodObject) => ({
  post: {
    operationId: id,
    summary,
    parameters: [number, ifMatch],
    requestBody: {
      required: true,
      content: { "application/json": { schema: shape(body.omit({ ticketId: true })) } },
    },
    responses: {
      "201": done("The reference of the new entry"),
      "400": problem,
      "404": problem,
      "412": problem,
      "428": problem,
    },
  },
});

export const API_PATHS = {
  "/api/v1/tickets": {
    get: {
      operationId: "listTickets",
      summary: "Open tickets by whom they wait on",
      parameters: params(DeskAsk),
      responses: { "200": done("Groups of tickets"), "401": problem },
    },
  },
  "/api/v1/tickets/{number}": {
    get: {
      operationId: "readTicket",
      summary: "One ticket with its record",
      parameters: [number],
      responses: { "200": done("The ticket; its version is the ETag"), "404": problem },
    },
  },
  "/api/v1/tickets/{number}/replies": addText("addReply", "Write to the customer", Reply),
  "/api/v1/tickets/{number}/notes": addText("addNote", "A note that no customer sees", AddNote),
  "/api/v1/units/{serial}": {
    get: {
      operationId: "readUnit",
      summary: "A unit by its serial",
      parameters: [serial],
      responses: { "200": done("The unit"), "404": problem },
    },
  },
  "/api/v1/units/{serial}/cover": {
    get: {
      operationId: "readCover",
      summary: "Cover of a unit on a day",
      parameters: [serial, ...params(UnitCoverAsk)],
      responses: { "200": done("Cover by clause and part"), "400": problem, "404": problem },
    },
  },
};

export const openApi = (origin: string) => ({
  openapi: "3.1.0",
  info: {
    title: "Mendbay",
    version: "1",
    description: "Warranty and RMA support desk. Requests carry the session's cookie.",
  },
  servers: [{ url: origin }],
  paths: API_PATHS,
  components: {
    schemas: {
      Problem: {
        type: "object",
        required: ["type", "title", "status"],
        properties: {
          type: { type: "string" },
          title: { type: "string" },
          status: { type: "integer" },
          detail: { type: "string" },
          instance: { type: "string" },
          code: { type: "string" },
          errors: { type: "object" },
        },
      },
    },
    securitySchemes: { session: { type: "apiKey", in: "cookie", name: "next-auth.session-token" } },
  },
  security: [{ session: [] }],
});
