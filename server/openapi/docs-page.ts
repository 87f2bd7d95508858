/** The readable page of the API: plain HTML made of the document, no script, nothing from elsewhere. */
import type { OpenApiDocument } from './document';
import { docsStyle } from './docs-style';

type Schema = {
  $ref?: string;
  type?: string | string[];
  description?: string;
  properties?: Record<string, Schema>;
  required?: string[];
  items?: Schema;
  enum?: unknown[];
  const?: unknown;
  anyOf?: Schema[];
  oneOf?: Schema[];
  allOf?: Schema[];
  additionalProperties?: Schema | boolean;
  default?: unknown;
};
type Content = Record<string, { schema?: Schema }>;
type Operation = {
  tags?: string[];
  summary?: string;
  description?: string;
  parameters?: { name: string; in: string; required?: boolean; description?: string; schema?: Schema }[];
  requestBody?: { content: Content };
  responses: Record<string, { description?: string; content?: Content }>;
};

function escapeHtml(text: string): string {
  return text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;');
}

/** Text with `code` in backticks. */
function prose(text: string): string {
  return escapeHtml(text).replaceAll(/`([^`]+)`/g, '<code>$1</code>');
}

/** One schema in a line or two, named ones as links. */
function shape(schema: Schema | undefined, depth = 0): string {
  if (schema === undefined) return 'anything';
  if (schema.$ref) {
    const name = escapeHtml(schema.$ref.split('/').pop() ?? '');
    return `<a href="#shape-${name}">${name}</a>`;
  }
  if (schema.const !== undefined) return `<code>${escapeHtml(JSON.stringify(schema.const))}</code>`;
  if (schema.enum) return schema.enum.map((v) => `<code>${escapeHtml(JSON.stringify(v))}</code>`).join(' | ');
  const choices = schema.anyOf ?? schema.oneOf;
  if (choices) return choices.map((choice) => shape(choice, depth)).join(' | ');
  if (schema.allOf) return schema.allOf.map((part) => shape(part, depth)).join(' &amp; ');
  if (schema.items) return `list of ${shape(schema.items, depth)}`;
  if (schema.properties) return depth > 0 ? members(schema, depth) : 'object';
  if (typeof schema.additionalProperties === 'object')
    return `map to ${shape(schema.additionalProperties, depth + 1)}`;
  return escapeHtml([schema.type ?? 'anything'].flat().join(' | '));
}

function members(schema: Schema, depth: number): string {
  const rows = Object.entries(schema.properties ?? {}).map(([name, member]) => {
    const fallback =
      member.default === undefined ? '' : `, else ${escapeHtml(JSON.stringify(member.default))}`;
    const optional = schema.required?.includes(name) ? '' : ` <small>may be left out${fallback}</small>`;
    const why = member.description ? `<br>${prose(member.description)}` : '';
    return `<li><code>${escapeHtml(name)}</code> ${shape(member, depth + 1)}${optional}${why}</li>`;
  });
  return `<ul class="members">${rows.join('')}</ul>`;
}

function contentLine(content: Content | undefined): string {
  return Object.entries(content ?? {})
    .map(([type, { schema }]) => `<div><code>${escapeHtml(type)}</code> ${shape(schema, 1)}</div>`)
    .join('');
}

function operation(path: string, method: string, op: Operation): string {
  const parameters = (op.parameters ?? []).map(
    (p) =>
      `<li><code>${escapeHtml(p.name)}</code> <small>${escapeHtml(p.in)}</small> ${shape(p.schema, 1)}` +
      `${p.required ? '' : ' <small>may be left out</small>'}${p.description ? `<br>${prose(p.description)}` : ''}</li>`,
  );
  const responses = Object.entries(op.responses).map(
    ([status, r]) =>
      `<li><strong>${escapeHtml(status)}</strong> ${prose(r.description ?? '')}${contentLine(
        status < '400' ? r.content : undefined,
      )}</li>`,
  );
  const title = `<code class="method">${method.toUpperCase()}</code> <code>${escapeHtml(path)}</code>`;
  return `<details><summary>${title}<span>${prose(op.summary ?? '')}</span></summary><div class="plate">
<p>${prose(op.description ?? '')}</p>
${parameters.length > 0 ? `<h4>Parameters</h4><ul>${parameters.join('')}</ul>` : ''}
${op.requestBody ? `<h4>Body</h4>${contentLine(op.requestBody.content)}` : ''}
<h4>Answers</h4><ul>${responses.join('')}</ul></div></details>`;
}

export function docsPage(document: OpenApiDocument): string {
  const byTag = new Map<string, string[]>();
  for (const [path, item] of Object.entries(document.paths ?? {})) {
    for (const [method, op] of Object.entries(item as Record<string, Operation>)) {
      const tag = op.tags?.[0] ?? 'Other';
      byTag.set(tag, [...(byTag.get(tag) ?? []), operation(path, method, op)]);
    }
  }
  const shapes = Object.entries((document.components?.schemas ?? {}) as Record<string, Schema>).map(
    ([name, schema]) =>
      `<section id="shape-${escapeHtml(name)}"><h3>${escapeHtml(name)}</h3>` +
      `${schema.properties ? members(schema, 1) : `<p>${shape(schema, 1)}</p>`}</section>`,
  );
  const sections = [...byTag].map(
    ([tag, ops]) => `<h2 id="tag-${escapeHtml(tag)}">${escapeHtml(tag)}</h2>${ops.join('\n')}`,
  );
  const contents = [...byTag.keys(), 'Shapes'].map(
    (tag) => `<a href="#tag-${escapeHtml(tag)}">${escapeHtml(tag)}</a>`,
  );
  return `<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1">
<title>Turnmark API</title><style>${docsStyle}</style></head>
<body><main><h1>Turnmark API <small>version ${escapeHtml(document.info.version)}</small></h1>
<p>${prose(document.info.description ?? '')}</p>
<p>The same for programs: <a href="/api/v1/openapi.json">openapi.json</a> (OpenAPI 3.1).</p>
<nav aria-label="Parts">${contents.join(' ')}</nav>
${sections.join('\n')}
<h2 id="tag-Shapes">Shapes</h2>${shapes.join('\n')}
</main></body></html>`;
}
