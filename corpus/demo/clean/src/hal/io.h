#ifndef HAL_IO_H
#define HAL_IO_H

#include "t32w80.h"

#define IO_PUMP     (1u << 4)
#define IO_CHARGER  (1u << 6)

#define io_pump_off()     (PORTB->CLEAR = IO_PUMP)
#define io_charger_off()  (PORTB->CLEAR = IO_CHARGER)

#endif
