import type { Metadata } from 'next';
import { describeApi, describeSchemas, type OperationText, type SchemaText } from '../../../lib/http/openapi-text.ts';
import { PROBLEM_CODES } from '../../../lib/http/problem.ts';
import './docs.css';

export const metadata: Metadata = { title: 'API' };

/** The API for people, written on the server from the OpenAPI document. */
export default function ApiDocsPage() {
  const groups = describeApi();
  return (
    <main id="main" className="api-docs">
      <h1>API</h1>
      <Beginning />
      <nav aria-label="Groups of calls">
        <ul>
          {groups.map((group) => (
            <li key={group.name}>
              <a href={`#${group.id}`}>{group.name}</a>
            </li>
          ))}
          <li>
            <a href="#schemas">Shapes</a>
          </li>
          <li>
            <a href="#problems">Refusals</a>
          </li>
        </ul>
      </nav>
      {groups.map((group) => (
        <section key={group.name} id={group.id}>
          <h2>{group.name}</h2>
          {group.operations.map((operation) => (
            <Operation key={operation.id} operation={operation} />
          ))}
        </section>
      ))}
      <section id="schemas">
        <h2>Shapes</h2>
        {describeSchemas().map((schema) => (
          <Schema key={schema.id} schema={schema} />
        ))}
      </section>
      <Problems />
    </main>
  );
}

function Beginning() {
  return (
    <>
      <p>
        A script sends <code>Authorization: Bearer tw_…</code> with a token made in Settings. Names carry the unit, missing is null, dates
        are days in the district’s time zone. <code>units=us</code> changes names and values together. Any table also leaves as CSV: send{' '}
        <code>Accept: text/csv</code>, or put <code>.csv</code> after the path.
      </p>
      <p>
        For programs: <a href="/api/v1/openapi.json">OpenAPI 3.1 document</a>.
      </p>
      {/* biome-ignore lint/a11y/noNoninteractiveTabindex: a region that scrolls must be reachable from the keyboard */}
      <pre tabIndex={0}>
        <code>curl -H "Authorization: Bearer $TOKEN" "http://localhost:3000/api/v1/runs?season=2024"</code>
      </pre>
    </>
  );
}

function Operation({ operation }: { operation: OperationText }) {
  return (
    <article id={operation.id}>
      <h3>
        <code>
          {operation.method} {operation.path}
        </code>
      </h3>
      <p>{operation.summary}</p>
      {operation.paragraphs.map((paragraph) => (
        <p key={paragraph}>{paragraph}</p>
      ))}
      {operation.parameters.length > 0 && (
        <table>
          <caption>Parameters</caption>
          <thead>
            <tr>
              <th scope="col">Name</th>
              <th scope="col">In</th>
              <th scope="col">Takes</th>
              <th scope="col">What</th>
            </tr>
          </thead>
          <tbody>
            {operation.parameters.map((parameter) => (
              <tr key={`${parameter.place} ${parameter.name}`}>
                <th scope="row">
                  <code>{parameter.name}</code>
                </th>
                <td>{parameter.place}</td>
                <td>{parameter.type}</td>
                <td>{parameter.text}</td>
              </tr>
            ))}
          </tbody>
        </table>
      )}
      {operation.body && (
        <p>
          Body: <TypeText text={operation.body} />
        </p>
      )}
      <ul>
        {operation.answers.map((answer) => (
          <li key={answer.status}>
            <b>{answer.status}</b> {answer.text} {answer.type && <TypeText text={answer.type} />}
          </li>
        ))}
      </ul>
    </article>
  );
}

/** A type in words; a shape that has a name is a link to it. */
function TypeText({ text }: { text: string }) {
  const name = /^(list of )?([A-Z]\w*)$/.exec(text);
  if (!name) return <span>{text}</span>;
  return (
    <span>
      {name[1]}
      <a href={`#schema-${name[2]}`}>{name[2]}</a>
    </span>
  );
}

function Schema({ schema }: { schema: SchemaText }) {
  return (
    <article id={`schema-${schema.id}`}>
      <h3>{schema.id}</h3>
      {schema.text && <p>{schema.text}</p>}
      <table>
        <thead>
          <tr>
            <th scope="col">Member</th>
            <th scope="col">Holds</th>
            <th scope="col">What</th>
          </tr>
        </thead>
        <tbody>
          {schema.members.map((member) => (
            <tr key={member.name}>
              <th scope="row">
                <code>{member.name}</code>
              </th>
              <td>
                <TypeText text={member.type} />
              </td>
              <td>{member.text}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </article>
  );
}

function Problems() {
  return (
    <section id="problems">
      <h2>Refusals</h2>
      <p>
        A refusal is <code>application/problem+json</code> (RFC 9457): type, title, status, detail, and findings where rows or members are
        at fault.
      </p>
      <ul>
        {Object.entries(PROBLEM_CODES).map(([code, status]) => (
          <li key={code} id={`problem-${code}`}>
            <b>{status}</b> <code>{code}</code>
          </li>
        ))}
      </ul>
    </section>
  );
}
