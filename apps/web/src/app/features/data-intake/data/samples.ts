import { HttpClient, type HttpResourceRef, httpResource } from '@angular/common/http';
import { Injectable, type Signal, computed, inject } from '@angular/core';
import type { NewPermissionAct, ProtectedColumns } from '@tallystone/contracts/permissions/schema';
import type { DraftBalance, PartitionBalance } from '@tallystone/contracts/samples/balance';
import type { ColumnList, ColumnProfile, ColumnRole } from '@tallystone/contracts/samples/columns';
import type {
  Definition,
  DefinitionCounts,
  DefinitionList,
  DefinitionSummary,
  Draft,
  DraftCheck,
  DraftContent,
} from '@tallystone/contracts/samples/definition';
import type {
  ColumnQuality,
  ColumnQualityDetail,
  NewFlagAnswer,
  QualityFlag,
  QualityReport,
  QualityState,
} from '@tallystone/contracts/samples/quality';
import type { DoubtfulLines, Preview, PreviewRequest, ReadingChoices } from '@tallystone/contracts/samples/reading';
import type { Sample, SampleList, SampleSummary, UploadSummary } from '@tallystone/contracts/samples/schema';
import type { Run } from '@tallystone/contracts/runs/schema';
import { firstValueFrom } from 'rxjs';
import { type Tagged, idempotent, readTagged, saveTagged } from '../../../core/http/etag';

export type {
  ColumnList,
  ColumnProfile,
  ColumnQuality,
  ColumnQualityDetail,
  ColumnRole,
  Definition,
  DefinitionCounts,
  DefinitionSummary,
  DoubtfulLines,
  Draft,
  DraftCheck,
  DraftContent,
  Preview,
  QualityFlag,
  QualityReport,
  QualityState,
  ReadingChoices,
  Run,
  Sample,
  SampleList,
  SampleSummary,
  UploadSummary,
};

const of = (modelId: string, sampleId: string): string => `/api/models/${modelId}/samples/${sampleId}`;

export function sampleList(modelId: () => string): HttpResourceRef<SampleList | undefined> {
  return httpResource<SampleList>(() => `/api/models/${modelId()}/samples`);
}

export function oneSample(modelId: () => string, sampleId: () => string): HttpResourceRef<Sample | undefined> {
  return httpResource<Sample>(() => of(modelId(), sampleId()));
}

/** The sample while its file has not been read, and so has no columns and no draft; null otherwise, and while nothing is known of it. */
export function unreadOf(sample: HttpResourceRef<Sample | undefined>): Signal<Sample | null> {
  return computed(() => {
    const found = sample.hasValue() ? sample.value() : null;
    return found?.rows === null ? found : null;
  });
}

/** The doubtful lines that a reading which was refused found in the whole file; nothing is asked while `wanted` gives false. */
export function doubtfulLinesOf(
  modelId: () => string,
  sampleId: () => string,
  wanted: () => boolean,
): HttpResourceRef<DoubtfulLines | undefined> {
  return httpResource<DoubtfulLines>(() => (wanted() ? `${of(modelId(), sampleId())}/doubtful-lines` : undefined));
}

export function columnsOf(modelId: () => string, sampleId: () => string): HttpResourceRef<ColumnList | undefined> {
  return httpResource<ColumnList>(() => `${of(modelId(), sampleId())}/columns`);
}

export function definitionsOf(modelId: () => string, sampleId: () => string): HttpResourceRef<DefinitionList | undefined> {
  return httpResource<DefinitionList>(() => `${of(modelId(), sampleId())}/definitions`);
}

/** How each characteristic of a confirmed definition is spread by partition; nothing is asked while there is no definition. */
export function balanceOf(
  modelId: () => string,
  sampleId: () => string,
  definitionId: () => string | null,
): HttpResourceRef<PartitionBalance | undefined> {
  return httpResource<PartitionBalance>(() => {
    const id = definitionId();
    return id === null ? undefined : `${of(modelId(), sampleId())}/definitions/${id}/balance`;
  });
}

/** How each characteristic of the draft is spread by partition, as it was last compared; nothing is asked while it is not wanted. */
export function draftBalanceOf(
  modelId: () => string,
  sampleId: () => string,
  wanted: () => boolean,
): HttpResourceRef<DraftBalance | undefined> {
  return httpResource<DraftBalance>(() => (wanted() ? `${of(modelId(), sampleId())}/draft/balance` : undefined));
}

/** What of a confirmed definition is protected; nothing is asked while there is no definition. */
export function protectedOf(definitionId: () => string | null): HttpResourceRef<ProtectedColumns | undefined> {
  return httpResource<ProtectedColumns>(() => {
    const id = definitionId();
    return id === null ? undefined : `/api/sample-definitions/${id}/protected-columns`;
  });
}

export function qualityOf(modelId: () => string, sampleId: () => string): HttpResourceRef<QualityState | undefined> {
  return httpResource<QualityState>(() => `${of(modelId(), sampleId())}/quality`);
}

/** One column of the report; nothing is read while `column` gives null. */
export function columnQualityOf(
  modelId: () => string,
  sampleId: () => string,
  column: () => string | null,
): HttpResourceRef<ColumnQualityDetail | undefined> {
  return httpResource<ColumnQualityDetail>(() => {
    const name = column();
    return name === null ? undefined : { url: `${of(modelId(), sampleId())}/quality/column`, params: { column: name } };
  });
}

/** Changes samples. Every method rejects with a Problem. */
@Injectable({ providedIn: 'root' })
export class Samples {
  private readonly http = inject(HttpClient);

  columnQuality(modelId: string, sampleId: string, column: string): Promise<ColumnQualityDetail> {
    return firstValueFrom(this.http.get<ColumnQualityDetail>(`${of(modelId, sampleId)}/quality/column`, { params: { column } }));
  }

  list(modelId: string): Promise<SampleList> {
    return firstValueFrom(this.http.get<SampleList>(`/api/models/${modelId}/samples`));
  }

  preview(modelId: string, sampleId: string, choices: PreviewRequest): Promise<Preview> {
    return firstValueFrom(this.http.post<Preview>(`${of(modelId, sampleId)}/preview`, choices));
  }

  read(modelId: string, sampleId: string, choices: ReadingChoices, key: string): Promise<Run> {
    return firstValueFrom(this.http.post<Run>(`${of(modelId, sampleId)}/readings`, choices, { headers: idempotent(key) }));
  }

  discard(modelId: string, sampleId: string): Promise<unknown> {
    return firstValueFrom(this.http.delete(of(modelId, sampleId)));
  }

  draft(modelId: string, sampleId: string): Promise<Tagged<Draft>> {
    return firstValueFrom(readTagged<Draft>(this.http, `${of(modelId, sampleId)}/draft`));
  }

  saveDraft(modelId: string, sampleId: string, content: DraftContent, etag: string): Promise<Tagged<Draft>> {
    return firstValueFrom(saveTagged<Draft>(this.http, 'PUT', `${of(modelId, sampleId)}/draft`, content, etag));
  }

  check(modelId: string, sampleId: string): Promise<DraftCheck> {
    return firstValueFrom(this.http.post<DraftCheck>(`${of(modelId, sampleId)}/draft/check`, null));
  }

  /** Starts the comparison of the partitions that the saved draft gives. */
  compare(modelId: string, sampleId: string, revision: number, key: string): Promise<Run> {
    return firstValueFrom(
      this.http.post<Run>(`${of(modelId, sampleId)}/draft/balance`, { revision }, { headers: idempotent(key) }),
    );
  }

  confirm(modelId: string, sampleId: string, revision: number, key: string): Promise<Run> {
    return firstValueFrom(
      this.http.post<Run>(`${of(modelId, sampleId)}/definitions`, { revision }, { headers: idempotent(key) }),
    );
  }

  actOnProtected(definitionId: string, act: NewPermissionAct): Promise<ProtectedColumns> {
    return firstValueFrom(this.http.post<ProtectedColumns>(`/api/sample-definitions/${definitionId}/protected-columns`, act));
  }

  makeQuality(modelId: string, sampleId: string, key: string): Promise<Run> {
    return firstValueFrom(this.http.post<Run>(`${of(modelId, sampleId)}/quality`, null, { headers: idempotent(key) }));
  }

  answer(modelId: string, sampleId: string, answer: NewFlagAnswer): Promise<QualityState> {
    return firstValueFrom(this.http.post<QualityState>(`${of(modelId, sampleId)}/quality/answers`, answer));
  }
}
