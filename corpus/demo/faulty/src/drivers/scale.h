/* Scaling shared by the drivers of the on-chip inputs. */
#ifndef SCALE_H
#define SCALE_H

#include "../board/board.h"
#include "../hal/acq.h"

/* pin voltage in steps of 100 uV; fits 32 bits at every code */
#define ACQ_TO_DMV(code)  ((uint32_t)(code) * ACQ_VREF_MV * 10u / ACQ_COUNTS)

/* nearest instead of next lower */
#define DIV_NEAREST(n, d) (((n) + (d) / 2) / (d))

#endif
