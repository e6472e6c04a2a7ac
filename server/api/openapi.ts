import swagger, { type SwaggerTransformObject } from '@fastify/swagger'
import { EXAMPLES } from './examples/all.ts'
import type { Api } from './api.ts'
import { COMPONENTS, componentSchemas, publishedRoute } from './published.ts'

/** Collects every route that is added after it, for the description of the API. */
export async function describeApi(app: Api, version: string): Promise<void> {
  await app.register(swagger, {
    openapi: {
      openapi: '3.1.0',
      info: {
        title: 'Stagewatt',
        version,
        description:
          'Race-day energy budgets for a solar race car. Scripts send the token of the owner’s link as "Authorization: Bearer …". Forecasts are estimates: posted limits, the rules of the event, the battery management system and licensed electrical practice come first.',
      },
      tags: [
        { name: 'cars', description: 'Cars' },
        { name: 'routes', description: 'Roads as points' },
        { name: 'races', description: 'Races, their days and stages' },
        { name: 'skies', description: 'Weather along the route' },
        { name: 'forecasts', description: 'Budgets' },
        {
          name: 'plans',
          description: 'The best speeds of a day, or of the days of a race together, for people, with bound and ranges',
        },
        { name: 'coast-down', description: 'Rolling and drag from logged runs' },
        { name: 'following', description: 'The budget that the crew follows on a day' },
        { name: 'readings', description: 'Trackers read in the car, and what they teach' },
        { name: 'sharing', description: 'Links that show one day’s budget' },
        { name: 'access', description: 'Coming in' },
        { name: 'service', description: 'The service itself' },
      ],
    },
    transform: ({ schema, url }) => ({ schema: publishedRoute({ ...schema }), url }),
    transformObject: withComponents,
  })
}

const withComponents: SwaggerTransformObject = (document) => {
  if (!('openapiObject' in document)) return document.swaggerObject
  const schemas = componentSchemas()
  for (const [name, { example }] of Object.entries(COMPONENTS))
    if (example !== undefined) schemas[name].examples = [EXAMPLES[example].document]
  return { ...document.openapiObject, components: { schemas } }
}
