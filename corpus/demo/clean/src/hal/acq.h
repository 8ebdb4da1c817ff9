/* The controller's own 12-bit converter: one scan, moved by DMA, endlessly. */
#ifndef HAL_ACQ_H
#define HAL_ACQ_H

#include <stdint.h>

#define ACQ_BITS        12
#define ACQ_COUNTS      (1 << ACQ_BITS)
#define ACQ_DIFF_COUNTS (ACQ_COUNTS / 2)    /* differential unit: one bit is the sign */
#define ACQ_CODE_MASK   0x0FFFu

/* order of the scan; the number is the converter input as well */
enum acq_input {
    IN_TANK = 0,
    IN_OXYGEN,
    IN_BATTERY,
    IN_PUMP,
    IN_TEMP,
    IN_INFLOW,
    IN_TURBIDITY,
    IN_SUMP,
    IN_SUPPLY,
    IN_SPARE,
    ACQ_INPUTS
};

extern volatile uint16_t acq_dma[ACQ_INPUTS];

void     acq_init(void);
uint16_t acq_code(enum acq_input in);
uint16_t acq_diff(void);
uint16_t acq_spare_noise(void);

#endif
