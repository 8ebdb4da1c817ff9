enum { EING_BECKEN = 1 };
uint16_t wandler_lesen(int eingang);
