/** The package ships no types; this is the part that is used. */
declare module 'ml-logistic-regression' {
  import type { Matrix } from 'ml-matrix';

  export default class LogisticRegression {
    constructor(options?: { numSteps?: number; learningRate?: number });
    classifiers: { weights: Matrix }[];
    train(features: Matrix, target: Matrix): void;
  }
}
