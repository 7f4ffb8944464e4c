/** The script of every page: reads the data that the page carries and shows them. */
import './page.css';
import { PAGE_DATA_ID, type PageData } from '../scenarios/page.ts';
import { CAUTION } from '../scenarios/summary.ts';
import { element } from './element.ts';
import { showFigure } from './figure-page.ts';
import { applyTheme } from './palette.ts';
import { screenTheme } from './paper.ts';
import { showRuns } from './runs-page.ts';

function showPage(data: PageData): void {
  applyTheme(screenTheme());
  const main = element('main');
  document.body.append(
    element('header', { class: 'page-head' }, element('h1', {}, element('bdi', {}, data.title))),
    main,
  );
  const caution = data.kind === 'runs' ? (data.runs[0]?.summary.caution ?? CAUTION) : data.caution;
  if (caution !== null) document.body.append(element('footer', { class: 'caution', role: 'note' }, caution));
  if (data.kind === 'runs') showRuns(main, data);
  else showFigure(main, data);
}

showPage(JSON.parse(document.getElementById(PAGE_DATA_ID)?.textContent ?? '') as PageData);
