import { createPlanPool } from '../../../workers';

/** The app's one pool for planning beside the screen: it hires its workers only while a task is under way. */
export const planPool = createPlanPool(navigator.hardwareConcurrency || 2);
