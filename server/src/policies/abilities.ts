import type { DocumentAbility } from '@tallystone/contracts/documents/abilities';
import type { InventoryAbility } from '@tallystone/contracts/models/abilities';
import type { PeopleAbility } from '@tallystone/contracts/people/abilities';
import type { RecordAbility } from '@tallystone/contracts/record/abilities';
import type { ReviewAbility } from '@tallystone/contracts/versions/abilities';
import type { Actor } from '../models/person';
import type { Decision } from './decision';
import { canCreateModel, canListModels, looksInsideModels } from './models';
import { canInvite, canManagePeople, canReadPeople } from './people';
import { canReadRecord, canVerifyRecord, readsWholeRecord } from './record';

type Ability = PeopleAbility | RecordAbility | InventoryAbility | ReviewAbility | DocumentAbility;

/** What a person may do that hangs on no row: sent with the session. An entity adds its own here. */
const abilities: readonly (readonly [Ability, (person: Actor) => boolean])[] = [
  ['people.read', may(canReadPeople)],
  ['people.invite', may(canInvite)],
  ['people.manage', may(canManagePeople)],
  ['record.read', may(canReadRecord)],
  ['record.read-all', readsWholeRecord],
  ['record.verify', may(canVerifyRecord)],
  ['models.read', may(canListModels)],
  ['models.create', may(canCreateModel)],
  ['models.read-content', looksInsideModels],
  ['reviews.read', looksInsideModels],
  ['documents.read', looksInsideModels],
];

export const abilitiesOf = (person: Actor): string[] => abilities.filter(([, holds]) => holds(person)).map(([name]) => name);

function may(policy: (person: Actor) => Decision): (person: Actor) => boolean {
  return (person) => policy(person).allowed;
}
