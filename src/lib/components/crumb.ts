/** One step of the way home: a page's load gives `crumb: CrumbStep[]`, the last step being the page itself. */
export interface CrumbStep {
  label: string;
  href?: string;
}
