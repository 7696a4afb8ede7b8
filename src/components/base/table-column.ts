export interface TableColumn {
  key: string;
  label: string;
  /** Printed once in the header; the cells hold bare figures. */
  unit?: string;
  align?: 'start' | 'end';
  sortable?: boolean;
  rowHeader?: boolean;
  /** Long words may break onto lines; short codes and figures stay on one. */
  wrap?: boolean;
}

export interface TableSort {
  key: string;
  direction: 'asc' | 'desc';
}
