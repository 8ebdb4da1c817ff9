/*
 * External 8-bit successive-approximation converter on the parallel bus.
 * Its reference pin takes HALF the span: 2.56 V there, 5.12 V full scale,
 * 20 mV a count.
 */
#ifndef HAL_PAR8_H
#define HAL_PAR8_H

#include <stdint.h>

#define PAR8_REF_PIN_MV 2560
#define PAR8_SPAN_MV    (2 * PAR8_REF_PIN_MV)
#define PAR8_COUNTS     256

enum { PAR8_RAIL12, PAR8_AERATOR, PAR8_LIGHT, PAR8_INPUTS };

void     par8_start(void);
uint16_t par8_mv(unsigned which);

#endif
