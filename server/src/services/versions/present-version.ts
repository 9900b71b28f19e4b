import type { Gate, Version, VersionSummary } from '@tallystone/contracts/versions/schema';
import type { Actor } from '../../models/person';
import { abilitiesOnVersion, refusalsOnVersion } from '../../policies/versions';
import type { FoundVersion } from './find-version';

/** Who must do something next, in words. */
function waitingFor(version: FoundVersion): string | null {
  if (version.state === 'Submitted') return 'a validator to start';
  if (version.state === 'In development') return 'its modeller to submit';
  if (version.state !== 'In validation') return null;
  if (version.returned) return 'the modeller’s texts, then compliance';
  return version.concluded ? 'compliance to sign' : 'the validator to conclude';
}

export function presentVersionSummary(version: FoundVersion): VersionSummary {
  return {
    id: version.id,
    modelId: version.modelId,
    modelName: version.modelName,
    inventoryNumber: version.inventoryNumber,
    number: version.number,
    state: version.state,
    awaitingCompliance: version.state === 'In validation' && version.concluded,
    returned: version.returned,
    fitId: version.fitId,
    fitName: version.fitName,
    kept: version.kept,
    fingerprint: version.fingerprint,
    frozenBy: version.frozenBy,
    frozenAt: version.frozenAt.toISOString(),
    waitingFor: waitingFor(version),
    erased: version.erased,
  };
}

export function presentVersion(version: FoundVersion, gates: Gate[], person: Actor): Version {
  return {
    ...presentVersionSummary(version),
    specificationSha256: version.specificationSha256,
    resultSha256: version.resultSha256,
    dataSha256: version.dataSha256,
    codeVersion: version.codeVersion,
    note: version.note,
    intercept: version.intercept,
    lambda: version.lambda,
    acts: [...version.acts],
    gates,
    abilities: abilitiesOnVersion(person, version),
    refusals: refusalsOnVersion(person, version),
  };
}
