/**
 * Deep-groove ball bearings of standard size, open or shielded. Bore, outside diameter and width are those of
 * ISO 15. Ratings are typical of makers, from memory: check the maker's sheet before cutting metal.
 */
export interface StockBearing {
  readonly name: string;
  /** m. */
  readonly bore: number;
  readonly outside: number;
  readonly width: number;
  /** N, dynamic rating C. */
  readonly dynamicRating: number;
  /** N, static rating C0. */
  readonly staticRating: number;
}

export const STOCK_BEARING_SOURCE = "sizes ISO 15; ratings from memory, check the maker's sheet";

const size = (
  name: string,
  bore: number,
  outside: number,
  width: number,
  dynamicRating: number,
  staticRating: number,
): StockBearing => ({
  name,
  bore: bore * 1e-3,
  outside: outside * 1e-3,
  width: width * 1e-3,
  dynamicRating,
  staticRating,
});

export const STOCK_BEARINGS: readonly StockBearing[] = [
  size('623', 3, 10, 4, 540, 180),
  size('624', 4, 13, 5, 936, 290),
  size('625', 5, 16, 5, 1140, 380),
  size('626', 6, 19, 6, 2340, 950),
  size('607', 7, 19, 6, 2340, 950),
  size('608', 8, 22, 7, 3450, 1370),
  size('6000', 10, 26, 8, 4750, 1960),
  size('6001', 12, 28, 8, 5400, 2360),
  size('6002', 15, 32, 9, 5850, 2850),
  size('6003', 17, 35, 10, 6370, 3250),
  size('6004', 20, 42, 12, 9950, 5000),
  size('6005', 25, 47, 12, 11900, 6550),
  size('6006', 30, 55, 13, 13800, 8300),
  size('6200', 10, 30, 9, 5400, 2360),
  size('6202', 15, 35, 11, 8060, 3750),
  size('6204', 20, 47, 14, 13500, 6550),
  size('6206', 30, 62, 16, 20300, 11200),
  size('6208', 40, 80, 18, 32500, 19000),
  size('6800', 10, 19, 5, 1720, 840),
  size('6801', 12, 21, 5, 1920, 1040),
  size('6802', 15, 24, 5, 2080, 1260),
  size('6803', 17, 26, 5, 2230, 1460),
  size('6804', 20, 32, 7, 4000, 2470),
  size('6805', 25, 37, 7, 4300, 2950),
  size('6806', 30, 42, 7, 4700, 3650),
];

export const findStockBearing = (name: string): StockBearing | undefined =>
  STOCK_BEARINGS.find((bearing) => bearing.name === name);
