import type { Route } from '../http/route';
import { definitionRoutes } from './definitions';
import { dictionaryRoutes } from './dictionary';
import { erasureRoutes } from './erasure';
import { fileRoutes } from './files';
import { qualityRoutes } from './quality';
import { uploadRoutes } from './uploads';

export const sampleRoutes = (): Route[] => [...uploadRoutes(), ...fileRoutes(), ...definitionRoutes(), ...qualityRoutes(), ...dictionaryRoutes(), ...erasureRoutes()];
