/** The places of the top band; each is open to people with its ability, as the server says. */
export const places = [
  { path: '/models', label: 'Models', ability: 'models.read', key: 'm' },
  { path: '/reviews', label: 'Reviews', ability: 'reviews.read', key: 'v' },
  { path: '/documents', label: 'Documents', ability: 'documents.read', key: 'd' },
  { path: '/record', label: 'Record', ability: 'record.read', key: 'r' },
  { path: '/people', label: 'People', ability: 'people.read', key: 'p' },
] as const;
