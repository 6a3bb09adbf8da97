// node page_test.mjs RENDER_SAMPLE CHROMIUM: drives the report page in a browser. The pages come
// from render_sample, their data is invented.

import {finish} from './harness.mjs';

await import('./view_cases.mjs');
await import('./ruling_cases.mjs');
await import('./form_cases.mjs');
await finish();
