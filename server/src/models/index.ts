import type { Sequelize } from 'sequelize';
import { defineBinning } from './binning';
import { defineFit } from './fit';
import { defineInvitation } from './invitation';
import { defineModel } from './model';
import { definePerson } from './person';
import { defineRecord } from './record';
import { defineRun } from './run';
import { defineSample } from './sample';
import { defineScorecard } from './scorecard';
import { defineVersion } from './version';

/** Binds every model to a database; one database per process. An entity adds its own define function here. */
export function defineModels(sequelize: Sequelize): void {
  definePerson(sequelize);
  defineInvitation(sequelize);
  defineRecord(sequelize);
  defineRun(sequelize);
  defineModel(sequelize);
  defineSample(sequelize);
  defineBinning(sequelize);
  defineFit(sequelize);
  defineScorecard(sequelize);
  defineVersion(sequelize);
}
