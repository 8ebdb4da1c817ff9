#pragma once
#include "mcu.h"
enum { SLOT_BATTERY, SLOT_WATER, SLOTS };
extern volatile uint16_t adc_dma[SLOTS];
