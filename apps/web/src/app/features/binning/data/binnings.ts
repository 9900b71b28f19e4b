import { HttpClient, type HttpResourceRef, httpResource } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import type { Correlations } from '@tallystone/contracts/binnings/correlations';
import type { CharacteristicMonths } from '@tallystone/contracts/binnings/months';
import type { EditHistory } from '@tallystone/contracts/binnings/schema';
import type {
  Binning,
  BinningHistory,
  BinningList,
  BinningSummary,
  CharacteristicDetail,
  CharacteristicList,
  CharacteristicSummary,
  NewBinning,
  Reclass,
  SaveBins,
  SetInclusion,
} from '@tallystone/contracts/binnings/schema';
import type { OutOfTimeCover } from '@tallystone/contracts/out-of-time/schema';
import type { DefinitionList } from '@tallystone/contracts/samples/definition';
import type { SampleList } from '@tallystone/contracts/samples/schema';
import { firstValueFrom } from 'rxjs';
import { type Tagged, idempotent, readTagged, saveTagged } from '../../../core/http/etag';

export type {
  Binning,
  BinningHistory,
  BinningList,
  BinningSummary,
  CharacteristicDetail,
  CharacteristicList,
  CharacteristicSummary,
  AskedConstraints,
  Correlations,
  EditHistory,
};

export function binningsOf(modelId: () => string): HttpResourceRef<BinningList | undefined> {
  return httpResource<BinningList>(() => `/api/models/${modelId()}/binnings`);
}

export function binningOf(binningId: () => string): HttpResourceRef<Binning | undefined> {
  return httpResource<Binning>(() => `/api/binnings/${binningId()}`);
}

export function characteristicsOf(binningId: () => string): HttpResourceRef<CharacteristicList | undefined> {
  return httpResource<CharacteristicList>(() => `/api/binnings/${binningId()}/characteristics`);
}

export function correlationsOf(binningId: () => string): HttpResourceRef<Correlations | undefined> {
  return httpResource<Correlations>(() => `/api/binnings/${binningId()}/correlations`);
}

export function historyOf(binningId: () => string): HttpResourceRef<BinningHistory | undefined> {
  return httpResource<BinningHistory>(() => `/api/binnings/${binningId()}/edits`);
}

export function monthsOf(
  binningId: () => string,
  characteristicId: () => string,
): HttpResourceRef<CharacteristicMonths | undefined> {
  return httpResource<CharacteristicMonths>(() => `/api/binnings/${binningId()}/characteristics/${characteristicId()}/months`);
}

/** A confirmed definition that a binning can start from. */
export interface StartingPoint {
  readonly definitionId: string;
  readonly label: string;
}

/** Everything the pages ask of the server about binnings. Every method rejects with a Problem. */
@Injectable({ providedIn: 'root' })
export class Binnings {
  private readonly http = inject(HttpClient);

  start(modelId: string, binning: NewBinning, key: string): Promise<Binning> {
    return firstValueFrom(this.http.post<Binning>(`/api/models/${modelId}/binnings`, binning, { headers: idempotent(key) }));
  }

  readCharacteristic(binningId: string, characteristicId: string): Promise<Tagged<CharacteristicDetail>> {
    return firstValueFrom(
      readTagged<CharacteristicDetail>(this.http, `/api/binnings/${binningId}/characteristics/${characteristicId}`),
    );
  }

  saveCharacteristic(
    binningId: string,
    characteristicId: string,
    save: SaveBins,
    etag: string,
  ): Promise<Tagged<CharacteristicDetail>> {
    return firstValueFrom(
      saveTagged<CharacteristicDetail>(
        this.http,
        'PUT',
        `/api/binnings/${binningId}/characteristics/${characteristicId}`,
        save,
        etag,
      ),
    );
  }

  splitFineClass(binningId: string, characteristicId: string, edge: number): Promise<CharacteristicDetail> {
    return firstValueFrom(
      this.http.post<CharacteristicDetail>(`/api/binnings/${binningId}/characteristics/${characteristicId}/fine-edges`, { edge }),
    );
  }

  edits(binningId: string, characteristicId: string): Promise<EditHistory> {
    return firstValueFrom(this.http.get<EditHistory>(`/api/binnings/${binningId}/characteristics/${characteristicId}/edits`));
  }

  reclass(binningId: string, asked: Reclass): Promise<CharacteristicList> {
    return firstValueFrom(this.http.post<CharacteristicList>(`/api/binnings/${binningId}/reclassings`, asked));
  }

  /** For more than a few: the run that does it. */
  startReclassing(binningId: string, asked: Reclass, key: string): Promise<{ runId: string }> {
    return firstValueFrom(
      this.http.post<{ runId: string }>(`/api/binnings/${binningId}/reclassing-runs`, asked, { headers: idempotent(key) }),
    );
  }

  setInclusion(binningId: string, asked: SetInclusion): Promise<CharacteristicList> {
    return firstValueFrom(this.http.post<CharacteristicList>(`/api/binnings/${binningId}/inclusions`, asked));
  }

  calculateCorrelations(binningId: string, key: string): Promise<{ runId: string }> {
    return firstValueFrom(
      this.http.post<{ runId: string }>(`/api/binnings/${binningId}/correlations`, {}, { headers: idempotent(key) }),
    );
  }

  openOutOfTime(definitionId: string, reason: string): Promise<OutOfTimeCover> {
    return firstValueFrom(this.http.post<OutOfTimeCover>(`/api/sample-definitions/${definitionId}/out-of-time`, { reason }));
  }

  /** Confirmed definitions of the model's samples whose rows are there, latest first. */
  async startingPoints(modelId: string): Promise<StartingPoint[]> {
    const { samples } = await firstValueFrom(this.http.get<SampleList>(`/api/models/${modelId}/samples`));
    const defined = samples.filter((sample) => sample.definitions > 0 && sample.erased === null);
    const lists = await Promise.all(
      defined.map((sample) =>
        firstValueFrom(this.http.get<DefinitionList>(`/api/models/${modelId}/samples/${sample.id}/definitions`)),
      ),
    );
    return lists.flatMap(({ definitions }, index) =>
      definitions.map(({ id, number }) => ({ definitionId: id, label: `${defined[index].fileName}, definition ${number}` })),
    );
  }
}
