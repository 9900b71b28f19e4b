import { existsSync, readFileSync } from 'node:fs';
import { dirname, join, relative } from 'node:path';
import { fileURLToPath } from 'node:url';
import ts from 'typescript';

/** An address of the client that shows a page. */
export interface ClientRoute {
  /** As the router writes it, from the origin: `/models/:modelId/fit/new`; `/**` for whatever nothing else answers. */
  readonly path: string;
  /** Where the page's component lies, from the client's source folder. */
  readonly page: string;
}

const source = fileURLToPath(new URL('../../apps/web/src/app/', import.meta.url));

/**
 * Every address of the client that shows a page, read from the text of the route files: the routes themselves import components, which
 * only the client's own compiler understands.
 *
 * @throws when a route is written in a way this does not read, so that none is missed in silence
 * @example clientRoutes().map(({ path }) => path); // ['/sign-in', …, '/models/:modelId/fit/new', …]
 */
export function clientRoutes(): readonly ClientRoute[] {
  return routesIn(join(source, 'app.routes.ts'), 'routes', '');
}

function routesIn(file: string, name: string, above: string): ClientRoute[] {
  const syntax = ts.createSourceFile(file, readFileSync(file, 'utf8'), ts.ScriptTarget.ES2022, true);
  for (const statement of syntax.statements) {
    if (!ts.isVariableStatement(statement)) continue;
    for (const { name: declared, initializer } of statement.declarationList.declarations) {
      if (declared.getText() === name && initializer) return routesOf(initializer, file, above);
    }
  }
  throw new Error(`${relative(source, file)} declares no ${name}`);
}

function routesOf(list: ts.Expression, file: string, above: string): ClientRoute[] {
  if (!ts.isArrayLiteralExpression(list)) throw unread(list, file);
  return list.elements.flatMap((element) => {
    if (!ts.isObjectLiteralExpression(element)) throw unread(element, file);
    return routesOfEntry(element, file, above);
  });
}

function routesOfEntry(entry: ts.ObjectLiteralExpression, file: string, above: string): ClientRoute[] {
  const parts = new Map<string, ts.Expression>();
  for (const property of entry.properties) {
    if (!ts.isPropertyAssignment(property)) throw unread(property, file);
    parts.set(property.name.getText(), property.initializer);
  }
  const segment = parts.get('path');
  if (!segment || !ts.isStringLiteral(segment)) throw unread(entry, file);
  const path = segment.text === '' ? above : `${above}/${segment.text}`;
  if (parts.has('redirectTo')) return [];
  const children = parts.get('children');
  if (children) return routesOf(children, file, path);
  const loaded = parts.get('loadChildren');
  if (loaded) {
    const { module, member } = importOf(loaded, file);
    return routesIn(module, member, path);
  }
  const component = parts.get('loadComponent');
  if (!component) throw unread(entry, file);
  return [{ path: path || '/', page: relative(source, importOf(component, file).module) }];
}

/** `() => import('./there').then((m) => m.Name)`: the file and the name. */
function importOf(arrow: ts.Expression, file: string): { module: string; member: string } {
  const call = ts.isArrowFunction(arrow) && ts.isCallExpression(arrow.body) ? arrow.body : null;
  const then = call && ts.isPropertyAccessExpression(call.expression) ? call.expression.expression : null;
  const from =
    then && ts.isCallExpression(then) && then.expression.kind === ts.SyntaxKind.ImportKeyword ? then.arguments[0] : null;
  const taken = call?.arguments[0];
  const member = taken && ts.isArrowFunction(taken) && ts.isPropertyAccessExpression(taken.body) ? taken.body.name.text : null;
  if (!from || !ts.isStringLiteral(from) || member === null) throw unread(arrow, file);
  const module = join(dirname(file), `${from.text}.ts`);
  if (!existsSync(module)) throw new Error(`${relative(source, file)} leads to ${from.text}, which is not there`);
  return { module, member };
}

function unread(node: ts.Node, file: string): Error {
  return new Error(`A route of ${relative(source, file)} is written in a way that is not read: ${node.getText().slice(0, 200)}`);
}
