/**
 * Lets a thread read TypeScript as modules. Asked for by its short name, tsx serves a thread only through `require`, which turns every
 * import into a call of a getter: the engine then takes three times as long.
 */
import { register } from 'tsx/esm/api';

register();
