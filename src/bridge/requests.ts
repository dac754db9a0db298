/** Every request from a page to its host, as schemas: what fits none of them is refused. */
import { z } from 'zod';

const ref = z.string().min(1).max(64);
const name = z.string().min(1).max(255);
const what = z.enum(['document', 'drawing']);
const many = 200;
const bytes = z.custom<Uint8Array>((v) => v instanceof Uint8Array, 'bytes are needed');
/** Relative, forward slashes, no step up, nothing hidden. */
const below = z
  .string()
  .max(400)
  .regex(/^(?![./\\])[^\\:*?"<>|]+$/)
  .refine((p) =>
    p.split('/').every((s) => s !== '' && s !== '.' && s !== '..' && ![...s].some((c) => c < ' ')),
  );

export const requestSchema = z.discriminatedUnion('ask', [
  z.strictObject({ ask: z.literal('start') }),
  z.strictObject({ ask: z.literal('open'), what, named: name.optional() }),
  z.strictObject({ ask: z.literal('list'), what }),
  z.strictObject({ ask: z.literal('open-recent'), ref }),
  z.strictObject({ ask: z.literal('recover'), id: ref, take: z.boolean() }),
  z.strictObject({
    ask: z.literal('choose-place'),
    suggested: name,
    partRef: ref.nullable(),
    partName: name,
    named: name.optional(),
  }),
  z.strictObject({
    ask: z.literal('save'),
    ref,
    text: z.string(),
    part: z.strictObject({ file: name, bytes }).nullable(),
    drawings: z.array(z.strictObject({ ref, bytes })).max(many),
  }),
  z.strictObject({
    ask: z.literal('place-drawings'),
    project: ref,
    drawings: z.array(z.strictObject({ file: z.string().min(1).max(4096), ref: ref.nullable() })).max(many),
  }),
  z.strictObject({
    ask: z.literal('export'),
    suggested: below,
    named: name.optional(),
    files: z.array(z.strictObject({ path: below, bytes })).min(1),
  }),
  z.strictObject({
    ask: z.literal('journal'),
    entry: z
      .strictObject({
        name,
        ref: ref.nullable(),
        text: z.string(),
        partFile: z.string().max(4096),
        partRef: ref.nullable(),
        partBytes: bytes.nullable(),
        drawings: z
          .array(
            z.strictObject({
              file: z.string().min(1).max(4096),
              ref: ref.nullable(),
              bytes: bytes.nullable(),
            }),
          )
          .max(many),
      })
      .nullable(),
  }),
  z.strictObject({ ask: z.literal('recent') }),
  z.strictObject({ ask: z.literal('dismiss'), what: z.string().min(1).max(40) }),
  z.strictObject({ ask: z.literal('title'), name: z.string().max(300), unsaved: z.boolean() }),
  z.strictObject({
    ask: z.literal('menu'),
    menus: z
      .array(
        z.strictObject({
          label: z.string().max(40),
          entries: z
            .array(
              z.union([
                z.literal('line'),
                z.strictObject({
                  id: z.string().max(60),
                  label: z.string().max(120),
                  keys: z.string().max(30).optional(),
                  enabled: z.boolean(),
                }),
              ]),
            )
            .max(60),
        }),
      )
      .max(10),
  }),
  z.strictObject({ ask: z.literal('close') }),
]);

export type Request = z.infer<typeof requestSchema>;
export type Reply = { ok: true; value: unknown } | { ok: false; problem: string; mend: string };
