#pragma once
#include <stdint.h>
uint16_t hw_aerator(void);
