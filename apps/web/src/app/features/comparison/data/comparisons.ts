import { httpResource } from '@angular/common/http';
import { Injectable } from '@angular/core';
import type { Comparison } from '@tallystone/contracts/comparison/schema';
import type { FitList } from '@tallystone/contracts/fits/schema';

/** Reads the comparison of fits of one model. */
@Injectable({ providedIn: 'root' })
export class Comparisons {
  fits(modelId: () => string) {
    return httpResource<FitList>(() => `/api/models/${modelId()}/fits`);
  }

  compare(modelId: () => string, fitIds: () => readonly string[]) {
    return httpResource<Comparison>(() => {
      const ids = fitIds();
      return ids.length < 2 ? undefined : { url: `/api/models/${modelId()}/comparison`, params: { fits: ids.join(',') } };
    });
  }
}
