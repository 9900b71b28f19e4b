import type { Fit, FitSummary } from '@tallystone/contracts/fits/schema';
import type { Actor } from '../../models/person';
import { abilitiesOnFit } from '../../policies/fits';
import type { FoundFit } from './find-fit';

export function presentFitSummary(fit: FoundFit): FitSummary {
  const { choice } = fit;
  return {
    id: fit.id,
    modelId: fit.modelId,
    number: fit.number,
    name: fit.name,
    state: fit.state,
    runId: fit.runId,
    binningId: fit.binningId,
    binningName: fit.binningName,
    definitionId: fit.definitionId,
    mixing: fit.settings.mixing,
    inference: fit.settings.declined.method,
    acceptsOnlyId: fit.acceptsOnlyId,
    characteristics: fit.characteristics,
    choice: choice && {
      id: choice.id,
      index: choice.place,
      lambda: choice.lambda,
      kept: choice.kept,
      rule: choice.rule,
      reason: choice.reason,
      by: choice.by,
      at: choice.at,
    },
    stale: fit.stale,
    holdOutAuc: fit.holdOutAuc,
    problem: fit.problem,
    createdBy: fit.createdByName,
    createdAt: fit.createdAt.toISOString(),
    erased: fit.erased,
  };
}

export function presentFit(fit: FoundFit, person: Actor): Fit {
  return { ...presentFitSummary(fit), settings: fit.settings, revision: fit.revision, abilities: abilitiesOnFit(person, fit) };
}
